"""How much longer than importing numpy and lark one question takes from a cold start. Run by hand."""

from __future__ import annotations

import subprocess
import sys
from statistics import median
from time import perf_counter

ROUNDS = 9
FLOOR = ["-c", "import numpy, lark"]
QUESTIONS = {
    "zinc in 0.5 M copper sulfate": ["-m", "redoxq", "ask", "zinc in 0.5 M copper sulfate"],
    "the same as JSON": ["-m", "redoxq", "ask", "zinc in 0.5 M copper sulfate", "--json"],
    "Cu+2 + 2 e- = Cu": ["-m", "redoxq", "ask", "Cu+2 + 2 e- = Cu"],
    "about Cu+2": ["-m", "redoxq", "ask", "about Cu+2"],
    "import redoxq": ["-c", "import redoxq"],
}


def seconds(arguments: list[str]) -> float:
    """Wall time of one fresh interpreter, s."""
    start = perf_counter()
    subprocess.run([sys.executable, *arguments], check=True, stdout=subprocess.DEVNULL)
    return perf_counter() - start


def main() -> None:
    """Take turns, so that a busy moment of the machine meets floor and question alike."""
    cases = {"floor: import numpy, lark": FLOOR, **QUESTIONS}
    taken: dict[str, list[float]] = {name: [] for name in cases}
    for _ in range(ROUNDS):
        for name, arguments in cases.items():
            taken[name].append(seconds(arguments))
    floor = median(taken["floor: import numpy, lark"])
    for name, times in taken.items():
        own = median(times)
        print(f"{name:32} {1000 * own:6.0f} ms   {own / floor:5.2f} of the floor   {1000 * (own - floor):+5.0f} ms")


if __name__ == "__main__":
    main()

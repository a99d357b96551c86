"""How long the conversation lets one wait, against importing numpy and lark. Run by hand."""

from __future__ import annotations

import subprocess
import sys
from statistics import median, quantiles
from time import perf_counter

from redoxq.jobs.answering import answer
from redoxq.show.text import render
from redoxq.talk.completion import suggestions
from redoxq.talk.session import Session

METALS = ("zinc", "iron", "copper", "nickel", "silver", "tin", "lead", "aluminium", "cadmium", "cobalt")
LIQUORS = ("0.5 M copper sulfate", "1 M HCl", "0.1 M NaOH", "3.5 wt% NaCl", "0.1 M NH3 + 0.1 M NH4Cl", "10 wt% FeCl3")


def floor() -> float:
    """Median wall time of a fresh interpreter that imports numpy and lark, s."""
    times = []
    for _ in range(5):
        start = perf_counter()
        subprocess.run([sys.executable, "-c", "import numpy, lark"], check=True)
        times.append(perf_counter() - start)
    return median(times)


def waits(sentences: list[str]) -> list[float]:
    """Time from each sentence to its text in one conversation, s."""
    session, times = Session(), []
    for sentence in sentences:
        start = perf_counter()
        render(answer(session.hear(sentence)), 96)
        times.append(perf_counter() - start)
    return times


def keystrokes(sentence: str) -> list[float]:
    """Time of completion after each letter, s."""
    times = []
    for end in range(1, len(sentence) + 1):
        start = perf_counter()
        suggestions(sentence[:end], ())
        times.append(perf_counter() - start)
    return times


def report(name: str, times: list[float], unit: float) -> None:
    """Print median and 95th percentile, and the median as a share of the floor."""
    high = quantiles(times, n=20)[-1]
    print(f"{name:24} median {1000 * median(times):7.1f} ms   95 % under {1000 * high:7.1f} ms   "
          f"{median(times) / unit:6.3f} of the floor")


def main() -> None:
    """Ask each pair of metal and liquor twice: as a first and as a later question."""
    unit = floor()
    sentences = [f"{metal} in {liquor}" for metal in METALS for liquor in LIQUORS]
    print(f"floor: import numpy, lark  {1000 * unit:.0f} ms")
    report("contact, first time", waits(sentences), unit)
    report("contact, again", waits(sentences), unit)
    report("completion, a letter", keystrokes("zinc in 0.5 M copper sulfate at 45 C"), unit)


if __name__ == "__main__":
    main()

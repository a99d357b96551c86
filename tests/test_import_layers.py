"""Imports point down the layers, never up and never in a circle; heavy libraries stay out of the program."""

from __future__ import annotations

import ast
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parent.parent / "redoxq"

# The lower, the smaller. Modules of one number may know each other.
LEVELS = {
    "__main__": 9, "cli": 8, "console": 7, "asking": 7, "show": 6, "talk": 5, "jobs": 4,
    "rules": 3, "thermo": 2, "matter": 1, "units": 0, "errors": 0, "parsers": 0, "grammar": 0, "data": 0,
}

# What is passed between the layers is all that a neighbour may see of jobs.
SEEN_OF_JOBS = {"show": {"redoxq.jobs.answers"}, "talk": {"redoxq.jobs.questions"}}

KEPT_OUT = {"pandas", "scipy", "pickle", "marshal", "chemicals", "thermo", "periodictable", "iapws", "mpmath"}

MODULES = sorted(path for path in PACKAGE.rglob("*.py") if path != PACKAGE / "__init__.py")


def layer(module: str) -> str:
    """The folder or module right below redoxq."""
    parts = module.split(".")
    return parts[1] if len(parts) > 1 else "redoxq"


def module_of(path: Path) -> str:
    return ".".join(["redoxq", *path.relative_to(PACKAGE).with_suffix("").parts])


def imported(path: Path) -> Iterator[str]:
    """Every module that a file imports, wherever in the file."""
    for node in ast.walk(ast.parse(path.read_text("utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: imports are absolute"
            folder = node.module or ""
            for alias in node.names:
                below = PACKAGE.parent.joinpath(*folder.split("."), alias.name)
                is_module = below.with_suffix(".py").exists() or below.is_dir()
                yield f"{folder}.{alias.name}" if is_module else folder


@pytest.mark.parametrize("path", MODULES, ids=module_of)
def test_imports_point_down(path: Path) -> None:
    own = layer(module_of(path))
    for name in imported(path):
        if name.split(".")[0] != "redoxq" or name == "redoxq":
            continue
        assert LEVELS[layer(name)] <= LEVELS[own], f"{module_of(path)} imports {name}"
        if layer(name) == "jobs" and own in SEEN_OF_JOBS:
            assert name in SEEN_OF_JOBS[own], f"{module_of(path)} imports {name}"
        if own == "show":
            assert layer(name) != "talk", f"{module_of(path)} imports {name}"


@pytest.mark.parametrize("path", MODULES, ids=module_of)
def test_no_heavy_or_unsafe_library(path: Path) -> None:
    roots = {name.split(".")[0] for name in imported(path)}
    assert not roots & KEPT_OUT
    called = {node.func.id for node in ast.walk(ast.parse(path.read_text("utf-8")))
              if isinstance(node, ast.Call) and isinstance(node.func, ast.Name)}
    assert not called & {"eval", "exec"}


def test_modules_make_no_circle() -> None:
    known = {module_of(path): {name for name in imported(path) if name.startswith("redoxq.")} for path in MODULES}
    while known:
        free = [name for name, needs in known.items() if not needs & known.keys() - {name}]
        assert free, f"these modules need each other: {sorted(known)}"
        for name in free:
            del known[name]


def test_every_layer_has_a_level() -> None:
    assert {layer(module_of(path)) for path in MODULES} <= LEVELS.keys()


def test_importing_redoxq_is_cheap() -> None:
    script = "import sys, redoxq; print(sorted({'numpy', 'lark', 'prompt_toolkit'} & sys.modules.keys()))"
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"

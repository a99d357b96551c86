"""The wheel and the editable install both hold the tables, rules and grammars, and both answer."""

from __future__ import annotations

import json
import os
import site
import subprocess
import sys
import sysconfig
import venv
import zipfile
from importlib.resources import files
from pathlib import Path
from shutil import copytree, ignore_patterns

import pytest

ROOT = Path(__file__).parent.parent
SENTENCE = "zinc in 0.5 M copper sulfate"
WANTED = {"data": ("*.csv", "*.rules"), "grammar": ("*.lark", "*.tables.json")}


def knowledge() -> set[str]:
    """Files of the two top-level folders, as they are called inside the package."""
    return {f"redoxq/{path.relative_to(ROOT).as_posix()}"
            for folder, patterns in WANTED.items() for pattern in patterns for path in (ROOT / folder).rglob(pattern)}


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A wheel built from a copy, so that no build folder is left in the checkout."""
    folder = tmp_path_factory.mktemp("wheel")
    copytree(ROOT, folder / "source", ignore=ignore_patterns(".*", "tests", "build", "*.egg-info", "__pycache__"))
    subprocess.run([sys.executable, "-m", "pip", "wheel", "--no-deps", "--no-build-isolation", "--no-index", "--quiet",
                    "--wheel-dir", folder, folder / "source"], check=True, capture_output=True, timeout=120)
    (built,) = folder.glob("redoxq-*.whl")
    return built


def test_the_wheel_holds_all_knowledge(wheel: Path) -> None:
    held = set(zipfile.ZipFile(wheel).namelist())
    assert len(knowledge()) > 40
    assert knowledge() - held == set()
    assert "redoxq/py.typed" in held


def test_the_wheel_holds_every_module_and_nothing_else(wheel: Path) -> None:
    held = {name for name in zipfile.ZipFile(wheel).namelist() if name.endswith(".py")}
    modules = {path.relative_to(ROOT).as_posix() for path in (ROOT / "redoxq").rglob("*.py")}
    assert held == modules | {"redoxq/data/__init__.py", "redoxq/grammar/__init__.py"}


def test_the_installed_wheel_answers(wheel: Path, tmp_path: Path) -> None:
    home = tmp_path / "home"
    # Its pip is that of the running environment, so that nothing is fetched.
    venv.create(home, with_pip=False)
    scripts = home / ("Scripts" if os.name == "nt" else "bin")
    own = Path(sysconfig.get_path("purelib", vars={"base": str(home), "platbase": str(home)}))
    subprocess.run([sys.executable, "-m", "pip", "--python", scripts / "python", "install", "--no-deps", "--no-index",
                    "--quiet", wheel], check=True, capture_output=True, timeout=120)
    # Numpy and lark are those of the running environment; a plain path file reads no editable redoxq in it.
    (own / "borrowed.pth").write_text("\n".join(site.getsitepackages()))
    environment = {key: value for key, value in os.environ.items() if key != "PYTHONPATH"}
    done = subprocess.run([scripts / "redoxq", "ask", SENTENCE, "--json"], cwd=tmp_path, env=environment,
                          capture_output=True, timeout=60)
    assert done.returncode == 0, done.stderr.decode()
    assert json.loads(done.stdout)["verdict"] == "attacked"
    script = "import redoxq.data; print(redoxq.__file__, redoxq.data.__file__)"
    where = subprocess.run([scripts / "python", "-c", script], cwd=tmp_path, capture_output=True, text=True,
                           check=True).stdout.split()
    assert all(Path(path).is_relative_to(own) for path in where)


def test_the_running_install_finds_its_knowledge() -> None:
    for name in knowledge():
        _, folder, *rest = name.split("/")
        assert files(f"redoxq.{folder}").joinpath(*rest).is_file(), name


def test_only_the_house_stands_at_the_top() -> None:
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True).stdout
    top = {name.split("/")[0] for name in listed.splitlines()}
    assert {name for name in top if not name.startswith(".")} <= {
        "redoxq", "grammar", "data", "tests", "README.md", "DEVELOPERS.md", "pyproject.toml", "LICENSE"}

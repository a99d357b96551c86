"""The conversation, through a pipe and in its parts for a terminal."""

from __future__ import annotations

import io
import os
import stat
from pathlib import Path

import pytest
from prompt_toolkit.history import InMemoryHistory

from redoxq.console import EXAMPLES, HELP, converse, history
from redoxq.errors import RangeError
from redoxq.jobs.questions import Question


def respond(question: Question) -> str:
    if "silver" in question.canonical:
        raise RangeError("out of reach")
    return f"asked: {question.canonical}"


def talk(text: str) -> tuple[int, str]:
    out = io.StringIO()
    return converse(respond, io.StringIO(text), out), out.getvalue()


def test_one_answer_a_line() -> None:
    status, out = talk("zinc in 1 M HCl at 25 C open to air\n\nabout Cu+2\n")
    assert status == 0
    assert out == "asked: zinc in 1 M HCl at 25 °C, open to air\n\nasked: about Cu+2 at 25 °C\n\n"


def test_names_given_are_remembered() -> None:
    assert "zinc in 1 M HCl" in talk("let dip = 1 M HCl\nzinc in dip\n")[1]


def test_errors_are_shown_and_the_conversation_goes_on() -> None:
    status, out = talk("zinc in 0.5 copper sulfate\nsilver in water\nabout Cu+2\n")
    assert status == 2
    assert "            ^^^^^^" in out
    assert "out of reach" in out
    assert out.endswith("asked: about Cu+2 at 25 °C\n\n")


def test_quit_ends_and_help_helps() -> None:
    assert talk("help\nquit\nabout Cu+2\n") == (0, HELP + "\n\n")


def test_examples_and_help_can_be_asked() -> None:
    shown = [line.strip() for line in HELP.splitlines() if line.startswith("  ")]
    assert len(shown) >= 7
    assert talk("\n".join([*EXAMPLES, *shown]))[0] == 0


def test_bytes_that_are_no_text_are_an_error() -> None:
    source = io.TextIOWrapper(io.BytesIO(b"zinc in \xff\xfe\nabout Cu+2\n"), encoding="utf-8")
    out = io.StringIO()
    assert converse(respond, source, out) == 2
    assert "asked: about Cu+2" in out.getvalue()


def test_history_is_for_its_owner_only(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path))
    history().append_string("zinc in water")
    path = tmp_path / "redoxq" / "history"
    assert "zinc in water" in path.read_text()
    assert stat.S_IMODE(os.stat(path).st_mode) == 0o600


def test_no_place_for_a_history_is_no_obstacle(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "file").write_text("")
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path / "file"))
    assert isinstance(history(), InMemoryHistory)


def test_a_history_that_vanishes_is_no_obstacle(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path))
    kept = history()
    (tmp_path / "redoxq" / "history").unlink()
    (tmp_path / "redoxq").rmdir()
    kept.append_string("zinc in water")
    assert kept.get_strings() == ["zinc in water"]

"""The README does what it says: sentences are answered, shown output is what comes out, commands name what exists."""

from __future__ import annotations

import doctest
import re
import tomllib
from pathlib import Path

import pytest

import redoxq
from redoxq.jobs.answers import Answer
from redoxq.show.text import render, render_error

ROOT = Path(__file__).parent.parent
README = (ROOT / "README.md").read_text("utf-8")


def blocks(language: str) -> list[str]:
    """The fenced blocks of one language."""
    return re.findall(rf"^```{language}\n(.*?)^```$", README, re.MULTILINE | re.DOTALL)


def transcripts() -> list[tuple[str, str]]:
    """Each sentence asked in a console block with what is shown under it."""
    return [pair for block in blocks("console") for pair in re.findall(
        r'^\$ redoxq ask "([^"]+)"\n(.*?)(?=^\$ |\Z)', block, re.MULTILINE | re.DOTALL)]


@pytest.mark.parametrize("block", blocks("sentences"))
def test_sentences_are_answered(block: str) -> None:
    session = redoxq.Session()
    for sentence in block.splitlines():
        answer = redoxq.ask(sentence, session)
        assert isinstance(answer, Answer)
        assert answer.summary


def test_a_contact_a_reaction_a_sheet_and_a_definition_are_shown() -> None:
    session = redoxq.Session()
    kinds = {redoxq.ask(sentence, session).kind for block in blocks("sentences") for sentence in block.splitlines()}
    assert {"contact", "reaction", "species", "liquor", "definition"} <= kinds


@pytest.mark.parametrize(("sentence", "shown"), transcripts())
def test_shown_output_is_what_comes_out(sentence: str, shown: str) -> None:
    try:
        printed = render(redoxq.ask(sentence), 96)
    except redoxq.RedoxqError as error:
        printed = render_error(sentence, error, 96)
    parts = [re.escape(part.strip("\n")) for part in re.split(r"^\.\.\.$", shown, flags=re.MULTILINE)]
    assert re.fullmatch(r".*?".join(parts), printed.strip("\n"), re.DOTALL), printed


def test_both_an_answer_and_an_error_are_shown() -> None:
    assert len(transcripts()) >= 2


def test_the_library_examples() -> None:
    block = "\n".join(blocks("python"))
    test = doctest.DocTestParser().get_doctest(block, {}, "README.md", "README.md", 0)
    assert len(test.examples) >= 6
    assert doctest.DocTestRunner().run(test).failed == 0


def test_two_commands_do_everything() -> None:
    commands = [line for block in blocks("sh") for line in block.splitlines()]
    assert len(commands) == 2
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["project"]
    answering, testing = commands
    assert "-m venv .venv" in answering
    assert ".venv/bin/redoxq ask " in answering
    assert project["scripts"]["redoxq"] == "redoxq.cli:main"
    assert "'.[dev]'" in testing
    assert testing.endswith("-m pytest -n 2")
    extras = {re.split(r"[<>=]", name)[0] for name in project["optional-dependencies"]["dev"]}
    assert {"pytest", "pytest-xdist"} <= extras


def test_keys_of_the_table_are_in_the_answers() -> None:
    table = README.split("## JSON")[1].split("## Library")[0]
    named = {key for row in re.findall(r"^\| (`.*?) \|", table, re.MULTILINE) for key in re.findall(r"`(\w+)`", row)}
    given = {"statement", "understood", "error", "code", "message", "at", "hint"}
    for sentence in ("zinc in 0.5 M copper sulfate", "Cu+2 + 2 e- = Cu", "about Cu+2", "about 1 M NaCl"):
        given |= set(redoxq.ask(sentence).to_dict())
    assert named - given == set()


def test_files_it_names_exist() -> None:
    for path in re.findall(r"`((?:data|tests)/[\w./]*|[A-Z]+(?:\.md)?)`", README):
        assert (ROOT / path).exists(), path

"""The typed conversation: one sentence a line, an answer under it."""

from __future__ import annotations

import os
import sys
from collections.abc import Callable, Iterable
from contextlib import suppress
from pathlib import Path
from typing import TYPE_CHECKING, Any, TextIO

from redoxq.errors import RedoxqError
from redoxq.jobs.questions import Question
from redoxq.show.text import render_error
from redoxq.talk.session import Session

if TYPE_CHECKING:
    from prompt_toolkit.history import History

Respond = Callable[[Question], str]
"""Answers a question as text."""

PROMPT = "dip> "

EXAMPLES = (
    "zinc in 0.5 M copper sulfate",
    "copper in 1 M zinc sulfate without air",
    "let rinse = 5 g/L CuSO4 + 20 g/L H2SO4 at 45 C",
)

GREETING = "\n".join(["For example:", *(f"  {example}" for example in EXAMPLES), 'Type "help" for more.'])

HELP = """\
Say what meets what, in one sentence:
  zinc, 20 g, in 2 L of 0.5 M CuSO4 + 0.1 M H2SO4 at 45 C under air
  iron in 10 wt% FeCl3 at 60 C, pH 1.2

Ask what is known of a species, a substance, a metal or a liquor:
  about Cu+2
  about 0.1 M NH3 + 0.1 M NH4Cl at 40 C

Write a reaction for its potential, energies and constant; it is balanced if it is not:
  Cu+2 + 2 e- = Cu at 40 C

Give a liquor a name and use it:
  let rinse = 5 g/L CuSO4 + 20 g/L H2SO4 at 45 C
  zinc in rinse at 60 C

Strengths: M, mM, mol/kg, g/L, mg/L, wt%, ppm, or N with its ion (1 N H2SO4 as H+).
Kept: at 45 C, pH 1.2, under air, oxygen, nitrogen, hydrogen or argon, without air.
A tab completes. "quit" or Ctrl-D ends."""

_HELP_WORDS = frozenset({"help", "?"})
_QUIT_WORDS = frozenset({"quit", "exit", "bye"})


def converse(respond: Respond, source: TextIO | None = None, out: TextIO | None = None) -> int:
    """Talk until the input ends.

    Parameters
    ----------
    respond : callable
        Takes a Question, returns its answer as text; may raise RedoxqError.
    source, out : text streams, optional
        Standard input and output unless given. A line editor with history and completion is used when both
        are a terminal; otherwise each line of the input gets its answer.

    Returns
    -------
    int
        Exit status: 0, or 2 when piped input held a sentence that could not be used.
    """
    source, out = source or sys.stdin, out or sys.stdout
    if source.isatty() and out.isatty():
        return _at_terminal(respond, out)
    return _piped(respond, source, out)


def _piped(respond: Respond, source: TextIO, out: TextIO) -> int:
    reconfigure = getattr(source, "reconfigure", None)
    if reconfigure is not None:
        reconfigure(errors="replace")
    session, status = Session(), 0
    try:
        for line in source:
            sentence = line.strip()
            if sentence.lower() in _QUIT_WORDS:
                break
            if sentence:
                text, understood = _reply(sentence, session, respond)
                status = status if understood else 2
                print(text, end="\n\n", file=out, flush=True)
    except BrokenPipeError:
        # The reader has left; a second complaint when the interpreter flushes would be a traceback.
        with suppress(OSError, ValueError):
            os.dup2(os.open(os.devnull, os.O_WRONLY), out.fileno())
    except KeyboardInterrupt:
        status = 130
    return status


def _at_terminal(respond: Respond, out: TextIO) -> int:
    from prompt_toolkit import PromptSession

    session = Session()
    editor: PromptSession[str] = PromptSession(**_editor_options(session))
    print(GREETING, file=out)
    while True:
        try:
            sentence = editor.prompt(PROMPT).strip()
            if sentence.lower() in _QUIT_WORDS:
                return 0
            if sentence:
                print(_reply(sentence, session, respond)[0], end="\n\n", file=out, flush=True)
        except KeyboardInterrupt:
            print('(stopped; "quit" or Ctrl-D ends)', file=out)
        except EOFError:
            return 0


def _reply(sentence: str, session: Session, respond: Respond) -> tuple[str, bool]:
    """The text under a sentence, and whether the sentence could be used."""
    if sentence.lower() in _HELP_WORDS:
        return HELP, True
    try:
        return respond(session.hear(sentence)), True
    except RedoxqError as error:
        return render_error(sentence, error), False


def _editor_options(session: Session) -> dict[str, Any]:
    from prompt_toolkit.completion import Completer, Completion
    from prompt_toolkit.document import Document
    from prompt_toolkit.output import ColorDepth

    from redoxq.talk.completion import suggestions

    class SentenceCompleter(Completer):
        def get_completions(self, document: Document, complete_event: object) -> Iterable[Completion]:
            typed = document.text_before_cursor
            for suggestion in suggestions(typed, tuple(session.definitions)):
                yield Completion(suggestion.text, start_position=suggestion.start - len(typed))

    return {
        "history": history(),
        "completer": SentenceCompleter(),
        "complete_while_typing": False,
        "color_depth": ColorDepth.DEPTH_1_BIT if os.environ.get("NO_COLOR") else None,
    }


def history() -> History:
    """Return the history of former sessions, or one that ends with this session when no file can be kept."""
    from prompt_toolkit.history import FileHistory, InMemoryHistory

    class KeptHistory(FileHistory):
        def store_string(self, string: str) -> None:
            # A full or vanished disk must not end the conversation.
            with suppress(OSError):
                super().store_string(string)

    path = _history_file()
    return InMemoryHistory() if path is None else KeptHistory(path)


def _history_file() -> Path | None:
    """A file that only its owner may read, in the state folder of the XDG base directories."""
    try:
        stated = os.environ.get("XDG_STATE_HOME", "")
        folder = Path(stated) if os.path.isabs(stated) else Path.home() / ".local" / "state"
        path = folder / "redoxq" / "history"
        path.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
        descriptor = os.open(path, os.O_CREAT | os.O_RDWR | os.O_APPEND, 0o600)
        try:
            os.fchmod(descriptor, 0o600)
        finally:
            os.close(descriptor)
    except (OSError, RuntimeError):
        return None
    return path

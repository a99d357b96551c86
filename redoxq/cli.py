"""The command `redoxq`: the conversation, or `redoxq ask` for one sentence or a stream of them."""

from __future__ import annotations

import argparse
import gc
import os
import sys
from collections.abc import Iterable, Sequence
from contextlib import suppress
from io import TextIOWrapper
from shutil import get_terminal_size

from redoxq import __version__
from redoxq.errors import RedoxqError

ANSWERED, UNUSABLE = 0, 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command.

    Parameters
    ----------
    arguments : sequence of str, optional
        Those of the process unless given.

    Returns
    -------
    int
        Exit status: 0 answered, 2 a sentence that could not be used.
    """
    options = _parser().parse_args(arguments)
    # Tables and rules stay for the whole run: looking through them for garbage only delays the first answer.
    gc.set_threshold(100_000, 50, 50)
    try:
        if options.command is None:
            return _talk()
        _never_choke(options.json)
        sentences = _stream() if options.sentence == "-" else [options.sentence]
        return _ask(sentences, options.json)
    except BrokenPipeError:
        # The reader has left; the interpreter must not complain when it flushes.
        with suppress(OSError, ValueError):
            os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return ANSWERED
    except KeyboardInterrupt:
        return 130


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(prog="redoxq", description="What happens when a metal meets a solution. "
                                     "Without a command it listens: one sentence a line.")
    parser.add_argument("--version", action="version", version=f"redoxq {__version__}")
    commands = parser.add_subparsers(dest="command", metavar="ask")
    ask = commands.add_parser("ask", help="answer one sentence, or each line of standard input",
                              description="Answer one sentence; `-` reads one sentence a line from standard input.")
    ask.add_argument("sentence", help='such as "zinc in 0.5 M copper sulfate", or -')
    ask.add_argument("--json", action="store_true", help="one JSON object a line")
    return parser


def _never_choke(as_json: bool) -> None:
    """Let what the output cannot hold, such as half a character of the command line, be written as an escape."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(encoding="utf-8" if as_json else None, errors="backslashreplace")


def _stream() -> Iterable[str]:
    if isinstance(sys.stdin, TextIOWrapper):
        sys.stdin.reconfigure(errors="replace")
    return (line.strip("\r\n") for line in sys.stdin if line.strip())


def _ask(sentences: Iterable[str], as_json: bool) -> int:
    from redoxq.jobs.answering import answer
    from redoxq.show.json_lines import answer_line, error_line
    from redoxq.show.text import render, render_error
    from redoxq.talk.session import Session

    session, status, width = Session(), ANSWERED, _width()
    for sentence in sentences:
        try:
            found = answer(session.hear(sentence))
            print(answer_line(sentence, found) if as_json else render(found, width), flush=True)
        except RedoxqError as error:
            status = UNUSABLE
            if as_json:
                print(error_line(sentence, error), flush=True)
            else:
                print(render_error(sentence, error, width), file=sys.stderr, flush=True)
    return status


def _talk() -> int:
    from redoxq.console import converse
    from redoxq.jobs.answering import answer
    from redoxq.show.text import render

    return converse(lambda question: render(answer(question), _width()))


def _width() -> int:
    return max(min(get_terminal_size((96, 24)).columns, 120), 20)


if __name__ == "__main__":
    sys.exit(main())

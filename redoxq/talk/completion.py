"""Completes a sentence: only with what the parser would accept next, and with known names."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache

from redoxq.errors import SentenceError
from redoxq.matter import names
from redoxq.talk.grammar import EXAMPLES, accepted_next, fixed_word
from redoxq.talk.sentences import normalised

MOST_WORDS = 4
"""Words of a name that are looked at from the end of what was typed."""

MOST_SUGGESTIONS = 40


@dataclass(frozen=True, slots=True)
class Suggestion:
    """A text that may replace what was typed from `start` on."""

    text: str
    start: int


def suggestions(typed: str, defined: tuple[str, ...] = ()) -> list[Suggestion]:
    """Return what the beginning of a sentence may go on with.

    Parameters
    ----------
    typed : str
        The sentence up to the cursor.
    defined : tuple of str
        Names of liquors that were defined.

    Returns
    -------
    list of Suggestion
        Words of the grammar first, then names; none when the beginning is already wrong.
    """
    found = dict.fromkeys([*_words(typed), *_names(typed, defined)])
    return list(found)[:MOST_SUGGESTIONS]


def _words(typed: str) -> Iterator[Suggestion]:
    """Fixed words and units that may follow; a unit may touch its number."""
    start = len(typed) - len(re.split(r"[\s,]|(?<=[\d.])(?=[A-Za-z°%])", typed)[-1])
    partial = typed[start:]
    for terminal in sorted(_accepted(typed[:start])):
        word = fixed_word(terminal)
        for text in EXAMPLES.get(terminal, (word,) if word else ()):
            if text.startswith(partial) and text != partial and not _is_sign(text):
                yield Suggestion(text, start)


def _is_sign(text: str) -> bool:
    """Commas, pluses and the like need no completion."""
    return not any(character.isalpha() or character == "%" for character in text)


def _names(typed: str, defined: tuple[str, ...]) -> Iterator[Suggestion]:
    """Names that begin with the last words, the longest run of words first."""
    starts = [match.start() for match in re.finditer(r"[^\s,]+", typed)]
    for start in starts[-MOST_WORDS:]:
        before, partial = typed[:start], typed[start:]
        accepted = _accepted(before)
        if "WORD" not in accepted or not partial[0].isalpha():
            continue
        wanted = partial.casefold()
        for name in _known(_awaits_metal(before), defined):
            if name.casefold().startswith(wanted) and name != partial:
                yield Suggestion(name, start)


def _accepted(before: str) -> frozenset[str]:
    if not before.strip():
        return accepted_next("")
    try:
        return accepted_next(normalised(before))
    except SentenceError:
        return frozenset()


def _awaits_metal(before: str) -> bool:
    """Whether a name said here is followed by `in`."""
    return "IN" in accepted_next(f"{before} x")


def _known(metal: bool, defined: tuple[str, ...]) -> tuple[str, ...]:
    return _metals() if metal else defined + _substances()


@cache
def _metals() -> tuple[str, ...]:
    return tuple(names.known_names("metal"))


@cache
def _substances() -> tuple[str, ...]:
    metals = frozenset(_metals())
    return tuple(name for name in names.known_names() if name not in metals)

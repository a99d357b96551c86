"""The grammar of sentences as a parser, and what it would hear next, in words."""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterable
from functools import cache

from lark import Lark
from lark.exceptions import UnexpectedInput, UnexpectedToken
from lark.lexer import PatternStr

from redoxq.errors import RedoxqError
from redoxq.parsers import parser
from redoxq.talk.reader import Reader

END = "$END"

EXAMPLES = {
    "STRENGTH_UNIT": ("M", "mol/kg", "g/L", "mg/L", "wt%", "ppm"),
    "VOLUME_UNIT": ("L", "mL", "m3"),
    "MASS_UNIT": ("g", "kg", "mg"),
    "TEMPERATURE_UNIT": ("C", "K", "F"),
    "GAS": ("air", "oxygen", "nitrogen", "hydrogen", "argon"),
    "AERATION": ("deaerated", "aerated"),
    "_PH": ("pH",),
}
"""What may be typed for terminals that stand for a few words."""

_KINDS = {
    END: "the end of the sentence",
    "WORD": "a name",
    "NUMBER": "a number",
    "FRACTION": "a number",
    "STRENGTH_UNIT": "a unit of strength",
    "VOLUME_UNIT": "a unit of volume",
    "MASS_UNIT": "a unit of mass",
    "TEMPERATURE_UNIT": "a unit of temperature",
    "GAS": "a gas",
    "AERATION": '"deaerated"',
    "_PH": "pH",
    "_ARROW": '"="',
    "COMMA": "a comma",
}
"""How the terminals that are not a fixed word are named to a person; the others stand for themselves."""

_ORDER = (
    "IN", "EQUAL", "WORD", "NUMBER", "STRENGTH_UNIT", "TEMPERATURE_UNIT", "MASS_UNIT", "VOLUME_UNIT", "GAS",
)


@cache
def sentence_grammar() -> Lark:
    """Return the parser of grammar/sentence.lark, built when first asked for."""
    return parser("sentence", Reader())


@cache
def _fixed_words() -> dict[str, str]:
    return {terminal.name: terminal.pattern.value for terminal in sentence_grammar().terminals
            if isinstance(terminal.pattern, PatternStr)}


def fixed_word(terminal: str) -> str | None:
    """Return the text of a terminal that is one fixed word, such as `under`; None for the others."""
    return _fixed_words().get(terminal)


_CONDITIONS = frozenset({"AT", "_PH", "UNDER", "WITHOUT", "WITH", "OPEN", "AERATION"})
"""Openings of the conditions of a liquor, told together where all of them may follow."""


def in_words(terminals: Collection[str]) -> list[str]:
    """Name what the parser would accept, most telling first, without repeats."""
    if set(terminals) >= _CONDITIONS:
        return [*in_words(set(terminals) - _CONDITIONS), "a condition (at 45 C, pH 2, without air)"]
    ranked = sorted(terminals, key=lambda name: (_ORDER.index(name) if name in _ORDER else len(_ORDER), name))
    return list(dict.fromkeys(_in_words(name) for name in ranked))


def _in_words(terminal: str) -> str:
    kind = _KINDS.get(terminal) or f'"{_fixed_words()[terminal]}"'
    examples = EXAMPLES.get(terminal, ())
    return f"{kind} ({', '.join(examples)})" if kind.startswith("a ") and examples else kind


def accepted_at(error: UnexpectedInput, text: str) -> frozenset[str]:
    """Return the terminals that the parser would have accepted where it stopped in a text."""
    if isinstance(error, UnexpectedToken):
        return frozenset(error.accepts or ())
    return accepted_next(text[:error.pos_in_stream])


def accepted_next(text: str) -> frozenset[str]:
    """Return the terminals that may follow the beginning of a sentence; none when it is already wrong."""
    parser = sentence_grammar().parse_interactive(text)
    try:
        parser.exhaust_lexer()
    except (UnexpectedInput, RedoxqError):
        return frozenset()
    accepts: Callable[[], set[str]] = parser.accepts
    return frozenset(accepts())


def listed(words: Iterable[str]) -> str:
    """Join words as a list in a sentence: `a, b or c`."""
    *most, last = words
    return f"{', '.join(most)} or {last}" if most else last

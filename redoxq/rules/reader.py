"""The words of a rule looked up: facts, values, units, effects and sources."""

from __future__ import annotations

import math
from collections.abc import Iterator
from difflib import get_close_matches
from functools import cache
from typing import Any, Final

from lark import Token, Transformer, v_args

from redoxq.matter.tables import read_table
from redoxq.rules.conditions import Among, Condition, Every, Flag, Range, Some
from redoxq.rules.facts import FACTS, FLAG, NUMBER, WORD, Fact, everyday_words, find_fact
from redoxq.rules.rule import HAPPENINGS, PACES, SETTLING, Effect

COMMON_PRACTICE: Final = "common practice"

UNITS: Final = {"K": ("K", 1.0, 0.0), "C": ("K", 1.0, 273.15), "V": ("V", 1.0, 0.0), "mV": ("V", 1e-3, 0.0),
                "mol/kg": ("mol/kg", 1.0, 0.0), "mmol/kg": ("mol/kg", 1e-3, 0.0)}
"""Unit a rule may write, with the unit of the fact, factor and offset."""


class Mistake(Exception):
    """Something wrong with a run of words, before its place in the file is known."""

    def __init__(self, message: str, words: Token | list[Token]) -> None:
        super().__init__(message)
        tokens = words if isinstance(words, list) else [words]
        self.message = message
        self.start = tokens[0].start_pos or 0
        self.end = tokens[-1].end_pos or self.start + 1


@v_args(inline=True)
class Reader(Transformer[Token, Any]):
    """Turns the parse of one rule into its parts."""

    def rule(self, identity: Token, condition: Condition, effects: tuple[Effect, ...], because: Token,
             source: list[Token]) -> tuple[str, Condition, tuple[Effect, ...], str, str]:
        named = _join(source)
        if named != COMMON_PRACTICE and named not in _publications():
            hint = f"or write: source {COMMON_PRACTICE}"
            raise Mistake(f"no publication {named} in the table of sources; {hint}", source)
        return str(identity), condition, effects, _text(because), named

    def phrase(self, *words: Token) -> list[Token]:
        return list(words)

    def text(self, quoted: Token) -> list[Token]:
        return [quoted]

    def some(self, *parts: Condition) -> Condition:
        return parts[0] if len(parts) == 1 else Some(parts)

    def every(self, *parts: Condition) -> Condition:
        return parts[0] if len(parts) == 1 else Every(parts)

    def negation(self, part: Condition) -> Condition:
        return part.negated()

    def flag(self, phrase: list[Token]) -> Condition:
        return Flag(_fact(phrase, FLAG).name)

    def is_value(self, phrase: list[Token], *values: list[Token]) -> Condition:
        fact = _fact(phrase, WORD)
        return Among(fact.name, frozenset(_word_value(fact, value) for value in values))

    def is_not_value(self, phrase: list[Token], *values: list[Token]) -> Condition:
        return self.is_value(phrase, *values).negated()

    def compared(self, phrase: list[Token], comparison: Token, quantity: list[Token]) -> Condition:
        words = "".join(comparison.split())
        if words in ("above", "atleast", ">", ">="):
            return _range(phrase, low=quantity, low_open=words in ("above", ">"))
        return _range(phrase, high=quantity, high_open=words in ("below", "<"))

    def between(self, phrase: list[Token], low: list[Token], high: list[Token]) -> Condition:
        return _range(phrase, low=low, high=high)

    def quantity(self, *tokens: Token) -> list[Token]:
        return list(tokens)

    def effects(self, *effects: Effect) -> tuple[Effect, ...]:
        return effects

    def effect(self, phrase: list[Token], text: Token | None = None) -> Effect:
        return _effect(phrase, "" if text is None else _text(text))


def _join(words: list[Token]) -> str:
    return " ".join(words)


def _text(quoted: Token) -> str:
    return " ".join(quoted.strip('"').split())


def _fact(phrase: list[Token], kind: str) -> Fact:
    fact = find_fact(_join(phrase))
    if fact is None:
        known = [*(name.replace("_", " ") for name in FACTS), *everyday_words()]
        raise Mistake(f'I know no fact called "{_join(phrase)}".{_nearest(_join(phrase), known)}', phrase)
    if fact.kind != kind:
        wanted = {WORD: "is ...", FLAG: "nothing more", NUMBER: "above, below, at least, at most or between"}
        raise Mistake(f'after "{_join(phrase)}" comes {wanted[fact.kind]}', phrase)
    return fact


def _word_value(fact: Fact, value: list[Token]) -> str:
    text = _join(value).strip('"')
    allowed = _vocabulary(fact.name)
    if allowed and text not in allowed:
        name = fact.name.replace("_", " ")
        raise Mistake(f'no {name} is called "{text}".{_nearest(text, sorted(allowed))}', value)
    return text


def _range(phrase: list[Token], low: list[Token] | None = None, high: list[Token] | None = None,
           low_open: bool = False, high_open: bool = False) -> Condition:
    fact = _fact(phrase, NUMBER)
    least, most = _number(fact, low, -math.inf), _number(fact, high, math.inf)
    if high and most <= fact.least and (high_open or most < fact.least):
        raise Mistake(f"{_join(phrase)} is never below {fact.least:g}", high)
    if least > most:
        raise Mistake("these limits stand the wrong way round", [*(low or []), *(high or [])])
    return Range(fact.name, least, most, low_open, high_open)


def _number(fact: Fact, quantity: list[Token] | None, absent: float) -> float:
    if quantity is None:
        return absent
    number, *written = quantity
    unit, factor, offset = UNITS.get(written[0], ("?", 1.0, 0.0)) if written else ("", 1.0, 0.0)
    if unit != fact.unit:
        takes = " or ".join(name for name, known in UNITS.items() if known[0] == fact.unit) or "no unit"
        raise Mistake(f"{fact.name.replace('_', ' ')} takes {takes}", quantity)
    return float(number) * factor + offset


def _effect(phrase: list[Token], text: str) -> Effect:
    kind, subject = str(phrase[0]), _join(phrase[1:])
    if _join(phrase) in SETTLING or (kind == "pace" and subject in PACES):
        if text:
            raise Mistake(f'"{_join(phrase)}" takes no text', phrase)
    elif (kind == "caution" and len(phrase) > 1) or (kind == "hazard" and len(phrase) > 2):
        if not text:
            raise Mistake(f"a {kind} needs a text in quotes", phrase)
    elif kind != "happening" or subject not in HAPPENINGS:
        known = ", ".join((*SETTLING, f"pace {'|'.join(PACES)}", f"happening {'|'.join(HAPPENINGS)}",
                           'caution TOPIC "text"', 'hazard GAS TOPIC "text"'))
        raise Mistake(f'I know no effect "{_join(phrase)}". Effects are: {known}.', phrase)
    if kind == "hazard":
        return Effect(kind, str(phrase[1]), text, _join(phrase[2:]))
    return Effect(kind, subject, text)


def _nearest(text: str, known: list[str]) -> str:
    near = get_close_matches(text, known, 3)
    return f" Nearest: {', '.join(near)}." if near else ""


@cache
def _publications() -> frozenset[str]:
    return frozenset(row["code"] for row in read_table("sources.csv"))


@cache
def _vocabulary(fact: str) -> frozenset[str]:
    """Words that a fact may be; empty where any will do."""
    if fact == "oxidant":
        return frozenset(_oxidants())
    if fact == "oxidant_kind":
        return frozenset(row["kind"] for row in read_table("couples.csv")) | {"metal ion"}
    if fact in ("metal", "plated"):
        return frozenset(row["symbol"] for row in read_table("elements.csv"))
    return frozenset()


def _oxidants() -> Iterator[str]:
    yield from (row["id"] for row in read_table("couples.csv"))
    yield from (f"{row['symbol']} ion" for row in read_table("elements.csv"))

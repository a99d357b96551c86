"""Conditions over facts: where they hold, their negation, and whether they ever can hold."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import Protocol

import numpy as np

from redoxq.rules.facts import Booleans, Facts


class Condition(Protocol):
    """Something that holds or not for each row of facts."""

    def holds(self, facts: Facts) -> Booleans:
        """Where it holds, shape (rows,)."""

    def negated(self) -> Condition:
        """The condition that holds where this one does not."""

    def alternatives(self) -> list[Alternative]:
        """The ways in which it can hold, told apart up to `MOST_ALTERNATIVES`; none for a contradiction."""


@dataclass(frozen=True, slots=True)
class Range:
    """A number within limits; a limit counts as inside unless it is said to be open."""

    fact: str
    low: float = -math.inf
    high: float = math.inf
    low_open: bool = False
    high_open: bool = False

    def holds(self, facts: Facts) -> Booleans:
        values = facts.numbers(self.fact)
        over = values > self.low if self.low_open else values >= self.low
        under = values < self.high if self.high_open else values <= self.high
        return over & under

    def negated(self) -> Condition:
        below = Range(self.fact, high=self.low, high_open=not self.low_open)
        above = Range(self.fact, low=self.high, low_open=not self.high_open)
        sides = tuple(side for side in (below, above) if math.isfinite(side.low) or math.isfinite(side.high))
        return Some(sides)

    def alternatives(self) -> list[Alternative]:
        return [] if self._is_empty() else [{self.fact: self}]

    def meet(self, other: Atom) -> Atom | None:
        """What both allow, or None."""
        assert isinstance(other, Range)
        low, low_open = max((self.low, self.low_open), (other.low, other.low_open))
        high, closed = min((self.high, not self.high_open), (other.high, not other.high_open))
        both = Range(self.fact, low, high, low_open, not closed)
        return None if both._is_empty() else both

    def _is_empty(self) -> bool:
        return self.low > self.high or (self.low == self.high and (self.low_open or self.high_open))


@dataclass(frozen=True, slots=True)
class Among:
    """A word that is (or, when `excluded`, is not) one of some values."""

    fact: str
    values: frozenset[str]
    excluded: bool = False

    def holds(self, facts: Facts) -> Booleans:
        found = facts.words(self.fact).among(self.values)
        return ~found if self.excluded else found

    def negated(self) -> Condition:
        return replace(self, excluded=not self.excluded)

    def alternatives(self) -> list[Alternative]:
        return [{self.fact: self}]

    def meet(self, other: Atom) -> Atom | None:
        """What both allow, or None."""
        assert isinstance(other, Among)
        if self.excluded and other.excluded:
            return Among(self.fact, self.values | other.values, excluded=True)
        if self.excluded:
            return other.meet(self)
        left = self.values - other.values if other.excluded else self.values & other.values
        return Among(self.fact, left) if left else None


@dataclass(frozen=True, slots=True)
class Flag:
    """Something that is so, or is not."""

    fact: str
    expected: bool = True

    def holds(self, facts: Facts) -> Booleans:
        flags = facts.flags(self.fact)
        return flags if self.expected else ~flags

    def negated(self) -> Condition:
        return replace(self, expected=not self.expected)

    def alternatives(self) -> list[Alternative]:
        return [{self.fact: self}]

    def meet(self, other: Atom) -> Atom | None:
        """What both allow, or None."""
        return self if other == self else None


@dataclass(frozen=True, slots=True)
class Every:
    """All parts hold."""

    parts: tuple[Condition, ...]

    def holds(self, facts: Facts) -> Booleans:
        where = np.ones(facts.rows, dtype=bool)
        for part in self.parts:
            if not where.any():
                break
            where = where & part.holds(facts)
        return where

    def negated(self) -> Condition:
        return Some(tuple(part.negated() for part in self.parts))

    def alternatives(self) -> list[Alternative]:
        found: list[Alternative] = [{}]
        for part in self.parts:
            options = part.alternatives()
            merged = (_merged(way, option) for way in found for option in options)
            found = [both for both in merged if both is not None]
            if len(found) > MOST_ALTERNATIVES:
                break
        return found


@dataclass(frozen=True, slots=True)
class Some:
    """At least one part holds."""

    parts: tuple[Condition, ...]

    def holds(self, facts: Facts) -> Booleans:
        where = np.zeros(facts.rows, dtype=bool)
        for part in self.parts:
            where = where | part.holds(facts)
        return where

    def negated(self) -> Condition:
        return Every(tuple(part.negated() for part in self.parts))

    def alternatives(self) -> list[Alternative]:
        return [way for part in self.parts for way in part.alternatives()]


Atom = Range | Among | Flag
Alternative = dict[str, Atom]

MOST_ALTERNATIVES = 500


def facts_named(condition: Condition) -> frozenset[str]:
    """Names of all facts that a condition asks about."""
    if isinstance(condition, Every | Some):
        return frozenset().union(*(facts_named(part) for part in condition.parts))
    assert isinstance(condition, Range | Among | Flag)
    return frozenset({condition.fact})


def _merged(left: Alternative, right: Alternative) -> Alternative | None:
    merged = dict(left)
    for fact, atom in right.items():
        met = atom if fact not in merged else merged[fact].meet(atom)
        if met is None:
            return None
        merged[fact] = met
    return merged

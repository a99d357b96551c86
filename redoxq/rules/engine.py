"""The engine: which rules fire on which rows of facts, and the verdict that follows for each contact."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from redoxq.rules.conditions import facts_named
from redoxq.rules.facts import Booleans, Facts
from redoxq.rules.rule import PACES, Effect, Rule

Positions = NDArray[np.intp]

VERDICTS: Final = ("immune", "passive", "undecided", "attacked")
"""A verdict's code is its position here."""

IMMUNE, PASSIVE, UNDECIDED, ATTACKED = range(4)

_ORDER = {"film": 0, "oxidant": 1, "happening": 2, "pace": 3, "hazard": 4, "caution": 5}


@dataclass(frozen=True, slots=True)
class Judgement:
    """What the rules make of many contacts.

    Attributes
    ----------
    rules : tuple of Rule
    fired : ndarray of bool, shape (rules, rows)
        Where each rule's condition holds.
    drives : ndarray of bool, shape (rows,)
        Where the oxidant stands above the metal, or may within the uncertainty.
    attacks : ndarray of bool, shape (rows,)
        Where it stands above by more than nothing, goes, and no film holds.
    contact_of_row : ndarray of int, shape (rows,)
    verdict : ndarray of int, shape (contacts,)
        Positions in `VERDICTS`.
    pace : ndarray of int, shape (contacts,)
        Positions in `PACES`, -1 where no rule says.
    """

    rules: tuple[Rule, ...]
    fired: Booleans
    drives: Booleans
    attacks: Booleans
    contact_of_row: Positions
    verdict: Positions
    pace: Positions

    def verdict_of(self, contact: int = 0) -> str:
        """Verdict of one contact in words."""
        return VERDICTS[self.verdict[contact]]

    def pace_of(self, contact: int = 0) -> str | None:
        """Pace of one contact in words, None where no rule says."""
        return PACES[self.pace[contact]] if self.pace[contact] >= 0 else None

    def rules_of(self, contact: int = 0, driven_only: bool = True) -> tuple[Rule, ...]:
        """Rules that fired on a contact: films first, then oxidants, then the rest, by id.

        Parameters
        ----------
        contact : int
        driven_only : bool
            Whether to leave out rules on oxidants that could not attack anyway.
        """
        rows = self.contact_of_row == contact
        counted = rows & self.drives if driven_only else rows
        names = np.flatnonzero(self.fired[:, counted].any(axis=1))
        return tuple(sorted((self.rules[i] for i in names), key=_rank))

    def rules_of_row(self, row: int) -> tuple[Rule, ...]:
        """Rules that fired on one row, in the same order."""
        return tuple(sorted((self.rules[i] for i in np.flatnonzero(self.fired[:, row])), key=_rank))

    def effects_of(self, kind: str, contact: int = 0) -> Iterator[tuple[Rule, Effect]]:
        """Happenings, hazards or cautions of a contact, each with the rule that says so."""
        for rule in self.rules_of(contact, driven_only=False):
            yield from ((rule, effect) for effect in rule.effects if effect.kind == kind)


def judge(rules: Sequence[Rule], facts: Facts, contact_of_row: ArrayLike | None = None) -> Judgement:
    """Settle what the rules say, whatever order they stand in.

    Parameters
    ----------
    rules : sequence of Rule
    facts : Facts
        A row for each oxidant tried on each contact; `driving` is E(oxidant) - E(metal), V, NaN where
        unknown. The metal's own ion is no oxidant of it and is left out.
    contact_of_row : array_like of int, shape (rows,), optional
        Which contact a row belongs to, counted from 0; one contact when left out.

    Returns
    -------
    Judgement

    Notes
    -----
    A row attacks when the oxidant stands above the metal, and is not idle (or acts all the same), and no
    film holds (or it breaks). A contact is immune when no oxidant stands above the metal, attacked when a row
    attacks by more than its uncertainty, undecided when only doubtful rows would attack, and passive when
    whatever stands, or may stand, above the metal is held. Rules that ask whether the metal is attacked are
    judged after that.
    """
    ordered = tuple(rules)
    given = np.asarray(0 if contact_of_row is None else contact_of_row, np.intp)
    contacts = np.broadcast_to(given, facts.rows)
    later = [position for position, rule in enumerate(ordered) if "attacked" in facts_named(rule.condition)]
    fired = np.zeros((len(ordered), facts.rows), dtype=bool)
    for position in set(range(len(ordered))).difference(later):
        fired[position] = ordered[position].condition.holds(facts)
    free = _free(ordered, fired)
    driving, doubt = facts.numbers("driving"), facts.numbers("driving_uncertainty")
    doubtful = ~(np.abs(driving) >= doubt)
    attacks = (driving > 0) & free
    known = facts.with_flags("attacked", attacks)
    for position in later:
        fired[position] = ordered[position].condition.holds(known)
    drives = (driving > 0) | doubtful
    verdict = _verdicts(attacks & ~doubtful, drives & free, drives, contacts)
    pace = _paces(ordered, fired, attacks, contacts)
    return Judgement(ordered, fired, drives, attacks, contacts, verdict, pace)


def _free(rules: tuple[Rule, ...], fired: Booleans) -> Booleans:
    """Rows where neither an idle oxidant nor a film is in the way."""
    idle, acts, holds, breaks = (_any(rules, fired, *effect) for effect in (
        ("oxidant", "idle"), ("oxidant", "acts"), ("film", "holds"), ("film", "breaks")))
    return (~idle | acts) & (~holds | breaks)


def _any(rules: tuple[Rule, ...], fired: Booleans, kind: str, subject: str) -> Booleans:
    where = np.zeros(fired.shape[1], dtype=bool)
    for rule, rows in zip(rules, fired, strict=True):
        if any(effect.kind == kind and effect.subject == subject for effect in rule.effects):
            where |= rows
    return where


def _verdicts(certain: Booleans, possible: Booleans, drives: Booleans, contacts: Positions) -> Positions:
    rank = np.where(drives, PASSIVE, IMMUNE)
    rank = np.where(possible, UNDECIDED, rank)
    rank = np.where(certain, ATTACKED, rank)
    return _highest(rank, contacts, IMMUNE)


def _paces(rules: tuple[Rule, ...], fired: Booleans, attacks: Booleans, contacts: Positions) -> Positions:
    """The fastest pace among the rows that attack; unsaid when a row without one might be faster."""
    unsaid = fast = PACES.index("fast")
    rows = np.full(fired.shape[1], -1)
    for pace, word in enumerate(PACES):
        rows[_any(rules, fired, "pace", word)] = pace
    said = _highest(np.where(attacks, rows, -1), contacts, -1)
    silent = _highest(np.where(attacks & (rows < 0), unsaid, -1), contacts, -1) == unsaid
    return np.where(silent & (said != fast), -1, said).astype(np.intp)


def _highest(values: Positions, contacts: Positions, least: int) -> Positions:
    highest = np.full(int(contacts.max(initial=-1)) + 1, least, dtype=np.intp)
    np.maximum.at(highest, contacts, values)
    return highest


def _rank(rule: Rule) -> tuple[int, str]:
    return min(_ORDER[effect.kind] for effect in rule.effects), rule.id

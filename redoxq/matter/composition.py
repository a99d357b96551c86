"""Oxidation states in a formula: the components that a liquor keeps apart.

A component is an element in one state (`Cu(II)`, `S(VI)`) or a group that stays whole (`CN`, `S2O3`, `CH3COO`).
Hydrogen ions and oxide oxygen are none: they come and go with water.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cache, lru_cache

from redoxq.errors import DataError
from redoxq.matter.formula import Formula, parse_formula
from redoxq.matter.states import states_of
from redoxq.matter.tables import read_table

_NUMERALS = {0: "0", 1: "I", 2: "II", 3: "III", 4: "IV", 5: "V", 6: "VI", 7: "VII", 8: "VIII", 9: "IX"}
_VALUES = {text: number for number, text in _NUMERALS.items()}
_COMPONENT = re.compile(r"([A-Z][a-z]?)\((-?)(0|[IVX]+)\)$")

SILENT = frozenset({"H(I)", "O(-II)"})
"""States that water accounts for."""


@dataclass(frozen=True, slots=True)
class Group:
    """Atoms that carry known states wherever they stand together."""

    text: str
    components: tuple[tuple[str, int], ...]
    charge: int
    kind: str
    name: str


def component_name(element: str, state: int) -> str:
    """`Cu(II)`, `N(-III)`, `O(0)`."""
    return f"{element}({'-' if state < 0 else ''}{_NUMERALS[abs(state)]})"


@lru_cache(maxsize=4096)
def split_component(component: str) -> tuple[str, int | None]:
    """Element and state of a component; a whole group is its own name and has no state."""
    found = _COMPONENT.match(component)
    if not found:
        return component, None
    return found[1], _VALUES[found[3]] * (-1 if found[2] else 1)


@lru_cache(maxsize=4096)
def component_atoms(component: str) -> Mapping[str, int]:
    """Atoms that a component takes up."""
    element, state = split_component(component)
    return {element: 1} if state is not None else dict(parse_formula(component).atoms)


@lru_cache(maxsize=256)
def broken_group(component: str) -> tuple[str, int] | None:
    """What a whole group that oxidises leaves behind, and how often; None for all others."""
    for row in read_table("groups.csv"):
        if row["components"] == component and row["breaks_into"]:
            name, _, number = row["breaks_into"].partition(":")
            return name, int(number)
    return None


@lru_cache(maxsize=4096)
def component_charge(component: str) -> int:
    """Charge of a component: its state, or that of the group."""
    _, state = split_component(component)
    if state is not None:
        return state
    return next(group.charge for group in groups() if group.text == component)


@cache
def groups() -> tuple[Group, ...]:
    """Groups of known states, the longest first."""
    found = []
    for row in read_table("groups.csv"):
        parts = [part.partition(":") for part in row["components"].split()]
        components = tuple((name, int(number or 1)) for name, _, number in parts)
        found.append(Group(row["group"], components, int(row["charge"]), row["kind"], row["name"]))
    return tuple(sorted(found, key=lambda group: -len(group.text)))


def components(formula: Formula, states: str | None = None) -> Mapping[str, int]:
    """Components of a formula with their counts.

    Parameters
    ----------
    formula : Formula
    states : str, optional
        `Cu(I):1 Fe(III):1 S(-II):2` where the formula does not tell them.

    Returns
    -------
    mapping of str to int

    Raises
    ------
    DataError
        When the states cannot be told.
    """
    if states:
        return _stated(states)
    return _components(formula)


def _stated(states: str) -> Mapping[str, int]:
    parts = (part.partition(":") for part in states.split())
    return {name: int(number or 1) for name, _, number in parts if name not in SILENT}


@lru_cache(maxsize=16384)
def _components(formula: Formula) -> Mapping[str, int]:
    if not formula.atoms:
        return {}
    for group in groups():
        if group.kind == "sole" and group.text == formula.bare and group.charge == formula.charge:
            return _visible(group.components)
    for kinds in (("group", "whole"), ("whole",)):
        found = _divided(formula, kinds)
        if found is not None:
            return _visible(found.items())
    raise DataError(f"The oxidation states in {formula.text} cannot be told.", hint="Fill the column `states`.")


def _visible(counts: Iterable[tuple[str, int]]) -> Mapping[str, int]:
    return {name: number for name, number in counts if name not in SILENT and number}


def _divided(formula: Formula, kinds: tuple[str, ...]) -> dict[str, int] | None:
    """Components when groups of some kinds are taken whole; None where the rest then makes no sense."""
    found: dict[str, int] = {}
    text, rest, charge = formula.bare, dict(formula.atoms), formula.charge
    for group in groups():
        if group.kind not in kinds:
            continue
        times, text = _taken(text, group)
        if times:
            for symbol, number in parse_formula(group.text).atoms:
                rest[symbol] -= number * times
            charge -= group.charge * times
            for name, number in group.components:
                found[name] = found.get(name, 0) + number * times
    if any(number < 0 for number in rest.values()):
        return None
    states = states_of({symbol: number for symbol, number in rest.items() if number}, charge)
    if states is None:
        return None
    for (symbol, state), number in states.items():
        name = component_name(symbol, state)
        found[name] = found.get(name, 0) + number
    return found


@lru_cache(maxsize=256)
def _pattern(group: str) -> re.Pattern[str]:
    """A group ends where no further digit or small letter belongs to its last symbol."""
    return re.compile(re.escape(group) + r"(?![a-z0-9])")


def _taken(text: str, group: Group) -> tuple[int, str]:
    """How often a group stands in the text of a formula, and the text without it."""
    times = 0
    if group.text not in text:
        return times, text
    while match := _pattern(group.text).search(text):
        times += _multiplicity(text, match.start(), match.end())
        text = text[: match.start()] + "_" * (match.end() - match.start()) + text[match.end() :]
    return times, text


def _multiplicity(text: str, start: int, end: int) -> int:
    """Product of the counts of the brackets around a place and of the coefficient before its part."""
    factor, depth = 1, 0
    for k in range(end, len(text)):
        if text[k] == ".":
            break
        if text[k] == "(":
            depth += 1
        elif text[k] == ")":
            if depth:
                depth -= 1
            else:
                digits = re.match(r"\d*", text[k + 1 :])
                factor *= int(digits[0]) if digits and digits[0] else 1
    part = text.rfind(".", 0, start)
    lead = re.match(r"\d*", text[part + 1 :])
    return factor * (int(lead[0]) if lead and lead[0] else 1)

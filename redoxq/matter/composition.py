"""Oxidation states in a formula: the components that a liquor keeps apart.

A component is an element in one state (`Cu(II)`, `S(VI)`) or a group that stays whole (`CN`, `S2O3`, `CH3COO`).
Hydrogen ions and oxide oxygen are none: they come and go with water.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache, lru_cache
from math import floor

from redoxq.errors import DataError
from redoxq.matter.formula import Formula, parse_formula
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
    pattern: re.Pattern[str]


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


@lru_cache(maxsize=4096)
def component_charge(component: str) -> int:
    """Charge of a component: its state, or that of the group."""
    _, state = split_component(component)
    if state is not None:
        return state
    return next(group.charge for group in groups() if (component, 1) in group.components)


@cache
def groups() -> tuple[Group, ...]:
    """Groups of known states, the longest first."""
    found = []
    for row in read_table("groups.csv"):
        parts = [part.partition(":") for part in row["components"].split()]
        components = tuple((name, int(number or 1)) for name, _, number in parts)
        # A group ends where no further digit or small letter belongs to its last symbol.
        pattern = re.compile(re.escape(row["group"]) + r"(?![a-z0-9])")
        found.append(Group(row["group"], components, int(row["charge"]), row["kind"], row["name"], pattern))
    return tuple(sorted(found, key=lambda group: -len(group.text)))


@cache
def usual_states() -> Mapping[str, int]:
    """State of an element where a formula leaves it open."""
    return {row["element"]: int(row["state"]) for row in read_table("states.csv")}


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
    text = formula.text.split("+")[0].split("-")[0] if formula.charge else formula.text
    found: dict[str, int] = {}
    for group in groups():
        if group.kind == "sole" and group.text == text:
            return {name: number for name, number in group.components if name not in SILENT}
    rest = dict(formula.atoms)
    charge = formula.charge
    for group in groups():
        if group.kind == "sole":
            continue
        times, text = _taken(text, group)
        if times:
            for symbol, number in parse_formula(group.text).atoms:
                rest[symbol] -= number * times
            charge -= group.charge * times
            for name, number in group.components:
                found[name] = found.get(name, 0) + number * times
    if any(number < 0 for number in rest.values()):
        raise DataError(f"The groups in {formula.text} overlap.", hint="Fill the column `states`.")
    for name, number in _lone(formula, {s: n for s, n in rest.items() if n}, charge).items():
        found[name] = found.get(name, 0) + number
    return {name: number for name, number in found.items() if name not in SILENT}


def _taken(text: str, group: Group) -> tuple[int, str]:
    """How often a group stands in the text of a formula, and the text without it."""
    times = 0
    while match := group.pattern.search(text):
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


def _lone(formula: Formula, atoms: dict[str, int], charge: int) -> dict[str, int]:
    """States of atoms outside groups: hydrogen +1 and oxide -2, one element by the charge, others as usual."""
    if set(atoms) == {"H"} and not charge and atoms["H"] == 2:
        return {"H(0)": 2}
    if len(atoms) == 1:
        ((symbol, number),) = atoms.items()
        return _shared(formula, symbol, number, charge)
    remaining = charge - atoms.get("H", 0) + 2 * atoms.get("O", 0)
    others = [symbol for symbol in atoms if symbol not in ("H", "O")]
    if not others:
        if remaining:
            raise DataError(f"The states in {formula.text} cannot be told.", hint="Fill the column `states`.")
        return {}
    open_one = _open_element(others)
    found: dict[str, int] = {}
    for symbol in others:
        if symbol != open_one:
            state = _usual(formula, symbol)
            found[component_name(symbol, state)] = atoms[symbol]
            remaining -= state * atoms[symbol]
    return {**found, **_shared(formula, open_one, atoms[open_one], remaining)}


def _open_element(symbols: list[str]) -> str:
    """The one whose state follows from the rest: what has no usual state, else what varies most."""
    unknown = [symbol for symbol in symbols if symbol not in usual_states()]
    if unknown:
        return unknown[0]
    ranked = sorted(symbols, key=lambda symbol: _FIXED.get(symbol, 0))
    return ranked[0]


_FIXED = dict.fromkeys(("Li", "Na", "K", "Rb", "Cs", "Mg", "Ca", "Sr", "Ba", "Al", "F", "Zn", "Cd", "Ag"), 2)
_FIXED |= dict.fromkeys(("Cl", "Br", "I", "S", "Se", "Te", "N", "P", "As", "C", "B", "Si"), 1)


def _usual(formula: Formula, symbol: str) -> int:
    state = usual_states().get(symbol)
    if state is None:
        raise DataError(f"The state of {symbol} in {formula.text} cannot be told.", hint="Fill the column `states`.")
    return state


def _shared(formula: Formula, symbol: str, number: int, total: int) -> dict[str, int]:
    """Split a total over the atoms of one element; a fraction goes to the two neighbouring states."""
    low = floor(total / number)
    above = total - low * number
    if not -9 < low < 9:
        raise DataError(f"The states in {formula.text} cannot be told.", hint="Fill the column `states`.")
    shares = {component_name(symbol, low): number - above}
    if above:
        shares[component_name(symbol, low + 1)] = above
    return {name: count for name, count in shares.items() if count}

"""Oxidation states of atoms that stand in no group: from the charge, the usual states and those that are known."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from redoxq.matter.tables import read_table

States = dict[tuple[str, int], int]
"""Number of atoms by symbol and state."""


WIDEST_GAP = 2
"""Between two states that one formula can hold side by side."""


@dataclass(frozen=True, slots=True)
class ElementStates:
    """States of an element: the usual one, where a formula leaves it open, and all known from water chemistry."""

    usual: int | None
    known: tuple[int, ...]


@cache
def element_states() -> Mapping[str, ElementStates]:
    """The table of states by symbol."""
    return {
        row["element"]: ElementStates(
            int(row["usual"]) if row["usual"] else None, tuple(int(text) for text in row["known"].split())
        )
        for row in read_table("states.csv")
    }


def states_of(atoms: Mapping[str, int], charge: int) -> States | None:
    """Oxidation states of atoms that carry a charge together.

    All but one element keep their usual state and the charge tells the last one: first a metal of several states, then
    the others, oxygen (peroxides) and hydrogen (hydrides) last. An average between two known states is shared between
    them where the other elements leave no choice: Fe3O4 holds iron(II) and iron(III), Pb3O4 lead(II) and lead(IV).

    Parameters
    ----------
    atoms : mapping of str to int
    charge : int

    Returns
    -------
    mapping of (str, int) to int, or None
        None where no sensible states come to that charge.
    """
    if not atoms:
        return None if charge else {}
    if len(atoms) == 1:
        ((symbol, number),) = atoms.items()
        return {(symbol, 0): number} if not charge else _shared(symbol, number, charge)
    for open_one in _by_freedom(atoms):
        found = _with_open(open_one, atoms, charge)
        if found is not None:
            return found
    return None


_UNKNOWN = ElementStates(None, ())


def _by_freedom(atoms: Mapping[str, int]) -> list[str]:
    """The elements in the order in which their state is left open."""

    def rank(symbol: str) -> int:
        states = element_states().get(symbol, _UNKNOWN)
        if symbol in ("O", "H"):
            return 4 if symbol == "O" else 5
        if states.usual is None:
            return 0
        if len(states.known) == 1:
            return 3
        return 1 if states.usual > 0 else 2

    return sorted(atoms, key=rank)


def _with_open(open_one: str, atoms: Mapping[str, int], charge: int) -> States | None:
    found: States = {}
    for symbol, number in atoms.items():
        if symbol != open_one:
            usual = element_states().get(symbol, _UNKNOWN).usual
            if usual is None:
                return None
            found[symbol, usual] = number
            charge -= usual * number
    shared = _shared(open_one, atoms[open_one], charge)
    if shared is None:
        return None
    bold = len(shared) > 1 or open_one in ("O", "H")
    if bold and not all(_settled(symbol) for symbol in atoms if symbol != open_one):
        return None
    return found | shared


def _settled(symbol: str) -> bool:
    return symbol in ("O", "H") or len(element_states()[symbol].known) == 1


def _shared(symbol: str, number: int, total: int) -> States | None:
    """Share a total charge over atoms of one element: all alike, or between the two nearest known states."""
    known = element_states().get(symbol, _UNKNOWN).known
    if total % number == 0 and total // number in known:
        return {(symbol, total // number): number}
    below = [state for state in known if state * number < total]
    above = [state for state in known if state * number > total]
    if not below or not above:
        return None
    low, high = max(below), min(above)
    if high - low > WIDEST_GAP:
        return None
    higher, odd = divmod(total - low * number, high - low)
    return None if odd else {(symbol, low): number - higher, (symbol, high): higher}

"""What kind of substance a formula is, and what is meant by one that is none."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache

from redoxq.matter.catalogue import catalogue
from redoxq.matter.formula import Formula
from redoxq.matter.ions import ions
from redoxq.matter.states import element_states
from redoxq.matter.tables import read_table

_BASES = frozenset({"NaOH", "KOH", "LiOH", "RbOH", "CsOH", "NH3", "Ca(OH)2", "Sr(OH)2", "Ba(OH)2"})
_GASES = {"H": "H2", "O": "O2", "N": "N2", "F": "F2", "Cl": "Cl2", "Br": "Br2", "I": "I2"}
_NOBLE = frozenset({"He", "Ne", "Ar", "Kr", "Xe", "Rn"})


def kind_of(formula: Formula) -> str:
    """salt, acid, base, gas, solute, solid, metal, ion or water."""
    text = formula.text
    if text in _kinds_of_names():
        return _kinds_of_names()[text]
    if formula.charge:
        return "ion"
    if text in catalogue().metals:
        return "metal"
    if text in _BASES:
        return "base"
    if len(formula.elements) == 1:
        return "gas" if formula.elements <= {"H", "O", "N", "F", "Cl"} | _NOBLE else "solid"
    if (formula.atoms[0][0] == "H" or text.endswith("COOH")) and not any(map(_makes_salts, formula.elements)):
        return "acid"
    return "gas" if any(species.phase == "g" for species in catalogue().all_of(text)) else "salt"


def _makes_salts(symbol: str) -> bool:
    """Whether an element stands in salts as nothing but a cation, such as sodium."""
    states = element_states().get(symbol)
    return states is not None and states.known in ((1,), (2,))


@cache
def _kinds_of_names() -> Mapping[str, str]:
    return {row["formula"]: row["kind"] for row in reversed(read_table("names.csv"))}


def meant_by(formula: Formula) -> str | None:
    """What is meant by an ion without its charge, by a lone atom of a gas or by two of a metal: `SO4`, `N`, `Cu2`."""
    if formula.text in _GASES:
        return _GASES[formula.text]
    if formula.charge or catalogue().all_of(formula.text) or formula.text in _kinds_of_names():
        return None
    near = [ion for ion in ions() if ion.symbols == formula.elements and ion.formula.bare == formula.text]
    if near:
        return near[0].text
    return formula.atoms[0][0] if len(formula.elements) == 1 and formula.atoms[0][1] > 1 else None

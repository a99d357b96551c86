"""One formula for what people write in several ways: `CH3COONa` and `NaC2H3O2`, `NaOCl` and `NaClO`."""

from __future__ import annotations

import re
from functools import lru_cache

from redoxq.errors import RedoxqError
from redoxq.matter.catalogue import catalogue
from redoxq.matter.composition import components
from redoxq.matter.formula import Formula, parse_formula
from redoxq.matter.ions import ions, salt_text

_BOUND_WATER = re.compile(r"\(H2O\)\d*")


@lru_cache(maxsize=4096)
def usual_form(formula: Formula) -> Formula:
    """The formula under which the tables know a substance, or the same formula.

    Parameters
    ----------
    formula : Formula

    Returns
    -------
    Formula
        Of a species, else of a salt of known ions, with the same atoms, charge and components; of an ion without the
        water bound to it.
    """
    if catalogue().all_of(formula.text):
        return formula
    bare_ion = _without_water(formula)
    if bare_ion is not None:
        return bare_ion
    for text in (*_species(formula), *_salts(formula)):
        other = parse_formula(text)
        if _alike(formula, other):
            return other if formula.phase is None else parse_formula(f"{text}({formula.phase})")
    return formula


def _without_water(formula: Formula) -> Formula | None:
    """An ion without the water bound to it, which goes uncounted in water: Cr+3 for [Cr(H2O)6]3+."""
    text = _BOUND_WATER.sub("", formula.text)
    if not formula.charge or text == formula.text or not catalogue().all_of(text):
        return None
    return parse_formula(text)


def _species(formula: Formula) -> list[str]:
    return [one.text for one in catalogue().of_elements(formula.elements) if one.symbols == formula.elements]


def _salts(formula: Formula) -> list[str]:
    if formula.charge or formula.water:
        return []
    near = [ion.formula for ion in ions() if ion.symbols <= formula.elements]
    cations = [ion for ion in near if ion.charge > 0]
    return [salt_text(cation, anion) for cation in cations for anion in near if anion.charge < 0]


def _alike(one: Formula, other: Formula) -> bool:
    if one.charge != other.charge or sorted(one.atoms) != sorted(other.atoms):
        return False
    try:
        return components(one) == components(other)
    except RedoxqError:
        return False

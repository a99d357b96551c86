"""Normality: how many equivalents of an ion one formula holds."""

from __future__ import annotations

from redoxq.errors import Place, RecipeError
from redoxq.matter.formula import Formula


def equivalents(formula: Formula, ion: Formula, at: Place) -> int:
    """Return the ions of one kind that a formula gives to water, times their charge.

    Parameters
    ----------
    formula : Formula
        Such as H2SO4.
    ion : Formula
        The ion that is counted, such as H+: 2 equivalents.
    at : Place
        Where the ion stands in the sentence.

    Raises
    ------
    RecipeError
        When the formula does not hold that ion.
    """
    count = _COUNTED.get(ion.text, _whole_ions)(formula, ion)
    if not count or not ion.charge:
        message = f"{formula.text} does not hold {ion.text}."
        raise RecipeError(message, at, "Name an ion that it gives to water.")
    return count * abs(ion.charge)


def _acidic_hydrogens(formula: Formula, ion: Formula) -> int:
    """Hydrogen written first (H2SO4), or that of carboxyl groups (CH3COOH)."""
    carboxyl = formula.text.count("COOH")
    if carboxyl:
        return carboxyl
    return formula.atoms[0][1] if formula.atoms and formula.atoms[0][0] == "H" else 0


def _hydroxides(formula: Formula, ion: Formula) -> int:
    atoms = dict(formula.atoms)
    return 0 if "C" in atoms or "OH" not in formula.text else min(atoms["O"], atoms["H"])


def _whole_ions(formula: Formula, ion: Formula) -> int:
    atoms = dict(formula.atoms)
    return min((atoms.get(element, 0) // number for element, number in ion.atoms), default=0)


_COUNTED = {"H+": _acidic_hydrogens, "OH-": _hydroxides}

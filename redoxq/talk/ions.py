"""Ions named in a recipe: whether their charges balance, and how many equivalents a formula holds."""

from __future__ import annotations

from collections.abc import Iterable

from redoxq.errors import Place, RecipeError
from redoxq.matter.formula import Formula, molar_mass
from redoxq.matter.recipes import Ingredient

_BASIS = {"g/L": "M", "mg/L": "M", "ppm": "wt%", "g/kg": "wt%"}
"""Units that come to one another by a factor and the molar mass."""

_PART = {"mg/L": 1e-3, "ppm": 1e-4, "g/kg": 0.1}

NEGLIGIBLE_CHARGE = 1e-6
"""Of all the charge in a recipe; what is left by the digits of typed figures."""


def require_neutral(ingredients: Iterable[Ingredient], at: Place) -> None:
    """Refuse a recipe of single ions whose charges do not cancel.

    Raises
    ------
    RecipeError
        With the sign that is left over.
    """
    net: dict[str, float] = {}
    total: dict[str, float] = {}
    for item in ingredients:
        basis = _BASIS.get(item.unit, item.unit)
        moles = item.amount if item.unit in ("M", "mol/kg") else _by_mass(item)
        net[basis] = net.get(basis, 0.0) + moles * item.formula.charge
        total[basis] = total.get(basis, 0.0) + moles * abs(item.formula.charge)
    for basis, charge in net.items():
        if abs(charge) > NEGLIGIBLE_CHARGE * total[basis]:
            sign = "positive" if charge > 0 else "negative"
            raise RecipeError(f"The ions of this liquor do not balance: {sign} charge is left over.", at,
                              "Name the salt, such as CuSO4, or give the other ion in the same unit.")


def _by_mass(item: Ingredient) -> float:
    return item.amount * _PART.get(item.unit, 1.0) / molar_mass(item.formula)


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

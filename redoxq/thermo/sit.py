"""Specific ion interaction theory: extended Debye-Hückel with one coefficient for each pair of ions."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cache

import numpy as np
from numpy.typing import NDArray

from redoxq.matter.catalogue import Species
from redoxq.matter.tables import read_table
from redoxq.thermo.constants import LN10, WATER_MOLAR_MASS
from redoxq.thermo.water import debye_huckel_slope

Array = NDArray[np.float64]

SIZE = 1.5
"""kg^0.5 mol^-0.5, the same for all ions; G. Scatchard (1976), kept by the NEA reviews."""

SALTING_OUT = 0.1
"""kg/mol, neutral molecules of gases and weak acids; complexes are left at a third of it."""

USUAL = {(1, 1): 0.03, (1, 2): -0.08, (1, 3): -0.15, (2, 1): 0.14, (2, 2): -0.08, (3, 1): 0.30, (3, 2): -0.05}
"""Mean coefficients (kg/mol) by the charges of cation and anion, where none is published for the pair."""

LARGEST_ERROR = 5.0
"""ln units; the coefficients are held where the liquor holds less water than ions, and so is their error."""


class SpecificInteraction:
    """Activity coefficients of one list of aqueous species.

    Parameters
    ----------
    species : sequence of Species

    References
    ----------
    J. N. Brønsted, J. Am. Chem. Soc. 44 (1922) 938; G. Scatchard, Chem. Rev. 19 (1936) 309; coefficients of the OECD
    NEA reviews (R. Guillaumont et al., 2003, appendix B).
    """

    name = "specific ion interaction (SIT)"
    reach = (
        "activities by specific ion interaction hold within a few per cent to 3.5 mol/kg ionic strength "
        "and are estimates beyond"
    )

    def __init__(self, species: Sequence[Species]) -> None:
        self.charge = np.array([one.formula.charge for one in species], dtype=float)
        self.interaction = _interaction(species)

    def ln_gamma(self, molality: Array, temperature: Array) -> tuple[Array, Array]:
        """See `ActivityModel.ln_gamma`; the water activity follows by the Gibbs-Duhem equation."""
        content = np.minimum(molality, 60.0)
        strength = 0.5 * content @ self.charge**2
        root = np.sqrt(strength)
        slope = LN10 * debye_huckel_slope(temperature)
        drag = content @ self.interaction
        ln_gamma = -(self.charge**2) * (slope * root / (1.0 + SIZE * root))[:, None] + LN10 * drag
        x = 1.0 + SIZE * root
        coulomb = -2.0 * slope / SIZE**3 * (x - 2.0 * np.log(x) - 1.0 / x)
        total = content.sum(axis=1) + coulomb + 0.5 * LN10 * np.einsum("rs,rs->r", drag, content)
        return np.clip(ln_gamma, -25.0, 25.0), np.clip(-total * WATER_MOLAR_MASS / 1000.0, -5.0, 0.2)

    def expected_error(self, ionic_strength: Array) -> Array:
        """Standard error of ln gamma of a singly charged ion, shape (rows,)."""
        error: Array = np.minimum(0.01 + LN10 * 0.03 * np.asarray(ionic_strength), LARGEST_ERROR)
        return error


@cache
def coefficients() -> Mapping[tuple[str, str], float]:
    """Published interaction coefficients by cation and anion, kg/mol."""
    return {(row["cation"], row["anion"]): float(row["epsilon_kg_mol"]) for row in read_table("sit.csv")}


def _interaction(species: Sequence[Species]) -> Array:
    size = len(species)
    matrix = np.zeros((size, size))
    for j, one in enumerate(species):
        for k in range(j):
            matrix[j, k] = matrix[k, j] = _pair(one, species[k])
    return matrix


def _pair(one: Species, other: Species) -> float:
    left, right = one.formula.charge, other.formula.charge
    if left * right < 0:
        cation, anion = (one, other) if left > 0 else (other, one)
        known = coefficients().get((cation.text, anion.text))
        charges = min(abs(cation.formula.charge), 3), min(abs(anion.formula.charge), 3)
        return USUAL.get(charges, -0.1) if known is None else known
    if (left == 0) != (right == 0):
        neutral = one if left == 0 else other
        return SALTING_OUT if len(neutral.components) <= 1 and neutral.text not in MISCIBLE else SALTING_OUT / 3.0
    return 0.0


MISCIBLE = frozenset({"H2O2", "NH3", "N2H4", "CH3COOH", "HCOOH", "HF", "HCN", "H3PO4"})
"""Molecules that salts hardly drive out."""

"""Density of liquors, and from it the molality of what was measured by volume or by weight."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from redoxq.errors import RecipeError
from redoxq.matter.formula import Formula, molar_mass, parse_formula
from redoxq.matter.recipes import Ingredient, Recipe
from redoxq.matter.tables import number_in, read_table
from redoxq.thermo import water
from redoxq.thermo.constants import CELSIUS_ZERO, WATER_MOLAR_MASS

Array = NDArray[np.float64]

USUAL_APPARENT_DENSITY = 2600.0
"""kg/m3 of a dissolved salt that the density tables do not hold."""

HOTTEST_FIT = 60.0
"""°C; the fits of apparent density are held at this temperature beyond it."""

LEAST_WATER = 1e-3
PER_LITRE = {"M": 1.0, "mol/L": 1.0}
GRAMS_PER_LITRE = {"g/L": 1.0, "mg/L": 1e-3}
SHARES = {"wt%": 1e-2, "g/kg": 1e-3, "ppm": 1e-6}


@dataclass(frozen=True, slots=True)
class Apparent:
    """Parameters of the apparent density of one solute.

    Attributes
    ----------
    c : tuple of float
    highest_share : float
        Mass fraction to which the fit reaches.
    liquid : float or None
        kg/m3 of the solute itself near 20 °C where it is a liquid: CRC Handbook, section 4.
    """

    c: tuple[float, float, float, float, float]
    highest_share: float
    liquid: float | None


@dataclass(frozen=True, slots=True)
class Composition:
    """A liquor by the kilogram of water.

    Attributes
    ----------
    reagents : tuple of Formula
        Without crystal water, which counts as water.
    molality : ndarray, shape (reagents,)
        mol per kg of water.
    density : float
        kg/m3.
    water_kg_per_L : float
    notes : tuple of str
        What was estimated.
    """

    reagents: tuple[Formula, ...]
    molality: Array
    density: float
    water_kg_per_L: float
    notes: tuple[str, ...]


@cache
def apparent_densities() -> Mapping[str, Apparent]:
    """Parameters by canonical formula."""
    found = {}
    for line, row in enumerate(read_table("densities.csv"), 2):
        numbers = [number_in(row, f"c{k}", "densities.csv", line) or 0.0 for k in range(5)]
        share = number_in(row, "highest_share", "densities.csv", line) or 0.3
        liquid = number_in(row, "liquid_kg_m3", "densities.csv", line)
        found[row["formula"]] = Apparent((numbers[0], numbers[1], numbers[2], numbers[3], numbers[4]), share, liquid)
    return found


def solution_density(shares: Mapping[str, float], temperature: float) -> float:
    """Density of a solution.

    Parameters
    ----------
    shares : mapping of str to float
        Mass fraction of each solute by canonical formula.
    temperature : float
        K.

    Returns
    -------
    float
        kg/m3.

    References
    ----------
    M. Laliberté, W. E. Cooper, J. Chem. Eng. Data 49 (2004) 1141; parameters of M. Laliberté, ibid. 54 (2009) 1725.
    """
    solutes = sum(shares.values())
    pure = float(water.density(np.array([temperature]))[0])
    celsius = min(temperature - CELSIUS_ZERO, HOTTEST_FIT)
    volume = (1.0 - solutes) / pure
    for formula, share in shares.items():
        known = apparent_densities().get(formula)
        density = USUAL_APPARENT_DENSITY if known is None else _apparent(known, solutes, celsius)
        volume += share / density
    return 1.0 / volume


def _apparent(known: Apparent, solutes: float, celsius: float) -> float:
    """By the fit within its reach; beyond it straight on to the density of the liquid solute, where there is one."""
    if known.liquid is None or solutes <= known.highest_share:
        return _fitted(known, solutes, celsius)
    past = (solutes - known.highest_share) / (1.0 - known.highest_share)
    return (1.0 - past) * _fitted(known, known.highest_share, celsius) + past * known.liquid


def _fitted(known: Apparent, solutes: float, celsius: float) -> float:
    c0, c1, c2, c3, c4 = known.c
    value = (c0 * solutes + c1) * np.exp(1e-6 * (celsius + c4) ** 2) / (solutes + c2 + c3 * celsius)
    return float(value) if np.isfinite(value) and value > 200.0 else USUAL_APPARENT_DENSITY


def molalities(recipe: Recipe) -> Composition:
    """Turn the strengths of a recipe into molalities.

    Parameters
    ----------
    recipe : Recipe
        Strengths by volume are those of the finished liquor at its own temperature (held at 60 °C above that).

    Returns
    -------
    Composition

    Raises
    ------
    RecipeError
        When no water is left.
    """
    items = [item for item in recipe.ingredients if item.amount > 0]
    anhydrous = [_anhydrous(item.formula) for item in items]
    density = 1000.0
    grams: list[float] = []
    water_grams = 1000.0
    for _ in range(60):
        grams, water_grams = _grams_per_litre(items, density)
        if water_grams < LEAST_WATER * density:
            raise RecipeError(
                "These strengths together leave no water in a litre of liquor.",
                hint="Lower them, or give them by weight (wt%).",
            )
        total = sum(grams) + water_grams
        shares: dict[str, float] = {}
        for dry, mass in zip(anhydrous, grams, strict=True):
            shares[dry.text] = shares.get(dry.text, 0.0) + mass / total
        new = solution_density(shares, recipe.temperature)
        if abs(new - density) < 1e-9 * density:
            break
        density = new
    molality = np.array([mass / molar_mass(dry) for dry, mass in zip(anhydrous, grams, strict=True)])
    unknown = sorted({dry.text for dry in anhydrous if dry.text not in apparent_densities()})
    notes = (
        ()
        if not unknown
        else (f"the density counts {', '.join(unknown)} as a salt of {USUAL_APPARENT_DENSITY:.0f} kg/m³ in solution",)
    )
    kilograms = water_grams / 1000.0
    return Composition(tuple(anhydrous), molality / kilograms, density, kilograms, notes)


def _anhydrous(formula: Formula) -> Formula:
    return parse_formula(formula.text.split(".")[0]) if formula.water else formula


def _grams_per_litre(items: Sequence[Ingredient], density: float) -> tuple[list[float], float]:
    """Grams of dry solute per litre, and of water with what the crystals bring; by mol/kg they share that water."""
    mass_of_liquor = density
    fixed = [_fixed_grams(item, mass_of_liquor) for item in items]
    crystal = [_crystal_share(item.formula) for item in items]
    known = sum(mass for mass in fixed if mass is not None)
    per_kg = sum(
        item.amount * molar_mass(_anhydrous(item.formula)) / 1000.0
        for item, mass in zip(items, fixed, strict=True)
        if mass is None
    )
    bound = sum(mass * share for mass, share in zip(fixed, crystal, strict=True) if mass is not None)
    # Water = liquor - dry solutes; what is given by mol/kg takes its part of that water.
    water_grams = (mass_of_liquor - known + bound) / (1.0 + per_kg)
    grams = []
    for item, mass, share in zip(items, fixed, crystal, strict=True):
        if mass is None:
            grams.append(item.amount * molar_mass(_anhydrous(item.formula)) * water_grams / 1000.0)
        else:
            grams.append(mass * (1.0 - share))
    return grams, water_grams


def _fixed_grams(item: Ingredient, mass_of_liquor: float) -> float | None:
    """Grams per litre of the substance as named; None where the strength is by kg of water."""
    if item.unit in PER_LITRE:
        return item.amount * PER_LITRE[item.unit] * molar_mass(item.formula)
    if item.unit in GRAMS_PER_LITRE:
        return item.amount * GRAMS_PER_LITRE[item.unit]
    if item.unit in SHARES:
        return item.amount * SHARES[item.unit] * mass_of_liquor
    return None


def _crystal_share(formula: Formula) -> float:
    return formula.water * WATER_MOLAR_MASS / molar_mass(formula) if formula.water else 0.0

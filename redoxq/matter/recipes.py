"""Recipes of liquors: what is dissolved, how much, how warm, under which gas."""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum

from redoxq.errors import RangeError, RecipeError
from redoxq.matter.formula import Formula

COLDEST, HOTTEST = 273.15, 423.15
LOWEST_PH, HIGHEST_PH = -2.0, 16.0

MOST = {
    "mol/L": 40.0,
    "M": 40.0,
    "mol/kg": 60.0,
    "g/L": 2500.0,
    "mg/L": 2.5e6,
    "ppm": 1e6,
    "wt%": 100.0,
    "g/kg": 1000.0,
}
"""Strengths that nothing can have."""


class Air(StrEnum):
    """The gas that a liquor stands under."""

    open = "open"
    none = "none"
    nitrogen = "nitrogen"
    hydrogen = "hydrogen"
    oxygen = "oxygen"


@dataclass(frozen=True, slots=True)
class Ingredient:
    """A substance of a recipe with its strength.

    Raises
    ------
    RecipeError
        For a strength that nothing can have.
    """

    formula: Formula
    amount: float
    unit: str
    name: str

    def __post_init__(self) -> None:
        if not math.isfinite(self.amount) or self.amount < 0:
            raise RecipeError(
                f"A strength of {self.amount:g} {self.unit} is not possible.", hint="A strength is zero or more."
            )
        limit = MOST.get(self.unit)
        if limit is None:
            raise RecipeError(f"I know no strength in {self.unit}.", hint="Use M, mol/kg, g/L, mg/L, ppm, wt% or g/kg.")
        if self.amount >= limit:
            raise RecipeError(
                f"{self.amount:g} {self.unit} {self.name} is not possible: that leaves no water.",
                hint=f"Stay below {limit:g} {self.unit}.",
            )


@dataclass(frozen=True, slots=True)
class Recipe:
    """A liquor: ingredients, pH where it is set, temperature in K, air and volume in litres."""

    ingredients: tuple[Ingredient, ...]
    pH: float | None = None
    temperature: float = 298.15
    air: Air = Air.open
    volume_L: float = 1.0

    def __post_init__(self) -> None:
        if not 0.0 < self.volume_L < math.inf:
            raise RecipeError(f"{self.volume_L:g} L of liquor is not possible.", hint="Give a volume above zero.")
        if self.pH is not None and not LOWEST_PH <= self.pH <= HIGHEST_PH:
            raise RecipeError(
                f"pH {self.pH:g} is outside what a liquor in water can have.",
                hint=f"Give a pH between {LOWEST_PH:g} and {HIGHEST_PH:g}.",
            )
        if not COLDEST <= self.temperature <= HOTTEST:
            raise RangeError(
                f"{self.temperature - 273.15:g} °C is outside the reach of the tables.",
                hint="Liquors are answered from 0 to 100 °C, with less certainty to 150 °C.",
            )
        shares = sum(item.amount / MOST[item.unit] for item in self.ingredients if item.unit in ("wt%", "g/kg", "ppm"))
        if shares >= 1.0:
            raise RecipeError("The ingredients leave no water.", hint="Their weight shares must stay below 100 %.")

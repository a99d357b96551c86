"""Recipes that can be made, and those that cannot."""

from __future__ import annotations

import math

import pytest

from redoxq.errors import RangeError, RecipeError
from redoxq.matter.formula import parse_formula
from redoxq.matter.recipes import MOST, Air, Ingredient, Recipe


def salt(amount: float, unit: str = "M") -> Ingredient:
    return Ingredient(parse_formula("CuSO4"), amount, unit, "copper sulfate")


@pytest.mark.parametrize(
    ("amount", "unit"), [(0.5, "M"), (0.0, "M"), (80, "g/L"), (20, "wt%"), (5000, "ppm"), (1, "mol/kg")]
)
def test_usual_strengths(amount: float, unit: str) -> None:
    assert salt(amount, unit).amount == amount


@pytest.mark.parametrize(
    ("amount", "unit"), [(-3, "M"), (200, "wt%"), (100, "wt%"), (1000, "M"), (math.nan, "M"), (math.inf, "g/L")]
)
def test_strengths_that_nothing_can_have(amount: float, unit: str) -> None:
    with pytest.raises(RecipeError, match="not possible"):
        salt(amount, unit)


def test_a_unit_of_no_strength() -> None:
    with pytest.raises(RecipeError, match="spoons") as raised:
        salt(1, "spoons")
    assert "wt%" in (raised.value.hint or "")
    assert all(limit > 0 for limit in MOST.values())


def test_a_recipe_stands_open_to_air_at_25_degrees() -> None:
    recipe = Recipe((salt(0.5),))
    assert (recipe.temperature, recipe.air, recipe.pH, recipe.volume_L) == (298.15, Air.open, None, 1.0)
    assert [air.value for air in Air] == ["open", "none", "nitrogen", "hydrogen", "oxygen"]


@pytest.mark.parametrize("pH", [40.0, -3.0, math.nan])
def test_a_pH_that_no_liquor_has(pH: float) -> None:
    with pytest.raises(RecipeError, match="pH"):
        Recipe((), pH=pH)


@pytest.mark.parametrize("temperature", [0.0, 200.0, 600.0, math.nan])
def test_a_temperature_beyond_the_tables(temperature: float) -> None:
    with pytest.raises(RangeError, match="reach"):
        Recipe((), temperature=temperature)


@pytest.mark.parametrize("volume", [0.0, -1.0, math.inf, math.nan])
def test_a_volume_that_is_none(volume: float) -> None:
    with pytest.raises(RecipeError, match="L of liquor"):
        Recipe((), volume_L=volume)


def test_weight_shares_leave_room_for_water() -> None:
    Recipe((salt(60, "wt%"), salt(300, "g/kg")))
    with pytest.raises(RecipeError, match="no water"):
        Recipe((salt(60, "wt%"), salt(400, "g/kg")))

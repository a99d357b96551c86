"""Makes the recipe of a liquor from what was said of it."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from redoxq.errors import Place, RecipeError, RedoxqError, SentenceError
from redoxq.jobs.questions import Definition
from redoxq.matter.names import Substance
from redoxq.matter.recipes import Air, Ingredient, Recipe
from redoxq.talk.hearing import formula_heard, substance_heard
from redoxq.talk.ions import equivalents, require_neutral
from redoxq.talk.statement import Liquor, Phrase, Portion, Quantity
from redoxq.units import kelvin, litres, rounded, strength, written

ASSUMED_STRENGTH = 1.0
"""mol/L of an ingredient whose strength is not given."""

STANDARD_TEMPERATURE = 298.15

_AIR = {
    "open": Air.open, "air": Air.open, "none": Air.none,
    "oxygen": Air.oxygen, "O2": Air.oxygen, "nitrogen": Air.nitrogen, "N2": Air.nitrogen,
    "hydrogen": Air.hydrogen, "H2": Air.hydrogen, "argon": Air.none, "Ar": Air.none,
}


@dataclass(frozen=True, slots=True)
class Brew:
    """A recipe, what was assumed for it, and which of its conditions were said."""

    recipe: Recipe
    assumptions: tuple[str, ...]
    stated: frozenset[str]

    @property
    def all_assumptions(self) -> tuple[str, ...]:
        """Assumptions with those for the conditions that nobody stated."""
        unsaid = []
        if "temperature" not in self.stated:
            unsaid.append("25 °C, since no temperature is given")
        if "air" not in self.stated:
            unsaid.append("open to air, since nothing else is said")
        return (*self.assumptions, *unsaid)


@dataclass(frozen=True, slots=True)
class _Poured:
    """Ingredients found for one portion, with what was assumed."""

    ingredients: tuple[Ingredient, ...]
    assumptions: tuple[str, ...] = ()


def brewed(liquor: Liquor, known: Mapping[str, Definition]) -> Brew:
    """Make the recipe of a liquor.

    Parameters
    ----------
    liquor : Liquor
    known : mapping of str to Definition
        Liquors with a name; one of them may be the base, and what is said here goes before what it says.

    Raises
    ------
    RedoxqError
        With its place in the sentence.
    """
    base = _base(liquor.portions, known)
    poured = [_poured(portion, known) for portion in liquor.portions]
    kept, stated = _conditions(liquor, base)
    volume = 1.0 if base is None else base.recipe.volume_L
    if liquor.volume is not None:
        volume = litres(liquor.volume.value, liquor.volume.unit)
        if volume <= 0:
            raise RecipeError("The volume of a liquor must be above zero.", liquor.volume.at)
    ingredients = _merged(item for pour in poured for item in pour.ingredients)
    whole = Place(liquor.portions[0].name.at.start, liquor.portions[-1].name.at.end)
    require_neutral(ingredients, whole)
    recipe = _recipe(whole, ingredients=ingredients, volume_L=volume, **kept)
    return Brew(recipe, tuple(text for pour in poured for text in pour.assumptions), stated)


def temperature_of(said: Quantity | None) -> float:
    """Return a temperature in K, 25 °C when none was said; refused where no liquor can be."""
    if said is None:
        return STANDARD_TEMPERATURE
    value = kelvin(said.value, said.unit)
    _recipe(said.at, ingredients=(), temperature=value)
    return value


def _base(portions: tuple[Portion, ...], known: Mapping[str, Definition]) -> Definition | None:
    named = [portion for portion in portions if portion.name.text.casefold() in known]
    if len(named) > 1:
        raise SentenceError("Mixtures of two liquors are not answered yet.", named[1].name.at,
                            "Add single ingredients to one named liquor.")
    return known[named[0].name.text.casefold()] if named else None


def _poured(portion: Portion, known: Mapping[str, Definition]) -> _Poured:
    definition = known.get(portion.name.text.casefold())
    if definition is not None:
        if portion.strength is not None:
            raise RecipeError(f"{definition.name} has its own strengths.", portion.strength.at,
                              "Leave the strength out.")
        return _Poured(definition.recipe.ingredients, definition.assumptions)
    substance = substance_heard(portion.name, known)
    if substance.kind == "metal":
        message = f"{portion.name.text} is a metal; a liquor is made of salts, acids, bases and gases."
        raise SentenceError(message, portion.name.at, 'Say the metal first: "zinc in 0.5 M CuSO4".')
    if substance.kind == "water":
        return _water(portion)
    if portion.strength is None:
        return _unmeasured(portion, substance)
    return _Poured((_ingredient(portion, portion.strength, substance),))


def _water(portion: Portion) -> _Poured:
    if portion.strength is not None:
        raise RecipeError("Water is what a liquor is made with; it has no strength.", portion.strength.at,
                          'Say "in water", or name what is dissolved.')
    return _Poured(())


def _unmeasured(portion: Portion, substance: Substance) -> _Poured:
    """An ingredient without a strength: that of its name, such as battery acid, or 1 M; a gas has none."""
    formula = substance.formula
    if substance.strength is not None:
        amount, unit = substance.strength, "wt%"
        told = f"{substance.name} is taken as {written(amount)} wt% {formula.text}"
    elif substance.kind == "gas":
        raise RecipeError(f"How much {portion.name.text} is dissolved?", portion.name.at,
                          f"Give its strength, such as 0.01 M {portion.name.text}.")
    else:
        amount, unit = ASSUMED_STRENGTH, "M"
        told = f"1 M {formula.text}, since no strength is given"
    return _Poured((Ingredient(formula, amount, unit, formula.text),), (told,))


def _ingredient(portion: Portion, said: Quantity, substance: Substance) -> Ingredient:
    amount, unit = strength(said.value, said.unit)
    if unit == "N":
        amount, unit = rounded(amount / _equivalents(portion, said, substance)), "M"
    try:
        return Ingredient(substance.formula, amount, unit, substance.formula.text)
    except RedoxqError as error:
        raise error.placed(said.at) from None


def _equivalents(portion: Portion, said: Quantity, substance: Substance) -> int:
    if portion.basis is None:
        raise RecipeError("Normality says nothing until the ion that counts is named.", said.at,
                          'Name it, as in "1 N H2SO4 as H+", or give the strength in mol/L (M).')
    return equivalents(substance.formula, formula_heard(portion.basis), portion.basis.at)


def _conditions(liquor: Liquor, base: Definition | None) -> tuple[dict[str, Any], frozenset[str]]:
    """Fields of the recipe that were said here or in the named liquor, and their names."""
    kept: dict[str, Any] = {}
    if base is not None:
        kept = {field: getattr(base.recipe, field) for field in base.stated}
    if liquor.temperature is not None:
        kept["temperature"] = temperature_of(liquor.temperature)
    if liquor.pH is not None:
        kept["pH"] = liquor.pH.value
        _recipe(liquor.pH.at, ingredients=(), pH=liquor.pH.value)
    if liquor.air is not None:
        kept["air"] = _air(liquor.air)
    return kept, frozenset(kept)


def _air(said: Phrase) -> Air:
    return _AIR[said.text]


def _recipe(at: Place, **fields: Any) -> Recipe:
    try:
        return Recipe(**fields)
    except RedoxqError as error:
        raise error.placed(at) from None


def _merged(ingredients: Iterable[Ingredient]) -> tuple[Ingredient, ...]:
    """Join what is the same substance in the same unit."""
    amounts: dict[tuple[str, str], Ingredient] = {}
    for item in ingredients:
        key = (item.formula.text, item.unit)
        if key in amounts:
            total = rounded(amounts[key].amount + item.amount)
            item = Ingredient(item.formula, total, item.unit, amounts[key].name)
        amounts[key] = item
    return tuple(amounts.values())

"""Writes questions back as sentences with nothing left unsaid; reading them again asks the same."""

from __future__ import annotations

from collections.abc import Collection, Iterable

from redoxq.jobs.questions import ReactionTerm
from redoxq.matter.formula import Formula
from redoxq.matter.recipes import Air, Recipe
from redoxq.units import celsius, written

AIR_WORDS = {
    Air.open: "open to air",
    Air.none: "without air",
    Air.nitrogen: "under nitrogen",
    Air.hydrogen: "under hydrogen",
    Air.oxygen: "under oxygen",
}

CONDITIONS = frozenset({"temperature", "air"})


def temperature_words(temperature: float) -> str:
    """`25 °C` from K."""
    return f"{written(celsius(temperature))} °C"


def contact_sentence(metal: str, mass_g: float | None, powder: bool, recipe: Recipe) -> str:
    """`zinc, 20 g, in 2 L of 0.5 M CuSO4 at 45 °C, under air`; the metal by name."""
    form = f"{metal} powder" if powder else metal
    amount = "" if mass_g is None else f", {written(mass_g)} g,"
    return f"{form}{amount} in {liquor_words(recipe)}"


def liquor_words(recipe: Recipe, told: Collection[str] = CONDITIONS) -> str:
    """What a liquor is made of and how it is kept, of which only what is to be told."""
    volume = "" if recipe.volume_L == 1.0 else f"{written(recipe.volume_L)} L of "
    kept = []
    if "temperature" in told:
        kept.append(f"at {temperature_words(recipe.temperature)}")
    if recipe.pH is not None:
        kept.append(f"pH {written(recipe.pH)}")
    if "air" in told:
        kept.append(AIR_WORDS[recipe.air])
    return f"{volume}{_contents(recipe)} {', '.join(kept)}".rstrip()


def _contents(recipe: Recipe) -> str:
    parts = [f"{written(item.amount)} {item.unit} {item.formula.text}" for item in recipe.ingredients]
    return " + ".join(parts) or "water"


def substance_words(formula: Formula) -> str:
    """A formula with its phase where it has one: `HgS(s, red)`."""
    phase = ", ".join(part for part in (formula.phase, formula.form) if part)
    return f"{formula.text}({phase})" if phase else formula.text


def reaction_words(left: Iterable[ReactionTerm], right: Iterable[ReactionTerm]) -> str:
    """`Cu+2 + 2 e- -> Cu`."""
    return f"{_side(left)} -> {_side(right)}"


def _side(terms: Iterable[ReactionTerm]) -> str:
    return " + ".join(_term(term) for term in terms)


def _term(term: ReactionTerm) -> str:
    name = substance_words(term.formula)
    return name if term.coefficient is None else f"{term.coefficient} {name}"

"""Questions: what a sentence asks once all its names are known. Talk makes them, jobs answer them."""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction

from redoxq.matter.formula import Formula
from redoxq.matter.recipes import Recipe


@dataclass(frozen=True, slots=True, kw_only=True)
class _Asked:
    """What every question holds; two questions are equal when they ask the same, however it was said.

    Attributes
    ----------
    canonical : str
        The sentence that asks the same with nothing left unsaid.
    assumptions : tuple of str
        What the sentence left open and how it was taken.
    """

    canonical: str = field(compare=False)
    assumptions: tuple[str, ...] = field(default=(), compare=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class ContactQuestion(_Asked):
    """What happens when a metal meets a liquor.

    Attributes
    ----------
    metal : str
        Symbol of the element.
    recipe : Recipe
    metal_mass_g : float or None
        None when the sentence gives none.
    powder : bool
        The metal is a powder or dust.
    """

    metal: str
    recipe: Recipe
    metal_mass_g: float | None = None
    powder: bool = False

    @property
    def volume_L(self) -> float:
        """Volume of the liquor, L."""
        return self.recipe.volume_L


@dataclass(frozen=True, slots=True, kw_only=True)
class SpeciesQuestion(_Asked):
    """What is known of a species, a substance or a metal.

    Attributes
    ----------
    formula : Formula
        With its phase where the sentence names one.
    name : str
        As the tables or the sentence call it.
    kind : str
        `metal`, or what kind of substance the tables call it.
    temperature : float
        K.
    """

    formula: Formula
    name: str = field(compare=False)
    kind: str
    temperature: float


@dataclass(frozen=True, slots=True, kw_only=True)
class LiquorQuestion(_Asked):
    """What a liquor is like."""

    recipe: Recipe


@dataclass(frozen=True, slots=True)
class ReactionTerm:
    """A substance of a reaction; the coefficient is None where none is written."""

    coefficient: Fraction | None
    formula: Formula


@dataclass(frozen=True, slots=True, kw_only=True)
class ReactionQuestion(_Asked):
    """Standard quantities of a reaction at a temperature in K."""

    left: tuple[ReactionTerm, ...]
    right: tuple[ReactionTerm, ...]
    temperature: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Definition(_Asked):
    """A liquor given a name.

    Attributes
    ----------
    name : str
    recipe : Recipe
    stated : frozenset of str
        Those of `temperature`, `pH` and `air` that were said; the rest is left to the sentence that uses it.
    """

    name: str
    recipe: Recipe
    stated: frozenset[str] = frozenset()


Question = ContactQuestion | SpeciesQuestion | LiquorQuestion | ReactionQuestion | Definition

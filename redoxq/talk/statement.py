"""What was said: the parts of a sentence as typed, before any name is looked up."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from redoxq.errors import Place


@dataclass(frozen=True, slots=True)
class Phrase:
    """A name as typed, such as `copper sulfate` or `Cu+2`, and where it stands."""

    text: str
    at: Place


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number with its unit as typed; the unit of a pH is blank."""

    value: float
    unit: str
    at: Place


@dataclass(frozen=True, slots=True)
class Portion:
    """One ingredient of a liquor.

    Attributes
    ----------
    name : Phrase
    strength : Quantity or None
        None when the sentence gives none.
    basis : Phrase or None
        The ion that a normality counts.
    """

    name: Phrase
    strength: Quantity | None = None
    basis: Phrase | None = None


@dataclass(frozen=True, slots=True)
class Liquor:
    """Ingredients and how they are kept.

    Attributes
    ----------
    portions : tuple of Portion
    volume, temperature, pH : Quantity or None
    air : Phrase or None
        Text is `open`, `none` or the name of a gas.
    """

    portions: tuple[Portion, ...]
    volume: Quantity | None = None
    temperature: Quantity | None = None
    pH: Quantity | None = None
    air: Phrase | None = None


@dataclass(frozen=True, slots=True)
class Contact:
    """`zinc, 20 g, in 0.5 M CuSO4 at 45 C`."""

    metal: Phrase
    mass: Quantity | None
    liquor: Liquor


@dataclass(frozen=True, slots=True)
class About:
    """`about Cu+2` or `about 0.5 mol/kg CuSO4 at 25 C`."""

    liquor: Liquor


@dataclass(frozen=True, slots=True)
class Definition:
    """`let rinse = 5 g/L CuSO4 + 20 g/L H2SO4`."""

    name: Phrase
    liquor: Liquor


@dataclass(frozen=True, slots=True)
class Term:
    """One term of a reaction; the coefficient is None when none is written."""

    name: Phrase
    coefficient: Fraction | None


@dataclass(frozen=True, slots=True)
class Reaction:
    """`Cu+2 + 2 e- = Cu at 40 C`."""

    left: tuple[Term, ...]
    right: tuple[Term, ...]
    temperature: Quantity | None


@dataclass(frozen=True, slots=True)
class Statement:
    """A sentence that has been read.

    Attributes
    ----------
    text : str
        As typed.
    said : Contact, About, Definition or Reaction
    remarks : tuple of str
        How something was read that could have been meant otherwise.
    """

    text: str
    said: Contact | About | Definition | Reaction
    remarks: tuple[str, ...] = ()

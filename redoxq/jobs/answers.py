"""Answers: what every kind of question returns, and the keys of the JSON contract."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any


@dataclass(frozen=True, slots=True)
class Happening:
    """Something that is seen: `what` is dissolves, plates, gas, film, precipitate, pitting, dealloys or embrittles."""

    what: str
    species: str


@dataclass(frozen=True, slots=True)
class Reason:
    """One step of the chain that leads to a verdict."""

    rule: str
    text: str
    source: str


@dataclass(frozen=True, slots=True)
class Caution:
    """A usual caution; it defers to local codes and to qualified practice."""

    topic: str
    text: str


@dataclass(frozen=True, slots=True)
class Hazard:
    """A dangerous gas or product that may form."""

    gas: str
    topic: str
    text: str


@dataclass(frozen=True, slots=True)
class Residue:
    """What is left of a species in the liquor."""

    species: str
    mol_kg: float
    mg_L: float


@dataclass(frozen=True, slots=True)
class EndState:
    """Where a contact comes to rest for given amounts.

    Attributes
    ----------
    pH : float
    residual : tuple of Residue
    dissolved_g, plated_g : float
    plated : mapping of str to float
        g of each metal or solid that came out on the metal.
    gas_mol : mapping of str to float
        What leaves the liquor, mol.
    precipitates : mapping of str to float
        mol.
    notes : tuple of str
    """

    pH: float
    residual: tuple[Residue, ...]
    dissolved_g: float
    plated_g: float
    plated: Mapping[str, float]
    gas_mol: Mapping[str, float]
    precipitates: Mapping[str, float]
    notes: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class SpeciesContent:
    """One dissolved species or solid of a liquor."""

    species: str
    mol_kg: float
    activity: float


@dataclass(frozen=True, slots=True)
class LiquorSheet:
    """Figures of a liquor."""

    pH: float
    ionic_strength_mol_kg: float
    density_kg_m3: float
    water_activity: float
    osmotic_coefficient: float | None
    mean_activity_coefficient: Mapping[str, float]
    activity_model: str
    species: tuple[SpeciesContent, ...]


@dataclass(frozen=True, slots=True)
class Figure:
    """One figure of a fact sheet, with its unit and where it comes from."""

    name: str
    value: float | str
    unit: str
    uncertainty: float | None
    source: str


@dataclass(frozen=True, slots=True)
class Trial:
    """One oxidant of the liquor tried on the metal.

    Attributes
    ----------
    oxidant, title : str
    reaction : str
    electrons : int
    emf_V, emf_uncertainty_V, standard_emf_V : float
    delta_G_kJ_mol, log10_K : float
    acts : bool
        Whether practice lets it act.
    """

    oxidant: str
    title: str
    reaction: str
    electrons: int
    emf_V: float
    emf_uncertainty_V: float
    standard_emf_V: float
    delta_G_kJ_mol: float
    log10_K: float
    potential_V: float
    acts: bool


@dataclass(frozen=True, slots=True)
class Branch:
    """The verdict with or without air, and what happens then."""

    verdict: str
    oxidant: str | None
    happenings: tuple[Happening, ...]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Answer:
    """What all answers hold.

    Attributes
    ----------
    statement : str
        The sentence in canonical form.
    kind : str
        contact, reaction, species, liquor or definition.
    summary : str
        One plain sentence.
    """

    statement: str
    kind: str
    summary: str
    temperature_K: float | None = None
    pressure_bar: float | None = None
    assumptions: tuple[str, ...] = ()
    validity: tuple[str, ...] = ()
    data_version: str = ""

    def to_dict(self) -> dict[str, Any]:
        """Return the answer with the keys of the JSON contract; keys that make no sense are absent."""
        return _plain_fields(self)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ContactAnswer(Answer):
    """What happens when a metal meets a liquor."""

    verdict: str
    metal: str
    metal_potential_V: float
    trials: tuple[Trial, ...]
    without_air: Branch
    under_air: Branch | None
    air_matters: bool
    happenings: tuple[Happening, ...]
    pace: str | None
    end_state: EndState | None
    reasons: tuple[Reason, ...]
    cautions: tuple[Caution, ...]
    hazards: tuple[Hazard, ...]
    liquor: LiquorSheet
    leading: Trial | None = None

    def to_dict(self) -> dict[str, Any]:
        """Return the keys of the contract; figures of the reaction are those of the leading oxidant."""
        fields = _plain_fields(self)
        leading = fields.pop("leading", None) or {}
        for key in (
            "reaction",
            "electrons",
            "emf_V",
            "emf_uncertainty_V",
            "standard_emf_V",
            "delta_G_kJ_mol",
            "log10_K",
        ):
            if key in leading:
                fields[key] = leading[key]
        if leading:
            fields["oxidant"] = leading["oxidant"]
        return fields


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ReactionAnswer(Answer):
    """Standard quantities of a reaction."""

    reaction: str
    electrons: int | None
    standard_emf_V: float | None
    emf_uncertainty_V: float | None
    delta_G_kJ_mol: float
    delta_G_uncertainty_kJ_mol: float
    delta_H_kJ_mol: float
    delta_S_J_mol_K: float
    log10_K: float
    temperature_coefficient_mV_K: float | None
    reasons: tuple[Reason, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SheetAnswer(Answer):
    """Fact sheet of a species, substance or metal."""

    figures: tuple[Figure, ...]
    related: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LiquorAnswer(Answer):
    """Fact sheet of a liquor."""

    liquor: LiquorSheet
    precipitates: Mapping[str, float] = field(default_factory=dict)
    hazards: tuple[Hazard, ...] = ()


def _plain_fields(value: Any) -> dict[str, Any]:
    fields = {}
    for name in _names(value):
        plain = to_plain(getattr(value, name))
        if plain is not None or name.endswith("_V"):
            fields[name] = plain
    return fields


def _names(value: Any) -> list[str]:
    return list(type(value).__dataclass_fields__)


def to_plain(value: Any) -> Any:
    """Turn an answer's value into what JSON holds; numbers that are not finite become null."""
    if isinstance(value, float):
        return float(value) if math.isfinite(value) else None
    if isinstance(value, Mapping):
        return {key: to_plain(item) for key, item in value.items()}
    if isinstance(value, tuple):
        return [to_plain(item) for item in value]
    if hasattr(type(value), "__dataclass_fields__"):
        return _plain_fields(value)
    return value

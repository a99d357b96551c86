"""Figures of a liquor as answers show them."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np

from redoxq.jobs.answers import LiquorSheet, SpeciesContent
from redoxq.matter.formula import parse_formula
from redoxq.matter.ions import ions_of
from redoxq.thermo.constants import WATER_MOLAR_MASS
from redoxq.thermo.speciation import Liquor

LEAST_SHOWN = 1e-30

LEAST_PARTICLES = 1e-4
"""mol/kg below which the ions of the water itself would count in an osmotic coefficient."""


def liquor_sheet(liquor: Liquor) -> LiquorSheet:
    """pH, ionic strength, density, activities and every species of a liquor."""
    state = liquor.state
    content = np.exp(state.ln_molality[0])
    activity = np.exp(state.ln_activity[0])
    order = np.argsort(-content)
    species = tuple(
        SpeciesContent(state.network.aqueous[k].key, float(content[k]), float(activity[k]))
        for k in order
        if content[k] > LEAST_SHOWN
    )
    return LiquorSheet(
        pH=float(state.pH[0]),
        ionic_strength_mol_kg=float(state.ionic_strength[0]),
        density_kg_m3=liquor.composition.density,
        water_activity=float(np.exp(state.ln_water_activity[0])),
        osmotic_coefficient=_osmotic_coefficient(liquor),
        mean_activity_coefficient=_mean_coefficients(liquor),
        activity_model=liquor.model.name,
        species=species,
    )


def _mean_coefficients(liquor: Liquor) -> dict[str, float]:
    """Stoichiometric mean activity coefficients: a whole salt as weighed, its ions counted as free.

    R. A. Robinson, R. H. Stokes, Electrolyte Solutions, 2nd ed. (1959), chapter 2.
    """
    found: dict[str, float] = {}
    if precipitates(liquor):
        return found  # what was weighed is no longer what is dissolved
    totals = _ion_totals(liquor)
    for reagent in dict.fromkeys(liquor.reagents):
        parts = ions_of(parse_formula(reagent))
        if parts is None:
            continue
        logs, count = 0.0, 0
        for ion, number in parts:
            activity = float(liquor.ln_activity(ion.text)[0])
            total = totals.get(ion.text, 0.0)
            if not np.isfinite(activity) or total <= 0.0:
                break
            logs += number * (activity - np.log(total))
            count += number
        else:
            found[reagent] = float(np.exp(logs / count))
    return found


def _ion_totals(liquor: Liquor) -> dict[str, float]:
    totals: dict[str, float] = {}
    for reagent, amount in zip(liquor.reagents, liquor.amounts[0], strict=True):
        for ion, number in ions_of(parse_formula(reagent)) or ():
            totals[ion.text] = totals.get(ion.text, 0.0) + number * float(amount)
    return totals


def _osmotic_coefficient(liquor: Liquor) -> float | None:
    """Practical osmotic coefficient over all ions as weighed (a molecule that is no salt counts once)."""
    if precipitates(liquor):
        return None
    particles = 0.0
    for reagent, amount in zip(liquor.reagents, liquor.amounts[0], strict=True):
        parts = ions_of(parse_formula(reagent))
        particles += float(amount) * (1 if parts is None else sum(number for _, number in parts))
    if particles < LEAST_PARTICLES:
        return None
    return float(-liquor.state.ln_water_activity[0] / (particles * WATER_MOLAR_MASS / 1000.0))


def precipitates(liquor: Liquor) -> dict[str, float]:
    """Solids that the liquor throws down, mol per kg of water."""
    return {
        species.key: float(amount)
        for species, amount in zip(liquor.network.phases, liquor.state.phases[0], strict=True)
        if amount > 1e-12
    }


def saturation_notes(liquor: Liquor) -> tuple[str, ...]:
    """What is said where a solute does not stay dissolved."""
    return tuple(
        f"{key} settles out of this liquor ({amount:.2g} mol/kg); it is taken as solid"
        for key, amount in precipitates(liquor).items()
    )


def validity_notes(liquor: Liquor) -> tuple[str, ...]:
    """Reach of the models for this liquor."""
    notes: list[str] = []
    strength = float(liquor.state.ionic_strength[0])
    if strength > 0.1:
        notes.append(f"{liquor.model.reach}; this liquor has {strength:.2g} mol/kg")
    celsius = float(liquor.temperature[0]) - 273.15
    if celsius > 100.0:
        notes.append("above 100 °C heat capacities are carried on from below: figures are less certain")
    return tuple(notes)


def sources_of(codes: Iterable[str]) -> str:
    """Source codes once each, in order."""
    return ", ".join(dict.fromkeys(code for code in codes if code))

"""Fact sheets: a species, substance or metal with the source of every figure; a liquor with all that is in it."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np

from redoxq.errors import UnknownNameError
from redoxq.jobs.answers import Figure, Hazard, LiquorAnswer, SheetAnswer
from redoxq.jobs.questions import LiquorQuestion, SpeciesQuestion
from redoxq.jobs.sheets import liquor_sheet, precipitates, saturation_notes, validity_notes
from redoxq.matter import names
from redoxq.matter.catalogue import Species, catalogue
from redoxq.matter.elements import elements
from redoxq.matter.formula import Formula, molar_mass
from redoxq.matter.tables import data_version, read_table
from redoxq.thermo.constants import T0
from redoxq.thermo.gibbs import covariance, formation, gibbs_energies
from redoxq.thermo.speciation import speciate

MOST_RELATED = 12
COVERAGE = 2.0


def about_species(question: SpeciesQuestion) -> SheetAnswer:
    """Every figure of the tables on a species, substance or metal.

    Raises
    ------
    UnknownNameError
        When the tables hold neither the formula nor its ions.
    """
    rows = _rows(question.formula)
    related = _related(question.formula, rows)
    if not rows and not related:
        near = names.nearest(question.formula.text)
        raise UnknownNameError(
            f"The tables hold nothing on {question.formula.text}.",
            hint=f"Nearest: {', '.join(near)}." if near else None,
        )
    figures = [figure for row in rows for figure in _figures(row, question.temperature)]
    return SheetAnswer(
        statement=question.canonical,
        kind="species",
        summary=_summary(question, rows),
        temperature_K=question.temperature,
        assumptions=question.assumptions,
        data_version=data_version(),
        figures=(_mass(question.formula), *figures),
        related=related,
    )


def _rows(formula: Formula) -> tuple[Species, ...]:
    rows = catalogue().all_of(formula.text)
    if formula.phase:
        rows = tuple(
            row for row in rows if row.phase == formula.phase and (not formula.form or row.form == formula.form)
        )
    return rows


def _summary(question: SpeciesQuestion, rows: tuple[Species, ...]) -> str:
    if not rows:
        return f"{question.formula.text} ({question.name}) has no row of its own; in water it is what stands below."
    forms = ", ".join(f"{row.key} ({row.name})" for row in rows)
    return f"The tables hold {forms}."


def _mass(formula: Formula) -> Figure:
    spread = sum(elements()[symbol].uncertainty * count for symbol, count in formula.atoms)
    return Figure("molar mass", molar_mass(formula), "g/mol", spread or None, "IUPAC21")


def _figures(row: Species, temperature: float) -> Iterable[Figure]:
    source = f"{row.source}, {row.basis}"
    spread = COVERAGE * float(np.sqrt(max(covariance((row,))[0, 0], 0.0))) / 1000.0
    yield Figure(f"ΔfG° {row.key}", row.G, "kJ/mol at 25 °C", spread or None, source)
    if row.H is not None:
        yield Figure("  ΔfH°", row.H, "kJ/mol", None, source)
    if row.S is not None:
        yield Figure("  S°", row.S, "J/(mol K)", None, source)
    if row.Cp is not None:
        yield Figure("  Cp°", row.Cp, "J/(mol K)", None, source)
    if row.derivation:
        yield Figure("  follows from", row.derivation, "", None, row.source)
    if row.note:
        yield Figure("  note", row.note, "", None, row.source)
    yield Figure("  publication", _publications().get(row.source, row.source), "", None, row.source)
    if temperature != T0:
        energy = float(gibbs_energies((row,), np.array([temperature]))[0, 0]) / 1000.0
        yield Figure(f"  ΔfG° at {temperature - 273.15:g} °C", energy, "kJ/mol", None, formation(row).basis)


def _publications() -> dict[str, str]:
    return {row["code"]: row["publication"] for row in read_table("sources.csv")}


def _related(formula: Formula, rows: tuple[Species, ...]) -> tuple[str, ...]:
    """Other species of the rarest element: what it may turn into."""
    common = {"H", "O", "C", "N", "S", "Cl", "Na", "K"}
    wanted = formula.elements - common or formula.elements - {"H", "O"} or formula.elements
    found = [one for one in catalogue().species if wanted <= one.symbols and one not in rows]
    found.sort(key=lambda one: (len(one.symbols - formula.elements), len(one.text)))
    return tuple(f"{one.key}  {one.name}" for one in found[:MOST_RELATED])


def about_liquor(question: LiquorQuestion) -> LiquorAnswer:
    """What is in a liquor: pH, ionic strength, density, activities and each species."""
    liquor = speciate(question.recipe)
    sheet = liquor_sheet(liquor)
    return LiquorAnswer(
        statement=question.canonical,
        kind="liquor",
        summary=f"pH {sheet.pH:.2f}, ionic strength {sheet.ionic_strength_mol_kg:.3g} mol/kg, "
        f"{sheet.density_kg_m3:.0f} kg/m³.",
        temperature_K=question.recipe.temperature,
        pressure_bar=1.01325,
        assumptions=(
            *question.assumptions,
            *liquor.composition.notes,
            *saturation_notes(liquor),
            "every oxidation state as it was put in; only acids, complexes and solids are at equilibrium",
        ),
        validity=validity_notes(liquor),
        data_version=data_version(),
        liquor=sheet,
        precipitates=precipitates(liquor),
        hazards=_hazards(sheet.pH, question),
    )


def _hazards(pH: float, question: LiquorQuestion) -> tuple[Hazard, ...]:
    """Poisonous gas that a liquor gives off by itself, from what is in it and its pH."""
    found = []
    for row in read_table("liquor_hazards.csv"):
        if pH < float(row["below_pH"]) and any(
            row["group"] in item.formula.text for item in question.recipe.ingredients
        ):
            found.append(Hazard(row["gas"], row["topic"], row["text"]))
    return tuple(found)

"""The contact: a metal in a liquor, every oxidant tried, practice asked, the end worked out."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from redoxq.errors import NotConvergedError
from redoxq.jobs.answers import Branch, Caution, ContactAnswer, EndState, Happening, Hazard, Trial
from redoxq.jobs.end_state import Reach, end_state
from redoxq.jobs.facts import contact_facts
from redoxq.jobs.questions import ContactQuestion
from redoxq.jobs.sheets import liquor_sheet, saturation_notes, validity_notes
from redoxq.jobs.trials import Judged, Weighed, final_oxidants, judged, weighed, with_product
from redoxq.jobs.wording import contact_reasons, contact_summary
from redoxq.matter.catalogue import catalogue
from redoxq.matter.formula import molar_mass
from redoxq.matter.recipes import Air
from redoxq.matter.tables import data_version
from redoxq.rules.engine import judge
from redoxq.rules.practice import practice
from redoxq.rules.rule import Effect
from redoxq.thermo.couples import MetalForm, Oxidant, metal_form, oxidants
from redoxq.thermo.speciation import Liquor, oxygen_pressure, speciate
from redoxq.thermo.water import vapour_pressure

NOTABLE = 1e-3
"""mol of a solid in the end state from which it is something that is seen."""

PRESSURE = 1.01325


def contact(question: ContactQuestion) -> ContactAnswer:
    """Answer what happens when a metal meets a liquor.

    Parameters
    ----------
    question : ContactQuestion

    Returns
    -------
    ContactAnswer

    Raises
    ------
    NotConvergedError, DataError
    """
    open_to_air = question.recipe.air in (Air.open, Air.oxygen)
    liquor = speciate(question.recipe)
    aired = liquor if open_to_air else replace(liquor, oxygen_pressure=oxygen_pressure(Air.open, liquor.temperature))
    form = metal_form(aired, question.metal)
    rows = tuple(
        weighed(aired, form, oxidant) for oxidant in final_oxidants(oxidants(aired, question.metal), aired, form)
    )
    under_air = judged(aired, form, rows, True, question.powder)
    without = judged(
        aired, form, tuple(row for row in rows if row.tried.oxidant.id != "oxygen"), False, question.powder
    )
    here = under_air if open_to_air else without
    end, notes = _end(question, liquor, form, here, open_to_air)
    if end is not None and form.film is not None and not _coats(form, end):
        form = form.dissolved()
        under_air, without, here = (with_product(branch, aired, form) for branch in (under_air, without, here))
    return _answer(question, liquor, form, under_air, without, here, end, notes)


def _coats(form: MetalForm, end: EndState) -> bool:
    """Tell whether more of the metal ends up solid than dissolved."""
    symbol = form.metal.text
    solid = sum(amount * catalogue().get(key).formula.count(symbol) for key, amount in end.precipitates.items())
    return solid * molar_mass(form.metal.formula) > 0.5 * end.dissolved_g


def _end(
    question: ContactQuestion, liquor: Liquor, form: MetalForm, branch: Judged, air: bool
) -> tuple[EndState | None, tuple[str, ...]]:
    """The end state of an attack; a note where it could not be found."""
    if branch.verdict != "attacked":
        return None, ()
    kilograms = liquor.composition.water_kg_per_L * question.volume_L
    metal = (
        None if question.metal_mass_g is None else question.metal_mass_g / molar_mass(form.metal.formula) / kilograms
    )
    by_id = {row.tried.oxidant.id: row.tried for row in branch.acting}

    def stops(oxidant: Oxidant, pH: NDArray[np.float64]) -> NDArray[np.bool_]:
        facts = contact_facts(liquor, form, [by_id[oxidant.id]], air, question.powder, pH)
        return ~judge(practice(form.metal.text), facts, np.zeros(len(pH), dtype=np.intp)).attacks

    reach = Reach(liquor, form, tuple(row.tried.oxidant for row in branch.acting), metal, kilograms)
    try:
        return end_state(reach, stops), ()
    except NotConvergedError:
        return None, ("the end state could not be computed with certainty and is left out",)


def _answer(
    question: ContactQuestion,
    liquor: Liquor,
    form: MetalForm,
    under_air: Judged,
    without: Judged,
    here: Judged,
    end: EndState | None,
    notes: tuple[str, ...],
) -> ContactAnswer:
    trials = tuple(sorted((_trial(row, here) for row in here.rows), key=lambda trial: -trial.emf_V))
    leading = here.leading
    tried = None if leading is None else leading.tried
    happenings = _happenings(here, form, end)
    hazards, cautions = _warnings(here)
    amounts = () if end is None else (_amount_note(question),)
    return ContactAnswer(
        statement=question.canonical,
        kind="contact",
        summary=contact_summary(form, here.verdict, tried, happenings, under_air.verdict, without.verdict),
        temperature_K=question.recipe.temperature,
        pressure_bar=PRESSURE
        if question.recipe.temperature <= 373.15
        else float(vapour_pressure(question.recipe.temperature)),
        assumptions=(*question.assumptions, *liquor.composition.notes, *saturation_notes(liquor), *amounts, *notes),
        validity=validity_notes(liquor),
        data_version=data_version(),
        verdict=here.verdict,
        metal=form.metal.name,
        metal_potential_V=float(form.potential[0]),
        trials=trials,
        without_air=_shown(without, form, None),
        under_air=_shown(under_air, form, None),
        air_matters=under_air.verdict != without.verdict,
        happenings=happenings,
        pace=here.judgement.pace_of() if here.verdict == "attacked" else None,
        end_state=end,
        reasons=contact_reasons(form, here.judgement, [row.tried for row in here.rows], tried, here.verdict),
        cautions=cautions,
        hazards=hazards,
        liquor=liquor_sheet(liquor),
        leading=None if leading is None else _trial(leading, here),
    )


def _amount_note(question: ContactQuestion) -> str:
    metal = "metal in excess" if question.metal_mass_g is None else f"{question.metal_mass_g:g} g of metal"
    return f"at rest: {question.volume_L:g} L of liquor and {metal}; no more air gets in than is dissolved at the start"


def _trial(row: Weighed, branch: Judged) -> Trial:
    return Trial(
        oxidant=row.tried.oxidant.id,
        title=row.tried.oxidant.title,
        reaction=str(row.reaction),
        electrons=row.reaction.transferred,
        emf_V=row.tried.driving,
        emf_uncertainty_V=row.tried.uncertainty,
        standard_emf_V=row.standard_emf,
        delta_G_kJ_mol=row.delta_G,
        log10_K=row.log10_K,
        potential_V=float(row.tried.oxidant.potential[0]),
        acts=row in branch.acting,
    )


def _shown(branch: Judged, form: MetalForm, end: EndState | None) -> Branch:
    acting = branch.acting
    leading = branch.leading.tried.oxidant.id if acting and branch.leading else None
    return Branch(branch.verdict, leading, _happenings(branch, form, end))


def _happenings(branch: Judged, form: MetalForm, end: EndState | None) -> tuple[Happening, ...]:
    """What is seen, once each, in the order of cause: the metal, what plates, gas, solids, what practice adds."""
    found: list[Happening] = []
    if branch.acting:
        found.append(
            Happening(
                "film" if form.product.phase == "s" and form.film is form.product else "dissolves", form.product.text
            )
        )
        for row in branch.acting:
            product = row.tried.oxidant.product
            if row.tried.oxidant.plated:
                found.append(Happening("plates", row.tried.oxidant.plated))
            elif product.phase == "g":
                found.append(Happening("gas", product.text))
    elif branch.verdict == "passive" and form.film is not None:
        found.append(Happening("film", form.film.text))
    found += [
        Happening("precipitate", key.partition("(s")[0])
        for key, amount in (end.precipitates if end else {}).items()
        if key != form.product.key and amount > NOTABLE
    ]
    if branch.rows:
        found += [one for _, effect in branch.judgement.effects_of("happening") if (one := _practised(effect, form))]
    return tuple(dict.fromkeys(found))


def _practised(effect: Effect, form: MetalForm) -> Happening | None:
    """A happening that practice adds; a film that nobody can name is left to the reasons."""
    species = effect.text.partition("(s")[0]
    if not species and effect.subject == "film":
        return None if form.film is None else Happening("film", form.film.text)
    return Happening(effect.subject, species or form.metal.text)


def _warnings(branch: Judged) -> tuple[tuple[Hazard, ...], tuple[Caution, ...]]:
    if not branch.rows:
        return (), ()
    judgement = branch.judgement
    hazards = [Hazard(effect.subject, effect.topic, effect.text) for _, effect in judgement.effects_of("hazard")]
    cautions = [Caution(effect.subject, effect.text) for _, effect in judgement.effects_of("caution")]
    return tuple(dict.fromkeys(hazards)), tuple(dict.fromkeys(cautions))

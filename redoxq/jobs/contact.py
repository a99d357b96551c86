"""The contact: a metal in a liquor, every oxidant tried, practice asked, the end worked out."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from redoxq.errors import NotConvergedError
from redoxq.jobs.answers import Branch, Caution, ContactAnswer, EndState, Happening, Hazard, Trial
from redoxq.jobs.end_state import Reach, end_state
from redoxq.jobs.facts import Tried, contact_facts
from redoxq.jobs.questions import ContactQuestion
from redoxq.jobs.sheets import liquor_sheet, saturation_notes, validity_notes
from redoxq.jobs.wording import contact_reasons, contact_summary
from redoxq.matter.catalogue import catalogue
from redoxq.matter.composition import split_component
from redoxq.matter.formula import molar_mass
from redoxq.matter.recipes import Air
from redoxq.matter.tables import data_version
from redoxq.rules.engine import Judgement, judge
from redoxq.rules.practice import practice
from redoxq.rules.rule import Effect
from redoxq.thermo.constants import F, R
from redoxq.thermo.couples import MetalForm, Oxidant, metal_form, oxidants
from redoxq.thermo.forms import TRACE
from redoxq.thermo.reactions import Reaction, combine, standard_quantities
from redoxq.thermo.speciation import Liquor, dissolved_oxygen, oxygen_pressure, speciate
from redoxq.thermo.water import vapour_pressure

COVERAGE = 2.0
"""Standard uncertainties are widened to cover 95 %."""

ENOUGH = 2e-3
"""Equivalents per kg of water from which an oxidant does more than dissolved oxygen can."""

COMMON = frozenset({"hydrogen", "oxygen", "metal ion"})
"""Kinds that a chemist thinks of first where nothing acts."""

NOTABLE = 1e-3
"""mol of a solid in the end state from which it is something that is seen."""

PRESSURE = 1.01325


@dataclass(frozen=True, slots=True)
class _Weighed:
    """One oxidant with its whole reaction, its driving force and how much of it there is."""

    tried: Tried
    reaction: Reaction
    standard_emf: float
    delta_G: float
    log10_K: float
    capacity: float


@dataclass(frozen=True, slots=True)
class _Branch:
    """A contact judged with or without air."""

    rows: tuple[_Weighed, ...]
    judgement: Judgement

    @property
    def verdict(self) -> str:
        return self.judgement.verdict_of() if self.rows else "immune"

    @property
    def acting(self) -> tuple[_Weighed, ...]:
        return tuple(row for row, acts in zip(self.rows, self.judgement.attacks, strict=True) if acts)

    @property
    def leading(self) -> _Weighed | None:
        """What does most: the strongest of the oxidants that there is enough of; else the strongest that might act."""
        if self.acting:
            return max(self.acting, key=lambda row: (row.capacity >= ENOUGH, row.tried.driving))
        idle = [row for k, row in enumerate(self.rows) if self._is_idle(k)]
        free = [row for row in self.rows if row not in idle]
        driven = [row for row in free if row.tried.driving > 0] or [row for row in idle if row.tried.driving > 0]
        first = driven or free or self.rows
        return max(first, key=lambda row: (row.tried.oxidant.kind in COMMON, row.tried.driving), default=None)

    def _is_idle(self, row: int) -> bool:
        return any(
            effect.kind == "oxidant" and effect.subject == "idle"
            for rule in self.judgement.rules_of_row(row)
            for effect in rule.effects
        )


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
    weighed = tuple(_weighed(aired, form, oxidant) for oxidant in _final(oxidants(aired, question.metal), aired))
    under_air = _judged(aired, form, weighed, True, question.powder)
    without = _judged(
        aired, form, tuple(row for row in weighed if row.tried.oxidant.id != "oxygen"), False, question.powder
    )
    here = under_air if open_to_air else without
    end, notes = _end(question, liquor, form, here, open_to_air)
    if end is not None and form.film is not None and not _coats(form, end):
        form = form.dissolved()
        under_air, without, here = (_with_product(branch, aired, form) for branch in (under_air, without, here))
    return _answer(question, liquor, form, under_air, without, here, end, notes)


def _coats(form: MetalForm, end: EndState) -> bool:
    """Tell whether more of the metal ends up solid than dissolved."""
    symbol = form.metal.text
    solid = sum(amount * catalogue().get(key).formula.count(symbol) for key, amount in end.precipitates.items())
    return solid * molar_mass(form.metal.formula) > 0.5 * end.dissolved_g


def _with_product(branch: _Branch, liquor: Liquor, form: MetalForm) -> _Branch:
    rows = tuple(_weighed(liquor, form, row.tried.oxidant) for row in branch.rows)
    return _Branch(rows, branch.judgement)


def _final(found: list[Oxidant], liquor: Liquor) -> list[Oxidant]:
    """Leave out reductions to a dissolved state that would rather go on to the metal (copper(I) without a ligand)."""
    plating = {oxidant.plated: float(oxidant.potential[0]) for oxidant in found if oxidant.plated}

    def stays(oxidant: Oxidant) -> bool:
        elements = {split_component(name)[0] for name in oxidant.changing}
        metal = next((plating[symbol] for symbol in elements if symbol in plating), None)
        if metal is None or oxidant.plated:
            return True
        before = max((float(total[0]) for name, total in liquor.totals.items() if name in oxidant.changing))
        shift = R * float(liquor.temperature[0]) / F * np.log(max(before / TRACE, 1.0)) / oxidant.half.electrons
        return bool(float(oxidant.potential[0]) - shift > metal)

    return [oxidant for oxidant in found if stays(oxidant)]


def _weighed(liquor: Liquor, form: MetalForm, oxidant: Oxidant) -> _Weighed:
    reaction = combine(oxidant.half, form.half)
    quantities = standard_quantities(reaction, liquor.temperature[:1])
    electrons = int(np.lcm(oxidant.half.electrons, form.half.electrons)) // _divisor(oxidant, form, reaction)
    spread = float(quantities.uncertainty[0]) / (electrons * F)
    activity = float(liquor.model.expected_error(liquor.state.ionic_strength)[0]) * 0.0257
    driving = float(oxidant.potential[0] - form.potential[0])
    return _Weighed(
        Tried(oxidant, driving, COVERAGE * float(np.hypot(spread, activity))),
        reaction,
        float(quantities.potential(electrons)[0]),
        float(quantities.delta_G[0]) / 1000.0,
        float(quantities.log10_K[0]),
        _capacity(liquor, oxidant),
    )


def _divisor(oxidant: Oxidant, form: MetalForm, reaction: Reaction) -> int:
    """What the combined reaction was divided by to make its numbers small."""
    common = int(np.lcm(oxidant.half.electrons, form.half.electrons))
    metal = next(-c for s, c in zip(form.half.species, form.half.coefficients, strict=True) if s is form.metal)
    whole = common // form.half.electrons * metal
    shown = next(c for s, c in zip(reaction.species, reaction.coefficients, strict=True) if s is form.metal)
    return abs(whole // shown)


def _capacity(liquor: Liquor, oxidant: Oxidant) -> float:
    """Electrons that an oxidant could take up, mol per kg of water."""
    if oxidant.id == "oxygen":
        return 4.0 * float(dissolved_oxygen(liquor)[0])
    if oxidant.id == "hydrogen":
        return np.inf
    return max(
        (oxidant.half.electrons * float(total[0]) for name, total in liquor.totals.items() if name in oxidant.changing),
        default=0.0,
    )


def _judged(liquor: Liquor, form: MetalForm, rows: tuple[_Weighed, ...], air: bool, powder: bool) -> _Branch:
    facts = contact_facts(liquor, form, [row.tried for row in rows], air, powder)
    return _Branch(rows, judge(practice(form.metal.text), facts))


def _end(
    question: ContactQuestion, liquor: Liquor, form: MetalForm, branch: _Branch, air: bool
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
    under_air: _Branch,
    without: _Branch,
    here: _Branch,
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


def _trial(row: _Weighed, branch: _Branch) -> Trial:
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


def _shown(branch: _Branch, form: MetalForm, end: EndState | None) -> Branch:
    acting = branch.acting
    leading = branch.leading.tried.oxidant.id if acting and branch.leading else None
    return Branch(branch.verdict, leading, _happenings(branch, form, end))


def _happenings(branch: _Branch, form: MetalForm, end: EndState | None) -> tuple[Happening, ...]:
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


def _warnings(branch: _Branch) -> tuple[tuple[Hazard, ...], tuple[Caution, ...]]:
    if not branch.rows:
        return (), ()
    judgement = branch.judgement
    hazards = [Hazard(effect.subject, effect.topic, effect.text) for _, effect in judgement.effects_of("hazard")]
    cautions = [Caution(effect.subject, effect.text) for _, effect in judgement.effects_of("caution")]
    return tuple(dict.fromkeys(hazards)), tuple(dict.fromkeys(cautions))

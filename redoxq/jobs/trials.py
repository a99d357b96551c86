"""Oxidants weighed against a metal: whole reactions, driving forces, and what practice makes of them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from redoxq.jobs.facts import Tried, contact_facts
from redoxq.matter.composition import split_component
from redoxq.rules.engine import Judgement, judge
from redoxq.rules.practice import practice
from redoxq.thermo.constants import LN10, F, R
from redoxq.thermo.couples import MetalForm, Oxidant
from redoxq.thermo.forms import TRACE, dissolved_form, electrode_potential, states_of
from redoxq.thermo.reactions import Reaction, combine, standard_gibbs_energy
from redoxq.thermo.speciation import Liquor, dissolved_oxygen

COVERAGE = 2.0
"""Standard uncertainties are widened to cover 95 %."""

ENOUGH = 2e-3
"""Equivalents per kg of water from which an oxidant does more than dissolved oxygen can."""

COMMON = frozenset({"hydrogen", "oxygen", "metal ion"})
"""Kinds that a chemist thinks of first where nothing acts."""


@dataclass(frozen=True, slots=True)
class Weighed:
    """One oxidant with its whole reaction, its driving force and how much of it there is."""

    tried: Tried
    reaction: Reaction
    standard_emf: float
    delta_G: float
    log10_K: float
    capacity: float


@dataclass(frozen=True, slots=True)
class Judged:
    """A contact judged with or without air."""

    rows: tuple[Weighed, ...]
    judgement: Judgement

    @property
    def verdict(self) -> str:
        """immune, passive, undecided or attacked."""
        return self.judgement.verdict_of() if self.rows else "immune"

    @property
    def acting(self) -> tuple[Weighed, ...]:
        """Oxidants that attack."""
        return tuple(row for row, acts in zip(self.rows, self.judgement.attacks, strict=True) if acts)

    @property
    def leading(self) -> Weighed | None:
        """What does most: the strongest of the oxidants that there is enough of; else the strongest that might act."""
        if self.acting:
            return max(self.acting, key=lambda row: (row.capacity >= ENOUGH, row.tried.driving))
        idle = [row for k, row in enumerate(self.rows) if self.is_idle(k)]
        free = [row for row in self.rows if row not in idle]
        if driven := [row for row in free if row.tried.driving > 0]:
            return max(driven, key=lambda row: (row.capacity >= ENOUGH, row.tried.driving))
        first = [row for row in idle if row.tried.driving > 0] or free or self.rows
        return max(first, key=lambda row: (row.tried.oxidant.kind in COMMON, row.tried.driving), default=None)

    def is_idle(self, row: int) -> bool:
        """Tell whether practice holds the oxidant of a row not to act."""
        return any(
            effect.kind == "oxidant" and effect.subject == "idle"
            for rule in self.judgement.rules_of_row(row)
            for effect in rule.effects
        )


def final_oxidants(found: list[Oxidant], liquor: Liquor, form: MetalForm) -> list[Oxidant]:
    """Leave out reductions that do not stop where they are written.

    A dissolved state that would rather go on to its metal (copper(I) without a ligand), and a metal that would rather
    stop at a lower state at the potential of the one it is to plate on (iron from iron(III) on copper).
    """
    plating = {oxidant.plated: float(oxidant.potential[0]) for oxidant in found if oxidant.plated}

    def stays(oxidant: Oxidant) -> bool:
        elements = {split_component(name)[0] for name in oxidant.changing}
        metal = next((plating[symbol] for symbol in elements if symbol in plating), None)
        if oxidant.plated:
            return _plates(oxidant, liquor, float(form.potential[0]))
        if metal is None:
            return True
        before = max((float(total[0]) for name, total in liquor.totals.items() if name in oxidant.changing))
        shift = R * float(liquor.temperature[0]) / F * np.log(max(before / TRACE, 1.0)) / oxidant.half.electrons
        return bool(float(oxidant.potential[0]) - shift > metal)

    return [oxidant for oxidant in found if stays(oxidant)]


def _plates(oxidant: Oxidant, liquor: Liquor, volts: float) -> bool:
    """Tell whether every state between the ion and its metal goes on to the metal at a potential (V)."""
    (component,) = (name for name in oxidant.changing if name in liquor.totals)
    total = max(float(liquor.totals[component][0]), TRACE)
    highest = split_component(component)[1] or 0
    for name in states_of(liquor, oxidant.plated):
        state = split_component(name)[1] or 0
        between = dissolved_form(liquor, name, total, fresh=True) if state < highest else None
        if between is not None and float(electrode_potential(between, state, liquor.temperature)[0]) < volts:
            return False
    return True


def weighed(liquor: Liquor, form: MetalForm, oxidant: Oxidant) -> Weighed:
    """Weigh one oxidant against a metal."""
    reaction = combine(oxidant.half, form.half)
    temperature = liquor.temperature[:1]
    delta_G, uncertainty = (float(value[0]) for value in standard_gibbs_energy(reaction, temperature))
    kelvin = float(temperature[0])
    electrons = int(np.lcm(oxidant.half.electrons, form.half.electrons)) // _divisor(oxidant, form, reaction)
    error = float(liquor.model.expected_error(liquor.state.ionic_strength)[0]) * R * kelvin / F
    driving = float(oxidant.potential[0] - form.potential[0])
    return Weighed(
        Tried(oxidant, driving, COVERAGE * float(np.hypot(uncertainty / (electrons * F), error))),
        reaction,
        -delta_G / (electrons * F),
        delta_G / 1000.0,
        -delta_G / (R * kelvin * LN10),
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


def judged(liquor: Liquor, form: MetalForm, rows: tuple[Weighed, ...], air: bool, powder: bool) -> Judged:
    """Let practice judge a contact with or without air; couples that water keeps frozen are no oxidants of it."""
    rules = practice(form.metal.text)
    first = Judged(rows, judge(rules, contact_facts(liquor, form, [row.tried for row in rows], air, powder)))
    live = tuple(row for k, row in enumerate(rows) if not (row.tried.oxidant.frozen and first.is_idle(k)))
    if len(live) == len(rows):
        return first
    return Judged(live, judge(rules, contact_facts(liquor, form, [row.tried for row in live], air, powder)))


def with_product(branch: Judged, liquor: Liquor, form: MetalForm) -> Judged:
    """The same verdict with its reactions written to another product of the metal."""
    rows = tuple(weighed(liquor, form, row.tried.oxidant) for row in branch.rows)
    return Judged(rows, branch.judgement)

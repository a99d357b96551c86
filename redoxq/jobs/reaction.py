"""A reaction typed as such: balanced if it is not, with its standard quantities."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from redoxq.errors import ReactionError
from redoxq.jobs.answers import ReactionAnswer, Reason
from redoxq.jobs.questions import ReactionQuestion, ReactionTerm
from redoxq.matter.catalogue import Species, catalogue
from redoxq.matter.formula import Formula, parse_formula
from redoxq.matter.ions import ions_of
from redoxq.matter.tables import data_version
from redoxq.thermo.balancing import is_balanced, null_vectors
from redoxq.thermo.constants import LN10, T0, F, R
from redoxq.thermo.reactions import Reaction, standard_quantities

ELECTRON = parse_formula("e-")
COVERAGE = 2.0
PRESSURE = 1.0

HELPERS: tuple[tuple[str, ...], ...] = ((), ("H2O",), ("H2O", "H+"), ("H+",), ("H2O", "H+", "e-"))
"""What is added, in this order of trial, to balance what was typed."""

Side = list[tuple[int, Formula]]


def reaction(question: ReactionQuestion) -> ReactionAnswer:
    """Answer with the standard quantities of a reaction.

    Raises
    ------
    ReactionError
        When it cannot be balanced, or balances in more ways than one.
    UnknownNameError
        When a substance is not in the tables.
    """
    left, right, notes = _balanced(question.left, question.right)
    made, more = _reaction(left, right)
    quantities = standard_quantities(made, np.array([question.temperature]))
    electrons = made.transferred
    sense = -1.0 if made.electrons < 0 else 1.0
    volts = None if not electrons else sense * float(quantities.potential(electrons)[0])
    spread = COVERAGE * float(quantities.uncertainty[0])
    slope = None if not electrons else sense * float(quantities.delta_S[0]) / (electrons * F) * 1000.0
    return ReactionAnswer(
        statement=question.canonical,
        kind="reaction",
        summary=_summary(made, volts, float(quantities.log10_K[0])),
        temperature_K=question.temperature,
        pressure_bar=PRESSURE,
        assumptions=(*question.assumptions, *notes, *more),
        validity=_validity(question.temperature),
        data_version=data_version(),
        reaction=str(made),
        electrons=electrons or None,
        standard_emf_V=volts,
        emf_uncertainty_V=None if not electrons else spread / (electrons * F),
        delta_G_kJ_mol=float(quantities.delta_G[0]) / 1000.0,
        delta_G_uncertainty_kJ_mol=spread / 1000.0,
        delta_H_kJ_mol=float(quantities.delta_H[0]) / 1000.0,
        delta_S_J_mol_K=float(quantities.delta_S[0]),
        log10_K=float(quantities.log10_K[0]),
        temperature_coefficient_mV_K=slope,
        reasons=tuple(_reason(species) for species in made.species),
    )


def _summary(made: Reaction, volts: float | None, log10_K: float) -> str:
    if made.electrons and volts is not None:
        way = "" if made.electrons > 0 else " (given for the reduction, as is the convention)"
        return f"E° is {volts:+.4f} V against the standard hydrogen electrode{way}."
    side = "to the right" if log10_K > 0 else "to the left"
    tail = "" if volts is None else f" E° of the cell that it would drive is {volts:+.4f} V."
    return f"The equilibrium lies {side}: log10 K is {log10_K:.2f}.{tail}"


def _validity(temperature: float) -> tuple[str, ...]:
    if temperature > 373.15:
        return ("above 100 °C heat capacities are carried on from below: figures are less certain",)
    return ()


def _reason(species: Species) -> Reason:
    made = f", from {species.derivation}" if species.derivation else ""
    note = f"; {species.note}" if species.note else ""
    text = f"ΔfG°({species.key}) {species.G:.2f} kJ/mol at 25 °C ({species.basis}{made}){note}"
    return Reason("table", text, species.source)


def _balanced(left: Sequence[ReactionTerm], right: Sequence[ReactionTerm]) -> tuple[Side, Side, tuple[str, ...]]:
    """Sides with whole numbers; what the user wrote where it balances, else balanced for him."""
    written = _as_written(left), _as_written(right)
    if written[0] is not None and written[1] is not None and is_balanced(written[0], written[1]):
        return written[0], written[1], ()
    formulas = ([term.formula for term in left], [term.formula for term in right])
    for extra in HELPERS:
        found = _with_helpers(*formulas, [parse_formula(text) for text in extra])
        if found is not None:
            added = [text for text in extra if any(f.text == text for f in _new(found, formulas))]
            note = "the numbers were balanced" + (f", with {' and '.join(added)} added" if added else "")
            return found[0], found[1], (note,)
    raise ReactionError(
        "This reaction cannot be balanced: some element or the charge stands on one side only.",
        hint="Check the formulas; add what is missing, such as O2, Cl- or e-.",
    )


def _new(found: tuple[Side, Side], formulas: tuple[list[Formula], list[Formula]]) -> list[Formula]:
    known = {f.text for side in formulas for f in side}
    return [f for side in found for _, f in side if f.text not in known]


def _as_written(terms: Sequence[ReactionTerm]) -> Side | None:
    numbers = [1 if term.coefficient is None else term.coefficient for term in terms]
    scale = int(np.lcm.reduce([int(getattr(n, "denominator", 1)) for n in numbers]))
    if scale != 1:
        return None
    return [(int(n), term.formula) for n, term in zip(numbers, terms, strict=True)]


def _with_helpers(left: list[Formula], right: list[Formula], extra: list[Formula]) -> tuple[Side, Side] | None:
    """Balance with helpers on whichever side they are needed; only when there is one way."""
    present = {f.text for f in (*left, *right)}
    extra = [f for f in extra if f.text not in present]
    formulas = [*left, *right, *extra]
    signs = [1] * len(left) + [-1] * len(right) + [1] * len(extra)
    vectors = null_vectors(formulas, signs)
    if len(vectors) != 1:
        if len(vectors) > 1 and not extra:
            raise ReactionError(
                "This reaction balances in more ways than one.",
                hint="Write the numbers, or split it into two reactions.",
            )
        return None
    vector = vectors[0]
    typed = vector[: len(left) + len(right)]
    if any(number < 0 for number in typed):
        vector, typed = [-n for n in vector], [-n for n in typed]
    if any(number <= 0 for number in typed):
        return None
    sides: tuple[Side, Side] = ([], [])
    for number, formula, sign in zip(vector, formulas, signs, strict=True):
        if number:
            sides[0 if number * sign > 0 else 1].append((abs(number), formula))
    return sides


def _reaction(left: Side, right: Side) -> tuple[Reaction, tuple[str, ...]]:
    """Find the species of every term; strong electrolytes are taken as their ions."""
    counts: dict[Species, int] = {}
    electrons = 0
    notes: list[str] = []
    for sign, side in ((-1, left), (1, right)):
        for number, formula in side:
            if formula.text == "e-":
                electrons -= sign * number
                continue
            for species, count in _species(formula, notes):
                counts[species] = counts.get(species, 0) + sign * number * count
    kept = {species: number for species, number in counts.items() if number}
    if not kept:
        raise ReactionError("Nothing changes in this reaction.", hint="Both sides hold the same dissolved ions.")
    return Reaction(tuple(kept), tuple(kept.values()), electrons), tuple(dict.fromkeys(notes))


def _species(formula: Formula, notes: list[str]) -> list[tuple[Species, int]]:
    rows = catalogue().all_of(formula.text)
    if formula.phase:
        rows = tuple(row for row in rows if row.phase == formula.phase)
    if formula.form:
        rows = tuple(row for row in rows if row.form == formula.form)
    if formula.charge or (formula.phase and rows):
        return [(_first(formula, rows, notes), 1)]
    ions = _ions(formula) if formula.phase in (None, "aq") else None
    if ions is not None and not any(_insoluble(row, ions) for row in rows):
        notes.append(f"{formula.text} is taken as its ions in water")
        return ions
    return [(_first(formula, rows, notes), 1)]


def _insoluble(solid: Species, ions: Sequence[tuple[Species, int]]) -> bool:
    """Tell whether a solid holds its ions back by its solubility product."""
    gain = sum(count * ion.G for ion, count in ions) - solid.G
    return solid.phase == "s" and gain > -SOLUBLE * R * T0 * LN10 / 1000.0


def _first(formula: Formula, rows: Sequence[Species], notes: list[str]) -> Species:
    if not rows:
        return catalogue().get(formula.text + (f"({formula.phase})" if formula.phase else ""))
    order = {"yes": 0, "film": 1, "no": 2, "": 0}
    zero = [row for row in rows if row.G == 0.0 and row.phase != "aq" and len(row.symbols) == 1]
    if formula.text == "H2O":
        zero = [row for row in rows if row.phase == "l"]
    chosen = (
        zero[0]
        if zero
        else min(
            rows,
            key=lambda row: (row.phase == "g", row.phase == "aq" and len(rows) > 1, order.get(row.precipitates, 0)),
        )
    )
    if len(rows) > 1 and formula.phase is None and formula.text != "H2O":
        notes.append(f"{formula.text} is taken as {chosen.key}")
    return chosen


def _ions(formula: Formula) -> list[tuple[Species, int]] | None:
    """Ions of a salt or strong acid whose parts are in the tables; None for a weak acid or a molecule."""
    parts = None if formula.water else ions_of(formula)
    if parts is None:
        return None
    found = [(catalogue().find(ion.text), count) for ion, count in parts]
    ions = [(species, count) for species, count in found if species is not None]
    dissolved = catalogue().find(formula.text)
    if len(ions) < len(found) or (dissolved is not None and _holds_together(dissolved, ions)):
        return None
    return ions


def _holds_together(dissolved: Species, ions: Sequence[tuple[Species, int]]) -> bool:
    """Tell a weak acid or a molecule, which stands for itself, from an ion pair, which means its salt."""
    gain = sum(count * ion.G for ion, count in ions) - dissolved.G
    return ions[0][0].key == "H+" or gain > -PAIRED * R * T0 * LN10 / 1000.0


SOLUBLE = -2.5
"""log10 of the solubility product above which a salt in a reaction means its ions."""

PAIRED = -5.0
"""log10 of the dissociation constant above which a dissolved salt is a pair of ions rather than a molecule."""

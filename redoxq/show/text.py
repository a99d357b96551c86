"""Answers as plain text for a terminal: verdict first, then figures, then reasons."""

from __future__ import annotations

import textwrap
from collections.abc import Callable, Iterator

from redoxq.errors import RedoxqError
from redoxq.jobs.answers import (
    Answer,
    ContactAnswer,
    EndState,
    LiquorAnswer,
    LiquorSheet,
    ReactionAnswer,
    SheetAnswer,
    Trial,
)
from redoxq.show.figures import amount, celsius, plus_minus, signed, significant

LABEL = 18
WIDTH = 96
MOST_SPECIES = 12


def render(answer: Answer, width: int = WIDTH) -> str:
    """Write an answer for a person.

    Parameters
    ----------
    answer : Answer
    width : int
        Columns to keep within.

    Returns
    -------
    str
        Without colour and without a final line feed.
    """
    writer = _WRITERS.get(type(answer), _plain)
    return "\n".join(line.rstrip() for line in writer(answer, max(width, 40)))


def render_error(sentence: str, error: RedoxqError, width: int = WIDTH) -> str:
    """Write an error under the sentence it is about, with a caret line where the place is known."""
    lines = []
    if error.at is not None and "\n" not in sentence:
        shown, start = _window(sentence, error.at.start, width)
        lines += [shown, " " * start + "^" * max(1, min(error.at.end - error.at.start, len(shown) - start))]
    lines += _wrapped(error.message, width)
    if error.hint:
        lines += _wrapped(error.hint, width)
    return "\n".join(lines)


def _window(sentence: str, start: int, width: int) -> tuple[str, int]:
    """The part of a long sentence around a place, made printable."""
    first = max(0, start - width // 2) if len(sentence) > width else 0
    part = sentence[first : first + width]
    return "".join(c if c.isprintable() else "·" for c in part), start - first


def _wrapped(text: str, width: int, indent: str = "") -> list[str]:
    return textwrap.wrap(text, width, initial_indent=indent, subsequent_indent=indent) or [""]


def _row(label: str, text: str, width: int) -> list[str]:
    body = textwrap.wrap(text, max(width - LABEL - 2, 20)) or [""]
    return [f"  {(label if k == 0 else ''):<{LABEL}}{line}" for k, line in enumerate(body)]


def _section(title: str) -> list[str]:
    return ["", f"  {title}"]


def _head(answer: Answer, word: str, width: int) -> list[str]:
    return [*_wrapped(f"{word.upper()}  {answer.statement}", width), *_wrapped(answer.summary, width)]


def _contact(answer: Answer, width: int) -> Iterator[str]:
    assert isinstance(answer, ContactAnswer)
    yield from _head(answer, answer.verdict, width)
    yield ""
    if answer.leading is not None:
        yield from _leading(answer.leading, width)
    yield from _row("without air", answer.without_air.verdict, width)
    if answer.under_air is not None:
        note = "" if answer.air_matters else " (air changes nothing)"
        yield from _row("with air", answer.under_air.verdict + note, width)
    if answer.happenings:
        yield from _row("seen", "; ".join(f"{h.what} {h.species}".strip() for h in answer.happenings), width)
    if answer.pace:
        yield from _row("pace", answer.pace, width)
    yield from _trials(answer, width)
    if answer.end_state is not None:
        yield from _end(answer.end_state, width)
    yield from _numbered("why", [f"{r.text} [{r.rule}; {r.source}]" for r in answer.reasons], width)
    yield from _numbered("assumed", list(answer.assumptions), width)
    yield from _numbered("reach", list(answer.validity), width)
    yield from _numbered("take care", [f"{c.topic}: {c.text}" for c in answer.cautions]
                         + [f"{h.gas}: {h.text}" for h in answer.hazards], width)


def _leading(trial: Trial, width: int) -> Iterator[str]:
    yield from _row("reaction", f"{trial.reaction}   ({trial.electrons} electrons)", width)
    yield from _row("driven by", f"{plus_minus(trial.emf_V, trial.emf_uncertainty_V, 'V')} at these activities; "
                    f"standard {signed(trial.standard_emf_V, 3)} V", width)
    yield from _row("energy", f"ΔG {significant(trial.delta_G_kJ_mol, 4)} kJ/mol; log10 K {trial.log10_K:.1f}", width)


def _trials(answer: ContactAnswer, width: int) -> Iterator[str]:
    if not answer.trials:
        return
    yield from _section(f"tried on {answer.metal} (at rest at {signed(answer.metal_potential_V, 3)} V vs SHE)")
    name = min(max(len(t.title) for t in answer.trials), width - 40)
    for trial in answer.trials:
        state = "acts" if trial.acts else ("held by practice" if trial.emf_V > 0 else "cannot")
        yield (f"    {trial.title[:name]:<{name}}  {signed(trial.potential_V, 3)} V   "
               f"drives {signed(trial.emf_V, 3)} V   {state}")


def _end(end: EndState, width: int) -> Iterator[str]:
    yield from _section("at rest")
    yield from _row("  pH", f"{end.pH:.2f}", width)
    yield from _row("  dissolved", f"{significant(end.dissolved_g, 3)} g", width)
    if end.plated:
        text = "; ".join(f"{key.removesuffix('(s)').removesuffix('(l)')} {significant(grams, 3)} g"
                         for key, grams in end.plated.items())
        yield from _row("  plated", text, width)
    for label, amounts in (("  gas", end.gas_mol), ("  solid", end.precipitates)):
        if amounts:
            yield from _row(label, "; ".join(f"{key} {significant(mol, 3)} mol" for key, mol in amounts.items()), width)
    for residue in end.residual:
        yield from _row("  left", f"{residue.species} {amount(residue.mol_kg)} mol/kg, "
                        f"{amount(residue.mg_L)} mg/L", width)
    for note in end.notes:
        yield from _row("  note", note, width)


def _numbered(title: str, texts: list[str], width: int) -> Iterator[str]:
    if not texts:
        return
    yield from _section(title)
    for number, text in enumerate(texts, 1):
        lines = textwrap.wrap(text, max(width - 7, 20)) or [""]
        yield f"   {number:>2}  {lines[0]}"
        yield from (f"       {line}" for line in lines[1:])


def _reaction(answer: Answer, width: int) -> Iterator[str]:
    assert isinstance(answer, ReactionAnswer)
    yield from _head(answer, "reaction", width)
    yield ""
    yield from _row("balanced", answer.reaction, width)
    if answer.standard_emf_V is not None:
        yield from _row("E°", f"{plus_minus(answer.standard_emf_V, answer.emf_uncertainty_V or 0.0, 'V')} "
                        f"({answer.electrons} electrons)", width)
    if answer.temperature_coefficient_mV_K is not None:
        yield from _row("dE°/dT", f"{signed(answer.temperature_coefficient_mV_K, 3)} mV/K", width)
    yield from _row("ΔG°", plus_minus(answer.delta_G_kJ_mol, answer.delta_G_uncertainty_kJ_mol, "kJ/mol"), width)
    yield from _row("ΔH°", f"{answer.delta_H_kJ_mol:.2f} kJ/mol", width)
    yield from _row("ΔS°", f"{answer.delta_S_J_mol_K:.1f} J/(mol K)", width)
    yield from _row("log10 K", f"{answer.log10_K:.2f}", width)
    yield from _row("at", celsius(answer.temperature_K), width)
    yield from _numbered("from", [f"{r.text} [{r.source}]" for r in answer.reasons], width)
    yield from _numbered("assumed", list(answer.assumptions), width)
    yield from _numbered("reach", list(answer.validity), width)


def _sheet(answer: Answer, width: int) -> Iterator[str]:
    assert isinstance(answer, SheetAnswer)
    yield from _head(answer, "about", width)
    yield ""
    for figure in answer.figures:
        value = figure.value if isinstance(figure.value, str) else (
            plus_minus(figure.value, figure.uncertainty, "") if figure.uncertainty else f"{figure.value:g}")
        yield from _row(figure.name, f"{value} {figure.unit}".strip() + f"   [{figure.source}]", width)
    yield from _numbered("near it in the tables", list(answer.related), width)
    yield from _numbered("assumed", list(answer.assumptions), width)
    yield from _numbered("reach", list(answer.validity), width)


def _liquor(answer: Answer, width: int) -> Iterator[str]:
    assert isinstance(answer, LiquorAnswer)
    yield from _head(answer, "liquor", width)
    yield ""
    yield from _liquor_rows(answer.liquor, width)
    for key, mol in answer.precipitates.items():
        yield from _row("settles out", f"{key} {amount(mol)} mol/kg", width)
    yield from _numbered("assumed", list(answer.assumptions), width)
    yield from _numbered("reach", list(answer.validity), width)
    yield from _numbered("take care", [f"{h.gas}: {h.text}" for h in answer.hazards], width)


def _liquor_rows(sheet: LiquorSheet, width: int) -> Iterator[str]:
    yield from _row("pH", f"{sheet.pH:.2f}", width)
    yield from _row("ionic strength", f"{significant(sheet.ionic_strength_mol_kg, 3)} mol/kg", width)
    yield from _row("density", f"{sheet.density_kg_m3:.0f} kg/m³", width)
    yield from _row("water activity", f"{sheet.water_activity:.4f}", width)
    if sheet.osmotic_coefficient is not None:
        yield from _row("osmotic coeff.", f"{sheet.osmotic_coefficient:.3f}", width)
    for salt, value in sheet.mean_activity_coefficient.items():
        yield from _row("mean act. coeff.", f"{value:.3f} ({salt}, all ions counted as free)", width)
    yield from _row("activities by", sheet.activity_model, width)
    yield from _section("dissolved")
    for content in sheet.species[:MOST_SPECIES]:
        yield f"    {content.species:<16}{amount(content.mol_kg):>12} mol/kg   activity {amount(content.activity)}"


def _plain(answer: Answer, width: int) -> Iterator[str]:
    yield from _head(answer, answer.kind, width)
    yield from _numbered("assumed", list(answer.assumptions), width)


_WRITERS: dict[type[Answer], Callable[[Answer, int], Iterator[str]]] = {
    ContactAnswer: _contact,
    ReactionAnswer: _reaction,
    SheetAnswer: _sheet,
    LiquorAnswer: _liquor,
}

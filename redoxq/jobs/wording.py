"""The sentences of a contact's answer: the summary, and the chain of reasons, thermodynamics first."""

from __future__ import annotations

from collections.abc import Sequence

from redoxq.jobs.answers import Happening, Reason
from redoxq.jobs.facts import Tried
from redoxq.jobs.sheets import sources_of
from redoxq.matter.elements import elements
from redoxq.rules.engine import Judgement
from redoxq.thermo.couples import MetalForm

COMPUTED = "thermodynamics"


def contact_summary(
    form: MetalForm,
    verdict: str,
    leading: Tried | None,
    happenings: Sequence[Happening],
    with_air: str,
    without_air: str,
) -> str:
    """One plain sentence: the verdict, who does it, what is seen, and whether air decides."""
    metal = form.metal.name.capitalize()
    text = _VERDICTS[verdict].format(metal=metal, seen=_seen(happenings), by=_by(leading))
    if with_air != without_air:
        text += f" Air decides: {with_air} with it, {without_air} without."
    return text


_VERDICTS = {
    "attacked": "{metal} is attacked{by}: {seen}.",
    "passive": "{metal} could react{by}, but practice holds it back.",
    "immune": "{metal} does not react: nothing in this liquor can oxidise it.",
    "undecided": "{metal} is at the edge{by}: the driving force is within its own uncertainty.",
}


def _by(leading: Tried | None) -> str:
    return "" if leading is None else f" by {leading.oxidant.title} ({leading.driving:+.2f} V)"


def _seen(happenings: Sequence[Happening]) -> str:
    words = [_HAPPENINGS.get(one.what, "{species}: " + one.what).format(species=_named(one)) for one in happenings]
    return ", ".join(words) or "it dissolves"


_HAPPENINGS = {
    "dissolves": "it dissolves as {species}",
    "plates": "{species} plates out",
    "gas": "{species} comes off",
    "film": "it coats over with {species}",
    "precipitate": "{species} settles out",
    "pitting": "it pits",
    "dealloys": "{species} is leached out",
    "embrittles": "it takes up hydrogen and turns brittle",
}


def _named(one: Happening) -> str:
    if one.what == "plates" and one.species in elements():
        return elements()[one.species].name
    return one.species


def contact_reasons(
    form: MetalForm, judgement: Judgement, tried: Sequence[Tried], leading: Tried | None, verdict: str
) -> tuple[Reason, ...]:
    """The chain of reasons.

    Parameters
    ----------
    form : MetalForm
    judgement : Judgement
        Its rows are those of `tried`.
    tried : sequence of Tried
    leading : Tried or None
    verdict : str
    """
    chain = [_metal_reason(form)]
    order = sorted(range(len(tried)), key=lambda row: (tried[row] is not leading, -tried[row].driving))
    seen: set[str] = set()
    for row in order:
        one = tried[row]
        if one.driving <= 0 and one is not leading:
            continue
        chain.append(_oxidant_reason(one))
        for rule in judgement.rules_of_row(row):
            if rule.id not in seen and any(effect.settles or effect.kind == "pace" for effect in rule.effects):
                seen.add(rule.id)
                chain.append(Reason(rule.id, rule.because, rule.source))
    if verdict == "immune":
        chain.append(
            Reason(
                COMPUTED, "No oxidant of the liquor stands above the metal, so no reaction is possible.", "second law"
            )
        )
    return tuple(chain)


def _metal_reason(form: MetalForm) -> Reason:
    kind = "solid" if form.product.phase == "s" else "dissolved form"
    text = (
        f"The most stable {kind} of the metal here is {form.product.key}; {form.half} is at rest at "
        f"{float(form.potential[0]):+.3f} V vs SHE."
    )
    return Reason(COMPUTED, text, sources_of(species.source for species in form.half.species))


def _oxidant_reason(one: Tried) -> Reason:
    sense = "above" if one.driving > 0 else "below"
    text = (
        f"{one.oxidant.title}: {one.oxidant.half} stands at {float(one.oxidant.potential[0]):+.3f} V vs SHE, "
        f"{abs(one.driving):.3f} V {sense} the metal (± {one.uncertainty:.3f} V)."
    )
    return Reason(COMPUTED, text, sources_of(species.source for species in one.oxidant.half.species))

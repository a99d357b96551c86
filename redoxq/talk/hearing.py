"""Names as people say them: without the words that tell only the shape of a metal or that a liquor is one."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from contextlib import suppress

from redoxq.errors import FormulaError, Place, RedoxqError, SentenceError, UnknownNameError
from redoxq.matter import names
from redoxq.matter.formula import Formula, parse_formula
from redoxq.matter.synonyms import usual_form
from redoxq.talk.statement import Phrase

_POWDERS = frozenset({"powder", "dust", "filings"})
_SHAPES = _POWDERS | frozenset([
    "rod", "rods", "plate", "plates", "sheet", "sheets", "wire", "wires", "bar", "bars", "strip",
    "strips", "foil", "foils", "coupon", "coupons", "tube", "tubes", "pipe", "pipes", "block", "blocks",
    "ingot", "ingots", "nail", "nails", "screw", "screws", "bolt", "bolts", "coil", "coils", "shaft",
    "fastener", "fasteners", "sample", "electrode", "part", "parts", "chips", "rack", "basket", "anode",
    "piece", "pieces", "shot", "turnings", "granules", "metal", "metallic", "pure", "clean", "solid",
    "put", "dip", "immerse", "place", "hang", "dipped", "immersed", "placed", "hung",
])
_LIQUORS = frozenset(["solution", "solutions", "liquor", "liquors", "aqueous", "dilute", "dissolved"])


def metal_heard(phrase: Phrase) -> tuple[str, bool]:
    """Return the symbol of a metal and whether it is a powder.

    Raises
    ------
    UnknownNameError
        For a name that is in no table.
    SentenceError
        For a substance that is no metal.
    """
    words = phrase.text.split()
    powder = any(word.lower() in _POWDERS for word in words)
    spoken = _without(words, _SHAPES)
    try:
        return names.metal(spoken), powder
    except RedoxqError as error:
        raise _no_metal(spoken, phrase) or located(error, phrase) from None


def _no_metal(spoken: str, phrase: Phrase) -> SentenceError | None:
    """The error for a substance that is known but no metal."""
    try:
        kind = names.substance(spoken).kind
    except RedoxqError:
        return None
    told = "" if kind == "water" else f" but {'an' if kind[0] in 'aeiou' else 'a'} {kind}"
    message = f"{spoken} is not a metal{told}."
    return SentenceError(message, phrase.at, 'Say the metal first: "zinc in 0.5 M CuSO4".')


def substance_heard(phrase: Phrase, defined: Iterable[str] = ()) -> names.Substance:
    """Return what an ingredient is.

    Raises
    ------
    UnknownNameError, FormulaError
        Placed, with the nearest names, those of defined liquors first.
    """
    try:
        return names.substance(_without(phrase.text.split(), _LIQUORS))
    except RedoxqError as error:
        near = difflib.get_close_matches(phrase.text.casefold(), list(defined), 1)
        if near:
            error.hint = f"Nearest: {near[0]}, which you defined."
        raise located(error, phrase) from None


def formula_heard(phrase: Phrase) -> Formula:
    """Return the formula of a species or a named substance; the electron is one.

    Raises
    ------
    FormulaError
        When the text is neither.
    """
    try:
        return usual_form(parse_formula(phrase.text))
    except FormulaError as error:
        with suppress(UnknownNameError, FormulaError):
            return names.substance(phrase.text).formula
        raise located(error, phrase) from None


def located(error: RedoxqError, phrase: Phrase) -> RedoxqError:
    """Move the place of an error from within a name to within the sentence."""
    inner = error.at
    if inner is not None and phrase.at.end - phrase.at.start == len(phrase.text):
        error.at = Place(phrase.at.start + inner.start, phrase.at.start + inner.end)
    else:
        error.at = phrase.at
    return error


def _without(words: list[str], idle: frozenset[str]) -> str:
    kept = [word for word in words if word.lower() not in idle]
    while kept and kept[0] == "of":
        kept = kept[1:]
    return " ".join(kept or words)

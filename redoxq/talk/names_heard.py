"""Names as people say them: without the words that tell only the shape of a metal or that a liquor is one."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from contextlib import suppress

from redoxq.errors import FormulaError, Place, RecipeError, RedoxqError, SentenceError, UnknownNameError
from redoxq.matter import names
from redoxq.matter.formula import Formula, parse_formula
from redoxq.talk.statement import Phrase

_POWDERS = frozenset({"powder", "dust", "filings"})
_SHAPES = _POWDERS | frozenset([
    "rod", "rods", "plate", "plates", "sheet", "sheets", "wire", "wires", "bar", "bars", "strip",
    "strips", "foil", "foils", "coupon", "coupons", "tube", "tubes", "pipe", "pipes", "block", "blocks",
    "ingot", "ingots", "rack", "basket", "anode", "piece", "pieces", "shot", "turnings", "granules",
    "metal", "metallic", "pure", "clean", "solid", "put", "dip", "immerse", "place", "hang", "dipped",
    "immersed", "placed", "hung",
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
        with suppress(RedoxqError):
            substance = names.substance(spoken)
            raise SentenceError(f"{spoken} is not a metal ({_with_article(substance.kind)}).", phrase.at,
                                'Say the metal first: "zinc in 0.5 M CuSO4".') from None
        raise located(error, phrase) from None


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
            error.hint = f"Defined is: {near[0]}."
        raise located(error, phrase) from None


def formula_heard(phrase: Phrase) -> Formula:
    """Return the formula of a species or a named substance; the electron is one.

    Raises
    ------
    FormulaError
        When the text is neither.
    """
    try:
        return parse_formula(phrase.text)
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


def acidic_or_charged(formula: Formula, ion: Formula, at: Place) -> int:
    """Equivalents that one formula holds when an ion is counted, times its charge.

    Raises
    ------
    RecipeError
        When the formula does not hold that ion.
    """
    atoms = dict(formula.atoms)
    if ion.text == "H+":
        count = _acidic_hydrogens(formula)
    elif ion.text == "OH-":
        count = formula.text.count("OH") and min(atoms.get("O", 0), atoms.get("H", 0))
    else:
        count = min(atoms.get(element, 0) // number for element, number in ion.atoms)
    if not count or not ion.charge:
        message = f"{formula.text} does not hold {ion.text}."
        raise RecipeError(message, at, "Name an ion that it gives to water.")
    return count * abs(ion.charge)


def _acidic_hydrogens(formula: Formula) -> int:
    """Hydrogen written first (H2SO4), or that of carboxyl groups (CH3COOH)."""
    carboxyl = formula.text.count("COOH")
    if carboxyl:
        return carboxyl
    return formula.atoms[0][1] if formula.atoms and formula.atoms[0][0] == "H" else 0


def _without(words: list[str], idle: frozenset[str]) -> str:
    kept = [word for word in words if word.lower() not in idle]
    while kept and kept[0] == "of":
        kept = kept[1:]
    return " ".join(kept or words)


def _with_article(kind: str) -> str:
    return kind if kind == "water" else f"an {kind}" if kind[0] in "aeiou" else f"a {kind}"

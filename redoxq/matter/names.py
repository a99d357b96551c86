"""Names of substances and metals: systematic, everyday and older ones, and formulas in any notation."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cache, lru_cache

from redoxq.errors import DataError, FormulaError, Place, UnknownNameError
from redoxq.matter.catalogue import catalogue
from redoxq.matter.composition import components
from redoxq.matter.elements import elements
from redoxq.matter.formula import LONGEST, Formula, parse_formula
from redoxq.matter.ions import Ion, compound_named, ion_named, ions, plain_name, salt_text
from redoxq.matter.kinds import kind_of, meant_by
from redoxq.matter.nearest import nearest_of
from redoxq.matter.synonyms import usual_form
from redoxq.matter.tables import read_table

__all__ = ["Ion", "Substance", "ions", "known_names", "metal", "nearest", "salt_text", "substance"]

_OLD_ELEMENTS = {"wolfram": "W", "quicksilver": "Hg", "columbium": "Nb"}
_WORDS = re.compile(r"[A-Za-z][a-z']*(\([ivIV]+\))?([ -][A-Za-z'()]+)*$")
_ION_WORD = re.compile(r"\s*\b(?:ions?|cations?|anions?)$")
_STATE = re.compile(r"\([iv]+\)")
_SHORT = re.compile(r"^conc(?:entrated|\.)?\s+", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class Substance:
    """Something that a sentence can name.

    Attributes
    ----------
    formula : Formula
    name : str
        As the tables call it.
    kind : str
        salt, acid, base, gas, solute, solid, metal, ion or water.
    strength : float or None
        wt% of the solution that goes by this name.
    """

    formula: Formula
    name: str
    kind: str
    strength: float | None = None


@cache
def _everyday() -> Mapping[str, Mapping[str, str]]:
    return {plain_name(row["name"]): row for row in read_table("names.csv")}


@cache
def _metal_names() -> Mapping[str, str]:
    """Names of the metals of the catalogue to their symbols."""
    table = elements()
    named = {plain_name(table[symbol].name): symbol for symbol in catalogue().metals}
    return {**named, **{name: s for name, s in _OLD_ELEMENTS.items() if s in catalogue().metals}}


def metal(text: str) -> str:
    """Return the symbol of a metal from its name or symbol.

    Raises
    ------
    UnknownNameError
        With the nearest metals.
    """
    spoken = " ".join(text.split())
    if spoken in catalogue().metals:
        return spoken
    folded = plain_name(spoken)
    found = _metal_names().get(folded)
    if found:
        return found
    near = nearest_of(folded, _metal_names(), 3, 0.6)
    near += [symbol for symbol in catalogue().metals if symbol.casefold() == folded]
    raise UnknownNameError(f'I know no metal called "{spoken[:60]}".', hint=_hint(near))


@lru_cache(maxsize=4096)
def substance(text: str) -> Substance:
    """Return what a name or a formula stands for.

    Raises
    ------
    UnknownNameError
        For a name in no table, with the nearest three.
    FormulaError
        For what is plainly a formula but cannot be read.
    """
    spoken = " ".join(text.split())
    if len(spoken) <= LONGEST:
        found = _named(spoken)
        if found is not None:
            return found
        if _looks_like_formula(spoken):
            return _from_formula(spoken)
    raise UnknownNameError(f'I know no substance called "{spoken[:60]}".', Place(0, len(text)), _hint(nearest(spoken)))


def _named(spoken: str) -> Substance | None:
    folded = _SHORT.sub("concentrated ", plain_name(spoken))
    row = _everyday().get(folded)
    # A name that is a formula counts only as it is written: `hf` is not `HF`.
    if row is not None and (row["name"] == spoken or not _is_formula_name(row["name"])):
        strength = float(row["strength_wt"]) if row["strength_wt"] else None
        return Substance(parse_formula(row["formula"]), row["name"], row["kind"], strength)
    symbol = _metal_names().get(folded)
    if symbol:
        return Substance(parse_formula(symbol), folded, "metal")
    compound = compound_named(folded)
    if compound is not None:
        return Substance(compound, spoken, kind_of(compound))
    ion = ion_named(_ION_WORD.sub("", folded))
    if ion is not None and (folded not in _element_names()):
        return Substance(ion.formula, spoken, "ion")
    return None


def _is_formula_name(name: str) -> bool:
    return any(character.isdigit() for character in name)


@cache
def _element_names() -> frozenset[str]:
    return frozenset(plain_name(element.name) for element in elements().values())


def _looks_like_formula(spoken: str) -> bool:
    if not _WORDS.match(spoken):
        return True
    return spoken in elements() or (" " not in spoken and spoken[0].isupper() and not spoken[1:].islower())


def _from_formula(spoken: str) -> Substance:
    try:
        formula = usual_form(parse_formula(spoken))
        if meant := meant_by(formula):
            raise UnknownNameError(f"{spoken} is no substance.", Place(0, len(spoken)), f"Nearest: {meant}.")
        components(formula)
    except FormulaError as error:
        near = [key for key in _formulas() if key.casefold() == spoken.casefold()][:3] or nearest(spoken)
        if near or not any(character.isdigit() for character in spoken):
            raise UnknownNameError(f'I know no substance called "{spoken[:60]}".', error.at, _hint(near)) from None
        raise
    except DataError:
        raise UnknownNameError(
            f"I cannot tell the oxidation states in {spoken}, so I cannot say what it does in water.",
            Place(0, len(spoken)),
            _hint(nearest(spoken)),
        ) from None
    return Substance(formula, formula.text, kind_of(formula))


@cache
def _formulas() -> tuple[str, ...]:
    return tuple({one.text: None for one in catalogue().species})


@lru_cache(maxsize=1024)
def nearest(text: str, n: int = 3) -> list[str]:
    """Up to `n` known names or formulas near a text; none where nothing is near."""
    folded = plain_name(text[:60])
    same = [formula for formula in _formulas() if formula.casefold() == folded]
    begun = [name for name in _everyday() if len(folded) > 2 and name.startswith(folded)]
    close = nearest_of(folded, [*_everyday(), *_metal_names(), *_near_salts(folded)], n, 0.75)
    found = list(dict.fromkeys([*same, *begun[:1], *close, *begun]))[:n]
    return [_STATE.sub(lambda state: state[0].upper(), name) for name in found]


def _near_salts(folded: str) -> list[str]:
    """Salts whose two names are both near those said."""
    cations, anions = _ion_names()
    words = folded.split()
    found = []
    for cut in range(1, min(len(words), 4)):
        first, second = " ".join(words[:cut]), " ".join(words[cut:])
        near = [first] if first in cations else nearest_of(first, cations, 2, 0.7)
        found += [f"{cation} {anion}" for cation in near for anion in nearest_of(second, anions, 2, 0.7)]
    return found


@cache
def _ion_names() -> tuple[tuple[str, ...], tuple[str, ...]]:
    """All plain names of cations and of anions."""
    cations = [plain_name(name) for ion in ions() if "+" in ion.text for name in ion.names]
    anions = [plain_name(name) for ion in ions() if "+" not in ion.text for name in ion.names]
    return tuple(dict.fromkeys(cations)), tuple(dict.fromkeys(anions))


@cache
def _spelled() -> tuple[str, ...]:
    usual = [ion for ion in ions() if ion.usual]
    cations = [ion.names[-1] if "(" in ion.names[0] else ion.names[0] for ion in usual if "+" in ion.text]
    anions = [ion.names[0] for ion in usual if "+" not in ion.text]
    return (*_everyday(), *_metal_names(), *(f"{c} {a}" for c in cations for a in anions))


def known_names(kind: str | None = None) -> list[str]:
    """Names for completion: of metals, or of everything."""
    if kind == "metal":
        return sorted(_metal_names())
    names: Iterable[str] = _spelled() if kind is None else (n for n, row in _everyday().items() if row["kind"] == kind)
    return sorted(set(names))


def _hint(near: list[str]) -> str:
    return (
        f"Nearest: {', '.join(near)}." if near else "Write a formula such as CuSO4, or a name such as copper sulfate."
    )

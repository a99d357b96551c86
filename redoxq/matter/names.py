"""Names of substances and metals: systematic, everyday and older ones, and formulas in any notation."""

from __future__ import annotations

import difflib
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cache, lru_cache

from redoxq.errors import DataError, FormulaError, Place, UnknownNameError
from redoxq.matter.catalogue import catalogue
from redoxq.matter.composition import components
from redoxq.matter.elements import elements
from redoxq.matter.formula import Formula, parse_formula
from redoxq.matter.tables import read_table

_HYDRATES = {
    "monohydrate": 1,
    "dihydrate": 2,
    "trihydrate": 3,
    "tetrahydrate": 4,
    "pentahydrate": 5,
    "hexahydrate": 6,
    "heptahydrate": 7,
    "octahydrate": 8,
    "nonahydrate": 9,
    "decahydrate": 10,
    "dodecahydrate": 12,
    "octadecahydrate": 18,
}
_OLD_ELEMENTS = {
    "aluminum": "Al",
    "cesium": "Cs",
    "sulphur": "S",
    "wolfram": "W",
    "quicksilver": "Hg",
    "columbium": "Nb",
}
_ACIDS = frozenset({"HCl", "HBr", "HI", "HF", "H2SO4", "HNO3", "H3PO4", "HClO4", "HClO3", "HCN"})
_BASES = frozenset({"NaOH", "KOH", "LiOH", "NH3", "Ca(OH)2", "Ba(OH)2"})
_WORD_FORM = re.compile(r"[A-Za-z][a-z']*(\([ivIV]+\))?([ -][A-Za-z'()]+)*$")


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


@dataclass(frozen=True, slots=True)
class Ion:
    """An ion of the table of ions; `usual` where a name without a state means it."""

    text: str
    names: tuple[str, ...]
    usual: bool

    @property
    def formula(self) -> Formula:
        """The formula, read when it is asked for."""
        return parse_formula(self.text)


@cache
def ions() -> tuple[Ion, ...]:
    """The table of ions."""
    return tuple(
        Ion(row["formula"], tuple(row["names"].split("|")), row["usual"] == "1")
        for row in read_table("ions.csv")
    )


@cache
def _everyday() -> Mapping[str, Mapping[str, str]]:
    return {row["name"].casefold(): row for row in read_table("names.csv")}


@cache
def _ions_by_name() -> Mapping[str, Ion]:
    return {name.casefold(): ion for ion in reversed(ions()) for name in ion.names}


@cache
def _metal_names() -> Mapping[str, str]:
    """Names of the metals of the catalogue, and their symbols, to symbols."""
    table = elements()
    named = {table[symbol].name.casefold(): symbol for symbol in catalogue().metals}
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
    found = _metal_names().get(spoken.casefold())
    if found:
        return found
    near = difflib.get_close_matches(spoken.casefold(), _metal_names(), 3, 0.6)
    raise UnknownNameError(f'I know no metal called "{spoken}".', hint=_hint(near))


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
    found = _named(spoken)
    if found is not None:
        return found
    if len(spoken) <= 120 and _looks_like_formula(spoken):
        return _from_formula(spoken)
    raise UnknownNameError(f'I know no substance called "{spoken[:60]}".', Place(0, len(text)), _hint(nearest(spoken)))


def _named(spoken: str) -> Substance | None:
    folded = spoken.casefold()
    row = _everyday().get(folded)
    if row is not None:
        strength = float(row["strength_wt"]) if row["strength_wt"] else None
        return Substance(parse_formula(row["formula"]), row["name"], row["kind"], strength)
    symbol = _metal_names().get(folded)
    if symbol:
        return Substance(parse_formula(symbol), folded, "metal")
    words = folded.split()
    for cut in range(1, len(words)):
        compound = _compound(" ".join(words[:cut]), words[cut:])
        if compound is not None:
            return Substance(compound, spoken, "base" if compound.text in _BASES else "salt")
    return _ion_named(folded)


def _ion_named(folded: str) -> Substance | None:
    ion = _ions_by_name().get(re.sub(r"\s*\b(ions?|cations?|anions?)$", "", folded))
    if ion is None or (
        ion.formula.charge > 0
        and folded in ion.names
        and not folded.endswith(("ous", "ic", ")"))
        and "ion" not in folded
    ):
        return None
    return Substance(ion.formula, folded, "ion")


def _compound(cation_name: str, rest: list[str]) -> Formula | None:
    """A salt from the names of its ions, with crystal water where it is named."""
    water = _HYDRATES.get(rest[-1])
    anion_name = " ".join(rest[:-1] if water else rest)
    cation, anion = _ions_by_name().get(cation_name), _ions_by_name().get(anion_name)
    if cation is None or anion is None or cation.formula.charge <= 0 or anion.formula.charge >= 0:
        return None
    text = salt_text(cation.formula, anion.formula)
    return parse_formula(f"{text}.{water if water > 1 else ''}H2O" if water else text)


def salt_text(cation: Formula, anion: Formula) -> str:
    """Formula of the neutral salt of two ions: `Fe2(SO4)3`, `(NH4)2SO4`."""
    plus, minus = cation.charge, -anion.charge
    divisor = next(k for k in (4, 3, 2, 1) if plus % k == 0 and minus % k == 0)
    return _times(cation, minus // divisor) + _times(anion, plus // divisor)


def _times(ion: Formula, count: int) -> str:
    bare = re.sub(r"[+-]\d*$", "", ion.text)
    if count == 1:
        return bare
    single = len(ion.atoms) == 1 and ion.atoms[0][1] == 1
    return f"{bare}{count}" if single else f"({bare}){count}"


def _looks_like_formula(spoken: str) -> bool:
    if not _WORD_FORM.match(spoken) or (spoken[0].isupper() and not spoken[1:].isalpha()):
        return True
    return (
        spoken[0].isupper() and len(spoken) <= 12 and " " not in spoken and spoken not in (spoken.capitalize(),)
    ) or spoken in elements()


def _from_formula(spoken: str) -> Substance:
    try:
        formula = parse_formula(spoken)
        components(formula)
    except FormulaError as error:
        near = [key for key in _formulas() if key.casefold() == spoken.casefold()][:3] or nearest(spoken)
        if not any(character.isdigit() for character in spoken) or near:
            raise UnknownNameError(f'I know no substance called "{spoken[:60]}".', error.at, _hint(near)) from None
        raise
    except DataError as error:
        raise UnknownNameError(f"I cannot tell what {spoken} is made of.", Place(0, len(spoken)), error.hint) from None
    return Substance(formula, formula.text, _kind(formula))


def _kind(formula: Formula) -> str:
    text = formula.text
    for row in _everyday().values():
        if row["formula"] == text:
            return row["kind"]
    if formula.charge:
        return "ion"
    if text in catalogue().metals:
        return "metal"
    if text in _ACIDS or text in _BASES:
        return "acid" if text in _ACIDS else "base"
    return "gas" if len(formula.atoms) == 1 and formula.atoms[0][0] in ("H", "O", "N", "Cl", "F") else "salt"


@cache
def _formulas() -> tuple[str, ...]:
    return tuple({one.text: None for one in catalogue().species})


@lru_cache(maxsize=1024)
def nearest(text: str, n: int = 3) -> list[str]:
    """Up to `n` known names or formulas near a text; none where nothing is near."""
    folded = text.casefold()[:60]
    same = [formula for formula in _formulas() if formula.casefold() == folded]
    close = difflib.get_close_matches(folded, _spelled(), n, 0.7)
    return [*same, *close][:n]


@cache
def _spelled() -> tuple[str, ...]:
    usual = [ion for ion in ions() if ion.usual]
    cations = [ion.names[-1] if "(" in ion.names[0] else ion.names[0] for ion in usual if ion.formula.charge > 0]
    anions = [ion.names[0] for ion in usual if ion.formula.charge < 0]
    return (*_everyday(), *_metal_names(), *(f"{c} {a}" for c in cations for a in anions))


def known_names(kind: str | None = None) -> list[str]:
    """Names for completion: of metals, or of everything."""
    if kind == "metal":
        return sorted(_metal_names())
    names: Iterable[str] = _spelled() if kind is None else (n for n, row in _everyday().items() if row["kind"] == kind)
    return sorted(set(names))


def _hint(near: list[str]) -> str | None:
    return (
        f"Nearest: {', '.join(near)}." if near else "Write a formula such as CuSO4, or a name such as copper sulfate."
    )

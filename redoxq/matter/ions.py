"""Ions and the salts they make: systematic and older names, from the table of ions."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cache, lru_cache
from itertools import product
from math import gcd

from redoxq.matter.elements import elements
from redoxq.matter.formula import SYMBOL, Formula, parse_formula
from redoxq.matter.tables import read_table

NUMERALS = {"i": 1, "ii": 2, "iii": 3, "iv": 4, "v": 5, "vi": 6, "vii": 7, "viii": 8}
_PREFIXES = {"mono": 1, "di": 2, "tri": 3, "tetra": 4, "penta": 5, "hexa": 6, "hepta": 7, "octa": 8, "nona": 9,
             "deca": 10, "dodeca": 12, "octadeca": 18}  # fmt: skip
_HYDROGENS = {1: "hydrogen ", 2: "dihydrogen "}

_SPELLINGS = (("sulph", "sulf"), ("aluminum", "aluminium"), ("cesium", "caesium"))
_STATE = re.compile(r"\s*\(\s*(viii|vii|vi|v|iv|iii|ii|i)\s*\)|[ -](viii|vii|vi|iv|iii|ii|i)(?=\s|$)")
_SYMBOL_FIRST = re.compile(r"([A-Z][a-z]?)(?=\s*\(\s*[ivIV]+\s*\)|-[IV]+\b|\s+[a-z])")
_STATED = re.compile(r"(.+)\((\w+)\)$")
_HYDRATE = re.compile(r"(?:(\d+)-?|([a-z]+))hydrate$")
_SEVERAL = re.compile(r"(mono|di|tri|tetra|penta|hexa)(.+)$")
_SIMPLE = ("fluoride", "chloride", "bromide", "iodide", "oxide", "sulfide")


@dataclass(frozen=True, slots=True)
class Ion:
    """An ion of the table; `usual` where a name without a state means it."""

    text: str
    names: tuple[str, ...]
    usual: bool

    @property
    def formula(self) -> Formula:
        """The formula, read when it is asked for."""
        return parse_formula(self.text)

    @property
    def symbols(self) -> frozenset[str]:
        """Elements, told from the letters alone."""
        return frozenset(SYMBOL.findall(self.text))


@cache
def ions() -> tuple[Ion, ...]:
    """The table of ions."""
    return tuple(
        Ion(row["formula"], tuple(row["names"].split("|")), row["usual"] == "1") for row in read_table("ions.csv")
    )


def plain_name(text: str) -> str:
    """A name in one spelling: small letters, `copper(ii)` for `Cu II`, `sulf` for `sulph`.

    Parameters
    ----------
    text : str
        As said.
    """
    spoken = " ".join(text.split())
    symbol = _SYMBOL_FIRST.match(spoken)
    if symbol and symbol[1] in elements():
        spoken = elements()[symbol[1]].name + spoken[symbol.end() :]
    folded = _STATE.sub(lambda found: f"({found[1] or found[2]})", spoken.casefold())
    for other, usual in _SPELLINGS:
        folded = folded.replace(other, usual)
    return folded


@cache
def _by_name() -> Mapping[str, Ion]:
    return {plain_name(name): ion for ion in reversed(ions()) for name in ion.names}


def ion_named(name: str) -> Ion | None:
    """The ion of a plain name; a state that the usual ion has may be said: `zinc(ii)`."""
    found = _by_name().get(name)
    if found is not None:
        return found
    stated = _STATED.match(name)
    usual = _by_name().get(stated[1]) if stated else None
    if stated is None or usual is None:
        return None
    return usual if usual.formula.charge == NUMERALS.get(stated[2]) else None


def salt_text(cation: Formula, anion: Formula) -> str:
    """Formula of the neutral salt of two ions: `Fe2(SO4)3`, `(NH4)2SO4`."""
    plus, minus = cation.charge, -anion.charge
    divisor = gcd(plus, minus)
    return _times(cation, minus // divisor) + _times(anion, plus // divisor)


@lru_cache(maxsize=1024)
def ions_of(formula: Formula) -> tuple[tuple[Formula, int], tuple[Formula, int]] | None:
    """Cation and anion that make a neutral salt or acid, each with its number; None where no two known ions do."""
    usable = [ion.formula for ion in ions() if ion.symbols <= formula.elements]
    for cation, anion in product(usable, usable):
        if cation.charge > 0 > anion.charge and salt_text(cation, anion) == formula.text:
            divisor = gcd(cation.charge, anion.charge)
            return (cation, -anion.charge // divisor), (anion, cation.charge // divisor)
    return None


def _times(ion: Formula, count: int) -> str:
    if count == 1:
        return ion.bare
    single = len(ion.atoms) == 1 and ion.atoms[0][1] == 1
    return f"{ion.bare}{count}" if single else f"({ion.bare}){count}"


def compound_named(name: str) -> Formula | None:
    """Formula of a compound from the names of its ions.

    Parameters
    ----------
    name : str
        Plain name: `copper(ii) sulfate pentahydrate`, `disodium phosphate`, `tin tetrachloride`.

    Returns
    -------
    Formula or None
        None where the words name no two ions.
    """
    spoken = name.split()
    words, water = _crystal_water(spoken) if spoken else (spoken, 0)
    for cut in range(1, len(words)):
        pair = _pair(" ".join(words[:cut]), " ".join(words[cut:]))
        if pair is not None:
            return parse_formula(_with_water(salt_text(*pair), water))
    return None


def _crystal_water(words: Sequence[str]) -> tuple[Sequence[str], float]:
    """The words without that of a hydrate, and the water that it counts."""
    found = _HYDRATE.match(words[-1])
    if not found:
        return words, 0
    if found[2] == "hemi":
        return words[:-1], 0.5
    number = int(found[1][:3]) if found[1] else _PREFIXES.get(found[2], 0)
    return (words[:-1], number) if number else (words, 0)


def _with_water(text: str, water: float) -> str:
    if not water:
        return text
    if water == 0.5:
        return f"2{text}.H2O"
    return f"{text}.{water if water > 1 else ''}H2O"


def _pair(cation_name: str, anion_name: str) -> tuple[Formula, Formula] | None:
    """Cation and anion of two names, where they go together."""
    for cation, anion in _readings(cation_name, anion_name):
        if cation is not None and anion is not None and cation.formula.charge > 0 > anion.formula.charge:
            return cation.formula, anion.formula
    return None


def _readings(cation_name: str, anion_name: str) -> Iterator[tuple[Ion | None, Ion | None]]:
    """What two names can mean: plain, `tin tetrachloride`, `disodium phosphate`."""
    anion = ion_named(anion_name)
    yield ion_named(cation_name), anion
    several = _SEVERAL.match(anion_name)
    if several and several[2] in _SIMPLE:
        simple = ion_named(several[2])
        total = -_PREFIXES[several[1]] * simple.formula.charge if simple else 0
        yield _of_charge(cation_name, total), simple
    counted = _SEVERAL.match(cation_name)
    if counted and anion:
        cation = ion_named(counted[2])
        hydrogens = -anion.formula.charge - _PREFIXES[counted[1]] * (cation.formula.charge if cation else 0)
        yield cation, anion if hydrogens == 0 else ion_named(_HYDROGENS.get(hydrogens, "no ") + anion_name)


def _of_charge(element: str, charge: int) -> Ion | None:
    """The ion of an element with a charge."""
    for ion in ions():
        if ion.formula.charge == charge and any(plain_name(name).partition("(")[0] == element for name in ion.names):
            return ion
    return None

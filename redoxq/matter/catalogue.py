"""The catalogue of species: rows of `data/species`, found by key and by the elements in them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache, cached_property

from redoxq.errors import DataError, UnknownNameError
from redoxq.matter.composition import components
from redoxq.matter.formula import SYMBOL, Formula, parse_formula
from redoxq.matter.nearest import nearest_of
from redoxq.matter.tables import Row, number_in, read_table, table_names

COLUMNS = (
    "formula",
    "phase",
    "form",
    "name",
    "G_kJ_mol",
    "H_kJ_mol",
    "S_J_mol_K",
    "Cp_J_mol_K",
    "uncertainty_kJ_mol",
    "precipitates",
    "basis",
    "source",
    "derivation",
    "note",
    "states",
)
MANDATORY = ("formula", "phase", "G_kJ_mol", "uncertainty_kJ_mol", "basis", "source")
PHASES = ("aq", "s", "l", "g")


@dataclass(frozen=True, eq=False)
class Species:
    """One row of the tables.

    Attributes
    ----------
    text : str
        Canonical formula.
    phase, form : str
        aq, s, l or g; a word that tells solids of one formula apart, or nothing.
    name : str
    G, H : float, float or None
        Formation at 298.15 K and 1 bar, kJ/mol.
    S, Cp : float or None
        J/(mol K).
    uncertainty : float
        Standard uncertainty of the row's own part of G, kJ/mol.
    precipitates, basis, source, derivation, note : str
    states : str
        Oxidation states where the formula does not tell them.
    file, line : str, int
        Where the row stands.
    """

    text: str
    phase: str
    form: str
    name: str
    G: float
    H: float | None
    S: float | None
    Cp: float | None
    uncertainty: float
    precipitates: str
    basis: str
    source: str
    derivation: str
    note: str
    states: str
    file: str
    line: int

    @cached_property
    def key(self) -> str:
        """Formula with its phase: `Cu+2`, `AgCl(s)`, `HgS(s, red)`, `O2(g)`; aqueous species carry none."""
        if self.phase == "aq":
            return self.text
        return f"{self.text}({self.phase}, {self.form})" if self.form else f"{self.text}({self.phase})"

    @cached_property
    def symbols(self) -> frozenset[str]:
        """Elements, told from the letters alone."""
        return frozenset(SYMBOL.findall(self.text))

    @cached_property
    def formula(self) -> Formula:
        return parse_formula(self.text)

    @cached_property
    def components(self) -> Mapping[str, int]:
        return components(self.formula, self.states or None)


class Catalogue:
    """All species, in the order of the files."""

    def __init__(self, species: tuple[Species, ...]) -> None:
        self.species = species
        self._by_key: dict[str, Species] = {}
        for one in species:
            if one.key in self._by_key:
                raise DataError(
                    f"{one.file}, row {one.line}: {one.key} stands a second time.",
                    hint=f"The first is in {self._by_key[one.key].file}.",
                )
            self._by_key[one.key] = one
        self._of_elements: dict[frozenset[str], tuple[Species, ...]] = {}

    def get(self, key: str) -> Species:
        """Return the species of a key; an aqueous one may carry `(aq)`.

        Raises
        ------
        UnknownNameError
            With the nearest keys.
        """
        found = self.find(key)
        if found is None:
            near = nearest_of(key, self._by_key, 3, 0.6)
            raise UnknownNameError(
                f'The tables hold no species "{key}".', hint=f"Nearest: {', '.join(near)}." if near else None
            )
        return found

    def find(self, key: str) -> Species | None:
        """Return the species of a key, or None."""
        return self._by_key.get(key) or self._by_key.get(key.removesuffix("(aq)"))

    def all_of(self, text: str) -> tuple[Species, ...]:
        """All rows of one formula, whatever the phase."""
        return self._by_text.get(text, ())

    @cached_property
    def _by_text(self) -> Mapping[str, tuple[Species, ...]]:
        found: dict[str, tuple[Species, ...]] = {}
        for one in self.species:
            found[one.text] = (*found.get(one.text, ()), one)
        return found

    def of_elements(self, symbols: frozenset[str]) -> tuple[Species, ...]:
        """All species made of no other elements than these."""
        found = self._of_elements.get(symbols)
        if found is None:
            found = tuple(one for one in self.species if one.symbols <= symbols)
            self._of_elements[symbols] = found
        return found

    def metal(self, symbol: str) -> Species:
        """The element as it stands at room temperature, as a metal.

        Raises
        ------
        UnknownNameError
        """
        found = self.metals.get(symbol)
        if found is None:
            raise UnknownNameError(f"The tables hold no metal {symbol}.")
        return found

    def has_metal(self, symbol: str) -> bool:
        return symbol in self.metals

    @cached_property
    def metals(self) -> Mapping[str, Species]:
        """Condensed elements by symbol, those that no work would hang in a tank left out."""
        return {
            one.text: one
            for one in self.species
            if one.phase in ("s", "l") and SYMBOL.fullmatch(one.text) and one.G == 0.0 and one.text not in NOT_METALS
        }


NOT_METALS = frozenset({"C", "S", "P", "B", "Si", "I", "Br", "Se", "Te", "As", "Ge"})


@cache
def catalogue() -> Catalogue:
    """The catalogue of the installed tables."""
    return Catalogue(tuple(species for name in table_names("species") for species in load(name, read_table(name))))


def load(name: str, rows: tuple[Row, ...]) -> list[Species]:
    """Turn the rows of a table into species.

    Raises
    ------
    DataError
        With file, row and column.
    """
    if rows and (missing := [column for column in COLUMNS[:-1] if column not in rows[0]]):
        raise DataError(f"{name}: the columns {', '.join(missing)} are missing.")
    return [_species(row, name, line) for line, row in enumerate(rows, 2)]


def _species(row: Row, name: str, line: int) -> Species:
    if not all(map(str.strip, map(row.__getitem__, MANDATORY))):
        column = next(column for column in MANDATORY if not row[column].strip())
        raise DataError(f"{name}, row {line}, column {column}: the cell is blank.")
    if row["phase"] not in PHASES:
        raise DataError(f'{name}, row {line}, column phase: "{row["phase"]}" is none of {", ".join(PHASES)}.')
    numbers = [number_in(row, column, name, line) for column in COLUMNS[4:9]]
    return Species(
        row["formula"].strip(),
        row["phase"],
        row["form"],
        row["name"],
        numbers[0] or 0.0,
        numbers[1],
        numbers[2],
        numbers[3],
        numbers[4] or 0.0,
        row["precipitates"],
        row["basis"],
        row["source"],
        row["derivation"],
        row["note"],
        row.get("states", ""),
        name,
        line,
    )

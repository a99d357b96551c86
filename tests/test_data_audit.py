"""The tables read as a stranger would: sources, bases, energies that agree, names that lead somewhere."""

import csv
import re
from pathlib import Path

import pytest

from redoxq.matter.catalogue import Species, catalogue
from redoxq.matter.composition import components
from redoxq.matter.elements import elements
from redoxq.matter.formula import Formula, parse_formula
from redoxq.matter.names import metal, substance
from redoxq.thermo.balancing import is_balanced
from redoxq.thermo.constants import T0
from redoxq.thermo.derivation import ELECTRON, energy_that_follows, parse_derivation, roots
from redoxq.thermo.gibbs import reference_elements

DATA = Path(__file__).parent.parent / "data"
SPECIES = catalogue().species
BY_KEY = pytest.mark.parametrize("species", SPECIES, ids=[one.key for one in SPECIES])
DERIVED = [one for one in SPECIES if one.derivation]

HYDROGEN_ENTROPY = 130.68
"""J/(mol K) of H2: an ion of charge z stands against z/2 of it (CODATA 1989)."""

AGREEMENT = 0.6
"""kJ/mol by which G may differ from H - T S of the elements."""


def rows(name: str) -> list[dict[str, str]]:
    with (DATA / name).open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def known_sources() -> set[str]:
    return {row["code"] for row in rows("sources.csv")}


def tables() -> list[Path]:
    return sorted(DATA.rglob("*.csv"))


def is_reference(species: Species) -> bool:
    """An element in its reference state, or the hydrogen ion."""
    return species.key == "H+" or (species.phase != "aq" and len(species.symbols) == 1 and species.G == 0.0)


@BY_KEY
def test_formula_is_canonical_and_resolved(species: Species) -> None:
    assert species.formula.text == species.text
    assert species.text in ("H+", "OH-", "H2O") or species.components
    assert set(dict(species.formula.atoms)) == set(species.symbols) <= set(elements())


@BY_KEY
def test_row_is_complete(species: Species) -> None:
    assert species.name.strip()
    assert species.basis in ("published", "memory", "derived")
    assert species.source in known_sources()
    assert (species.basis == "derived") == bool(species.derivation)
    assert species.uncertainty > 0 or is_reference(species)


@BY_KEY
def test_solids_tell_whether_they_precipitate(species: Species) -> None:
    if species.phase == "s":
        assert species.precipitates in ("yes", "film", "no")
    elif species.phase in ("aq", "g"):
        assert not species.precipitates


@BY_KEY
def test_energy_agrees_with_enthalpy_and_entropy(species: Species) -> None:
    if species.H is None or species.S is None:
        return
    table = reference_elements()
    from_elements = sum(count * table[symbol][0] for symbol, count in species.formula.atoms)
    entropy = species.S - from_elements + 0.5 * species.formula.charge * HYDROGEN_ENTROPY
    difference = abs(species.G - (species.H - T0 * entropy / 1000.0))
    assert difference <= AGREEMENT or (species.note and difference <= 2.0), f"{difference:.2f} kJ/mol"


@pytest.mark.parametrize("species", DERIVED, ids=[one.key for one in DERIVED])
def test_derivation_is_balanced_and_gives_the_energy(species: Species) -> None:
    terms = parse_derivation(species.derivation).terms
    assert terms.get(species.key), "a row is in its own derivation"
    sides: dict[bool, list[tuple[int, Formula]]] = {True: [], False: []}
    for key, count in terms.items():
        text = "e-" if key == ELECTRON else catalogue().get(key).text
        sides[count > 0].append((abs(count), parse_formula(text)))
    assert is_balanced(sides[False], sides[True])
    assert energy_that_follows(species) == pytest.approx(species.G, abs=0.05)


@pytest.mark.parametrize("species", DERIVED, ids=[one.key for one in DERIVED])
def test_derivation_ends_in_rows_that_stand_alone(species: Species) -> None:
    assert _depth(species, ()) < 20
    assert all(root.uncertainty >= 0 for root in roots(species))


def _depth(species: Species, above: tuple[str, ...]) -> int:
    assert species.key not in above, f"{' <- '.join((*above, species.key))} is a circle"
    if not species.derivation:
        return 0
    keys = parse_derivation(species.derivation).terms
    others = [catalogue().get(key) for key in keys if key not in (species.key, ELECTRON)]
    return 1 + max((_depth(one, (*above, species.key)) for one in others), default=0)


def test_no_species_stands_twice() -> None:
    keys = [one.key for one in SPECIES]
    assert len(keys) == len(set(keys))


def test_each_element_has_one_reference_state() -> None:
    found = [next(iter(one.symbols)) for one in SPECIES if is_reference(one) and one.key != "H+"]
    assert len(found) == len(set(found))
    assert set(found) == {symbol for one in SPECIES for symbol in one.symbols}


def test_the_tables_are_as_wide_as_promised() -> None:
    assert len(SPECIES) >= 900
    assert len(catalogue().metals) >= 30
    assert len({symbol for one in SPECIES for symbol in one.symbols}) >= 60


@pytest.mark.parametrize("path", tables(), ids=lambda path: str(path.relative_to(DATA)))
def test_table_is_rectangular(path: Path) -> None:
    with path.open(encoding="utf-8", newline="") as file:
        header, *body = csv.reader(file)
    assert len(header) == len(set(header))
    assert all(len(row) <= len(header) for row in body)
    assert all(any(cell.strip() for cell in row) for row in body)
    if "source" in header:
        column = header.index("source")
        assert {row[column] for row in body} <= known_sources()


def test_every_source_is_used_and_stands_once() -> None:
    codes = [row["code"] for row in rows("sources.csv")]
    assert len(codes) == len(set(codes))
    assert all(row["publication"].strip() for row in rows("sources.csv"))
    used = {row["source"] for path in tables() for row in rows(str(path.relative_to(DATA))) if row.get("source")}
    cited = " ".join(path.read_text(encoding="utf-8") for path in DATA.rglob("*.rules"))
    notes = " ".join(one.note for one in SPECIES)
    used |= {code for code in codes if re.search(rf"\b{re.escape(code)}\b", f"{cited} {notes}")}
    assert set(codes) <= used


@pytest.mark.parametrize("row", rows("names.csv"), ids=lambda row: row["name"])
def test_everyday_name_leads_to_its_formula(row: dict[str, str]) -> None:
    formula = parse_formula(row["formula"])
    assert formula.charge == 0 or row["kind"] == "ion"
    found = substance(row["name"]).formula
    assert (found.text, found.atoms) == (formula.text, formula.atoms)
    if row["strength_wt"]:
        assert 0 < float(row["strength_wt"]) < 100


@pytest.mark.parametrize("row", rows("ions.csv"), ids=lambda row: row["formula"])
def test_ion_is_made_of_what_the_catalogue_knows(row: dict[str, str]) -> None:
    formula = parse_formula(row["formula"])
    assert formula.text == row["formula"]
    assert formula.charge
    held = {component for one in SPECIES for component in one.components}
    assert set(components(formula)) <= held


def test_no_two_ions_share_a_name() -> None:
    names = [name for row in rows("ions.csv") for name in row["names"].split("|")]
    assert not {name for name in names if names.count(name) > 1}


@pytest.mark.parametrize("symbol", sorted(catalogue().metals))
def test_metal_is_known_by_symbol_and_name(symbol: str) -> None:
    assert metal(symbol) == metal(elements()[symbol].name) == symbol

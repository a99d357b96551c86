"""The catalogue of species: keys, look-up, and what is wrong in a row."""

from __future__ import annotations

import pytest

from redoxq.errors import DataError, UnknownNameError
from redoxq.matter.catalogue import COLUMNS, Catalogue, catalogue, load
from redoxq.matter.tables import Row


def row(**cells: str) -> Row:
    usual = {"formula": "AgCl", "phase": "s", "G_kJ_mol": "-109.8", "uncertainty_kJ_mol": "0.1", "basis": "published",
             "source": "CRC"}  # fmt: skip
    return {**dict.fromkeys(COLUMNS, ""), **usual, **cells}


@pytest.mark.parametrize(
    ("cells", "key"),
    [
        ({"formula": "Cu+2", "phase": "aq"}, "Cu+2"),
        ({"formula": "NH3", "phase": "aq"}, "NH3"),
        ({}, "AgCl(s)"),
        ({"formula": "HgS", "form": "red"}, "HgS(s, red)"),
        ({"formula": "O2", "phase": "g"}, "O2(g)"),
    ],
)
def test_keys(cells: dict[str, str], key: str) -> None:
    (species,) = load("species/mine.csv", (row(**cells),))
    assert species.key == key


def test_a_species_is_found_by_key() -> None:
    tables = catalogue()
    assert tables.get("Cu+2").formula.charge == 2
    assert tables.get("NH3(aq)") is tables.get("NH3")
    assert tables.find("Cu+9") is None
    assert tables.get("O2(g)").phase == "g"


def test_an_unknown_key_is_told_with_the_nearest() -> None:
    with pytest.raises(UnknownNameError) as raised:
        catalogue().get("AgCI(s)")
    assert "AgCl(s)" in (raised.value.hint or "")


def test_species_of_elements() -> None:
    found = {one.key for one in catalogue().of_elements(frozenset({"Cu", "H", "O"}))}
    assert {"Cu(s)", "Cu+2", "Cu2O(s)", "H2O(l)", "O2(g)"} <= found
    assert all(one.formula.elements <= {"Cu", "H", "O"} for one in catalogue().of_elements(frozenset({"Cu", "H", "O"})))


def test_elements_told_from_the_letters_are_those_of_the_formula() -> None:
    assert [one.key for one in catalogue().species if one.symbols != one.formula.elements] == []


def test_metals() -> None:
    assert catalogue().metal("Hg").phase == "l"
    assert {"Zn", "Fe", "Ag", "Sn", "Hg", "Ti", "Na"} <= set(catalogue().metals)
    assert not {"C", "S", "I", "P", "Br"} & set(catalogue().metals)
    with pytest.raises(UnknownNameError):
        catalogue().metal("S")


@pytest.mark.parametrize(
    ("cells", "told"),
    [
        ({"G_kJ_mol": ""}, "row 2, column G_kJ_mol"),
        ({"source": " "}, "row 2, column source"),
        ({"G_kJ_mol": "low"}, 'row 2, column G_kJ_mol: "low"'),
        ({"H_kJ_mol": "nan"}, "row 2, column H_kJ_mol"),
        ({"S_J_mol_K": "inf"}, "row 2, column S_J_mol_K"),
        ({"phase": "solid"}, "row 2, column phase"),
    ],
)
def test_a_row_that_breaks_the_rules_is_told_with_its_place(cells: dict[str, str], told: str) -> None:
    with pytest.raises(DataError, match=told) as raised:
        load("species/mine.csv", (row(**cells),))
    assert "species/mine.csv" in raised.value.message


def test_missing_columns_are_told() -> None:
    with pytest.raises(DataError, match="uncertainty_kJ_mol"):
        load("species/mine.csv", ({"formula": "AgCl", "phase": "s", "G_kJ_mol": "-109.8"},))


def test_a_species_that_stands_twice_is_told() -> None:
    with pytest.raises(DataError, match="second time"):
        Catalogue(tuple(load("species/mine.csv", (row(), row()))))

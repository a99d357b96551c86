"""Formulas that people write in several ways."""

from __future__ import annotations

import pytest

from redoxq.matter.catalogue import catalogue
from redoxq.matter.formula import parse_formula
from redoxq.matter.synonyms import usual_form


@pytest.mark.parametrize(
    ("written", "usual"),
    [
        ("OCl-", "ClO-"),
        ("HOCl", "HClO"),
        ("NCS-", "SCN-"),
        ("C2H3O2-", "CH3COO-"),
        ("CH3COONa", "NaCH3COO"),
        ("Pb(C2H3O2)2.3H2O", "Pb(CH3COO)2.3H2O"),
        ("B(OH)3", "H3BO3"),
        ("HOH", "H2O"),
        ("[Cr(H2O)6]3+", "Cr+3"),
        ("CuSO4", "CuSO4"),
        ("NH4OCN", "NH4OCN"),
        ("CO(NH2)2", "CH4N2O"),
        ("C6H12O6", "C6H12O6"),
    ],
)
def test_usual_forms(written: str, usual: str) -> None:
    assert usual_form(parse_formula(written)).text == usual


def test_the_phase_is_kept() -> None:
    formula = usual_form(parse_formula("B(OH)3(s)"))
    assert (formula.text, formula.phase) == ("H3BO3", "s")


def test_a_species_of_the_tables_is_its_own_usual_form() -> None:
    assert [one.key for one in catalogue().species if usual_form(one.formula) != one.formula] == []

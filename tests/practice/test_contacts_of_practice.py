"""Contacts that every works knows: displacement, acids, alkalis, films. All are common practice, from memory."""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from redoxq import ask

CONTACTS = [
    (row["sentence"], row["verdict"].split("|"))
    for row in csv.DictReader((Path(__file__).parent / "contacts.csv").open(encoding="utf-8"))
]


@pytest.mark.parametrize(("sentence", "verdicts"), CONTACTS)
def test_verdict(sentence: str, verdicts: list[str]) -> None:
    assert ask(sentence).to_dict()["verdict"] in verdicts


def seen(sentence: str) -> set[tuple[str, str]]:
    return {(one["what"], one["species"]) for one in ask(sentence).to_dict()["happenings"]}


@pytest.mark.parametrize(
    ("sentence", "what"),
    [
        ("zinc in 0.5 M copper sulfate", {("plates", "Cu"), ("dissolves", "Zn+2")}),
        ("silver in 1 M HI", {("gas", "H2")}),
        ("aluminium in 1 M NaOH", {("gas", "H2"), ("dissolves", "Al(OH)4-")}),
        ("lead in 1 M H2SO4", {("film", "PbSO4")}),
        ("copper in 6 M HNO3", {("gas", "NO"), ("dissolves", "Cu+2")}),
        ("gold in 0.01 M NaCN", {("dissolves", "Au(CN)2-")}),
        ("copper in 0.1 M AgNO3", {("plates", "Ag"), ("dissolves", "Cu+2")}),
        ("zinc in 1 M HCl", {("gas", "H2"), ("dissolves", "Zn+2")}),
        ("iron in 0.5 M CuSO4", {("plates", "Cu"), ("dissolves", "Fe+2")}),
    ],
)
def test_what_is_seen(sentence: str, what: set[tuple[str, str]]) -> None:
    assert what <= seen(sentence)


def test_zinc_and_copper_sulfate_in_figures() -> None:
    """Common practice: zinc 0 to +2, copper +2 to 0, two electrons, 1.10 V; the residue follows from log10 K 37."""
    answer = ask("zinc in 0.5 M copper sulfate").to_dict()
    assert answer["reaction"] == "Zn + Cu+2 -> Zn+2 + Cu"
    assert answer["electrons"] == 2
    assert answer["standard_emf_V"] == pytest.approx(1.10, abs=0.005)
    assert answer["log10_K"] == pytest.approx(37.2, abs=0.3)
    left = {one["species"]: one["mol_kg"] for one in answer["end_state"]["residual"]}
    assert 1e-39 < left["Cu+2"] < 1e-37
    assert answer["end_state"]["plated_g"] == pytest.approx(0.5 * 63.546, rel=1e-3)


def test_nitric_acid_on_copper_carries_a_caution() -> None:
    answer = ask("copper in 6 M HNO3").to_dict()
    assert any(one["gas"].startswith("NO") for one in answer["hazards"])

"""Solubility products that follow from the tables against published ones."""

import pytest
from reference_tables import Published, published, quantities

PRODUCTS = published("solubility")


@pytest.mark.parametrize("row", PRODUCTS, ids=str)
def test_solubility_product(row: Published) -> None:
    reaction, found = quantities(row.reaction)
    assert reaction.electrons == 0
    assert found.log10_K[0] == pytest.approx(row.value, abs=row.tolerance), row.source


def test_there_are_forty() -> None:
    assert len({row.reaction for row in PRODUCTS}) >= 40


def test_every_row_tells_its_source_and_a_tolerance_that_can_fail() -> None:
    assert all(row.source.strip() for row in PRODUCTS)
    assert all(0 < row.tolerance <= 0.6 for row in PRODUCTS)

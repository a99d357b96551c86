"""Stability, hydrolysis and acid constants that follow from the tables against published ones."""

import pytest
from reference_tables import Published, published, quantities

CONSTANTS = published("stability")
ACIDS = [row for row in CONSTANTS if row.file == "acids"]


@pytest.mark.parametrize("row", CONSTANTS, ids=str)
def test_constant(row: Published) -> None:
    reaction, found = quantities(row.reaction)
    assert reaction.electrons == 0
    assert found.log10_K[0] == pytest.approx(row.value, abs=row.tolerance), row.source


def test_there_are_thirty_complexes_and_fifteen_acids() -> None:
    assert len({row.reaction for row in CONSTANTS} - {row.reaction for row in ACIDS}) >= 30
    assert len({row.reaction for row in ACIDS}) >= 15


def test_every_row_tells_its_source_and_a_tolerance_that_can_fail() -> None:
    assert all(row.source.strip() for row in CONSTANTS)
    assert all(0 < row.tolerance <= 1.0 for row in CONSTANTS)

"""Standard potentials that follow from the tables against published ones."""

import pytest
from reference_tables import Published, published, quantities

POTENTIALS = published("potentials")


@pytest.mark.parametrize("row", POTENTIALS, ids=str)
def test_potential(row: Published) -> None:
    reaction, found = quantities(row.reaction)
    assert reaction.electrons > 0, "a potential is that of a reduction"
    assert found.potential(reaction.electrons)[0] == pytest.approx(row.value, abs=row.tolerance), row.source


def test_there_are_a_hundred() -> None:
    assert len({row.reaction for row in POTENTIALS}) >= 100


def test_every_row_tells_its_source_and_a_tolerance_that_can_fail() -> None:
    assert all(row.source.strip() for row in POTENTIALS)
    assert all(0 < row.tolerance <= 0.055 for row in POTENTIALS)

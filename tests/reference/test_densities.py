"""Densities of liquors against the handbook."""

import pytest

from redoxq.thermo.density import solution_density

# CRC Handbook, 95th ed., section 5, Concentrative properties of aqueous solutions; Perry's Chemical Engineers'
# Handbook, 7th ed., tables 2-28 to 2-110: wt%, °C, kg/m3; from memory.
HANDBOOK = [
    ("NaCl", 10, 20, 1070.7),
    ("NaCl", 20, 20, 1148),
    ("HCl", 20, 20, 1098),
    ("HCl", 37, 20, 1184),
    ("H2SO4", 10, 20, 1066.1),
    ("H2SO4", 50, 20, 1395.1),
    ("H2SO4", 78, 20, 1704),
    ("H2SO4", 96, 20, 1835),
    ("NaOH", 10, 20, 1109),
    ("NaOH", 50, 20, 1525),
    ("KOH", 30, 20, 1290),
    ("HNO3", 30, 20, 1180),
    ("HNO3", 68, 20, 1405),
    ("H3PO4", 85, 20, 1689),
    ("CuSO4", 10, 20, 1107),
    ("ZnSO4", 10, 20, 1107),
    ("FeCl3", 40, 20, 1417),
    ("Na2CO3", 10, 20, 1103),
    ("NH3", 28, 20, 898),
    ("CH3COOH", 50, 20, 1057.5),
]


@pytest.mark.parametrize(("formula", "percent", "celsius", "expected"), HANDBOOK)
def test_density(formula: str, percent: float, celsius: float, expected: float) -> None:
    found = solution_density({formula: percent / 100.0}, celsius + 273.15)
    assert found == pytest.approx(expected, rel=0.01)


def test_water_alone() -> None:
    # CRC Handbook, 95th ed., section 6, Standard density of water.
    assert solution_density({}, 277.13) == pytest.approx(999.97, abs=0.1)


def test_warm_liquor_is_lighter() -> None:
    assert solution_density({"NaCl": 0.2}, 333.15) < solution_density({"NaCl": 0.2}, 293.15)

"""Liquid water and the silver chloride electrode against published values from 0 to 100 °C."""

import numpy as np
import pytest
from iapws import IAPWS97, _iapws
from reference_tables import quantities

from redoxq.matter.catalogue import catalogue
from redoxq.thermo import water
from redoxq.thermo.constants import LN10, R
from redoxq.thermo.gibbs import gibbs_energies

CELSIUS = (0.01, 10.0, 25.0, 40.0, 60.0, 80.0, 99.0)

# IAPWS R11-07 (2007) along saturation, molal; the same figures in the CRC Handbook, 95th ed., section 5, from memory.
ION_PRODUCT = [(0, 14.95), (25, 13.995), (50, 13.264), (75, 12.70), (100, 12.25)]

# R. G. Bates, V. E. Bower, J. Res. Natl. Bur. Stand. 53 (1954) 283, table 4.
SILVER_CHLORIDE = [(0, 0.23655), (25, 0.22234), (60, 0.19649)]

# Debye-Hückel slopes A_phi, D. J. Bradley, K. S. Pitzer, J. Phys. Chem. 83 (1979) 1599, from memory.
OSMOTIC_SLOPE = [(0, 0.3767), (25, 0.3915), (60, 0.4198), (100, 0.4600)]


@pytest.mark.parametrize("celsius", CELSIUS)
def test_density_is_that_of_the_industrial_formulation(celsius: float) -> None:
    expected = IAPWS97(T=celsius + 273.15, P=0.1).rho
    assert water.density(celsius + 273.15) == pytest.approx(expected, rel=1e-4)


@pytest.mark.parametrize("celsius", [0.01, 25, 60, 100, 140])
def test_vapour_pressure_is_that_of_the_industrial_formulation(celsius: float) -> None:
    expected = IAPWS97(T=celsius + 273.15, x=0).P * 10.0
    assert water.vapour_pressure(celsius + 273.15) == pytest.approx(expected, rel=5e-4)


@pytest.mark.parametrize("celsius", CELSIUS)
def test_permittivity_is_that_of_the_release(celsius: float) -> None:
    expected = _iapws._Dielectric(IAPWS97(T=celsius + 273.15, P=0.1).rho, celsius + 273.15)
    assert water.permittivity(celsius + 273.15) == pytest.approx(expected, rel=2e-4)


@pytest.mark.parametrize(("celsius", "minus_log"), ION_PRODUCT)
def test_ion_product_of_the_formulation(celsius: float, minus_log: float) -> None:
    assert -water.ion_product(celsius + 273.15) == pytest.approx(minus_log, abs=0.05)


@pytest.mark.parametrize(("celsius", "minus_log"), ION_PRODUCT)
def test_ion_product_that_follows_from_gibbs_energies(celsius: float, minus_log: float) -> None:
    temperature = np.array([celsius + 273.15])
    liquid, hydroxide = gibbs_energies([catalogue().get("H2O(l)"), catalogue().get("OH-")], temperature)[0]
    tolerance = 0.05 if celsius <= 60 else 0.1
    assert (hydroxide - liquid) / (R * temperature[0] * LN10) == pytest.approx(minus_log, abs=tolerance)


@pytest.mark.parametrize(("celsius", "volts"), SILVER_CHLORIDE)
def test_potential_of_silver_chloride(celsius: float, volts: float) -> None:
    reaction, found = quantities("AgCl(s) + e- = Ag(s) + Cl-", celsius)
    assert found.potential(reaction.electrons)[0] == pytest.approx(volts, abs=1e-3)


@pytest.mark.parametrize(("celsius", "slope"), OSMOTIC_SLOPE)
def test_osmotic_slope(celsius: float, slope: float) -> None:
    assert water.osmotic_slope(celsius + 273.15) == pytest.approx(slope, rel=6e-3)

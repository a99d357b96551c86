"""Mean activity coefficients that follow from speciation against published ones, and the limiting law."""

import numpy as np
import pytest

from redoxq.matter.catalogue import catalogue
from redoxq.matter.formula import parse_formula
from redoxq.matter.recipes import Air, Ingredient, Recipe
from redoxq.thermo.activity import choose
from redoxq.thermo.speciation import speciate
from redoxq.thermo.water import debye_huckel_slope

STRENGTHS = (0.1, 0.5, 1.0)

# R. A. Robinson, R. H. Stokes, Electrolyte Solutions, 2nd ed. (1959), appendices 8.9 and 8.10, from memory;
# H2SO4, CuSO4, ZnSO4, MgSO4 on the scale of the tables, where the figure at 0.1 mol/kg is an estimate.
# The last number is the share by which the model may differ: its reviews state a few per cent for strong
# electrolytes (the chlorides of nickel, iron, manganese and cobalt are fitted to this table);
# nitrates of potassium and silver, and salts that pair, are what one coefficient a pair does worst.
TABLES = [
    ("HCl", "H+", 1, "Cl-", 1, (0.796, 0.757, 0.809), 0.03),
    ("HNO3", "H+", 1, "NO3-", 1, (0.791, 0.720, 0.724), 0.03),
    ("NaCl", "Na+", 1, "Cl-", 1, (0.778, 0.681, 0.657), 0.03),
    ("KCl", "K+", 1, "Cl-", 1, (0.770, 0.649, 0.604), 0.05),
    ("NaOH", "Na+", 1, "OH-", 1, (0.766, 0.690, 0.678), 0.05),
    ("KOH", "K+", 1, "OH-", 1, (0.798, 0.732, 0.756), 0.05),
    ("NaNO3", "Na+", 1, "NO3-", 1, (0.762, 0.617, 0.548), 0.05),
    ("KNO3", "K+", 1, "NO3-", 1, (0.739, 0.545, 0.443), 0.10),
    ("CaCl2", "Ca+2", 1, "Cl-", 2, (0.518, 0.448, 0.500), 0.05),
    ("MgCl2", "Mg+2", 1, "Cl-", 2, (0.528, 0.480, 0.569), 0.05),
    ("NiCl2", "Ni+2", 1, "Cl-", 2, (0.522, 0.464, 0.536), 0.05),
    ("FeCl2", "Fe+2", 1, "Cl-", 2, (0.518, 0.450, 0.506), 0.05),
    ("MnCl2", "Mn+2", 1, "Cl-", 2, (0.516, 0.440, 0.479), 0.05),
    ("CoCl2", "Co+2", 1, "Cl-", 2, (0.522, 0.462, 0.531), 0.07),
    ("CdCl2", "Cd+2", 1, "Cl-", 2, (0.2280, 0.1006, 0.0669), 0.07),
    ("Na2SO4", "Na+", 2, "SO4-2", 1, (0.452, 0.270, 0.204), 0.05),
    ("H2SO4", "H+", 2, "SO4-2", 1, (0.2655, 0.1557, 0.1316), 0.12),
    ("AgNO3", "Ag+", 1, "NO3-", 1, (0.734, 0.536, 0.429), 0.12),
    ("CuSO4", "Cu+2", 1, "SO4-2", 1, (0.150, 0.0627, 0.0423), 0.20),
    ("ZnSO4", "Zn+2", 1, "SO4-2", 1, (0.150, 0.0630, 0.0435), 0.20),
    ("MgSO4", "Mg+2", 1, "SO4-2", 1, (0.150, 0.0675, 0.0485), 0.20),
]
CASES = [
    (salt, cation, plus, anion, minus, strength, value, share)
    for salt, cation, plus, anion, minus, values, share in TABLES
    for strength, value in zip(STRENGTHS, values, strict=True)
]


@pytest.mark.parametrize(("salt", "cation", "plus", "anion", "minus", "strength", "value", "share"), CASES)
def test_mean_activity_coefficient(
    salt: str, cation: str, plus: int, anion: str, minus: int, strength: float, value: float, share: float
) -> None:
    recipe = Recipe((Ingredient(parse_formula(salt), strength, "mol/kg", salt),), air=Air.none)
    liquor = speciate(recipe)
    total = plus * (liquor.ln_activity(cation)[0] - np.log(plus * strength))
    total += minus * (liquor.ln_activity(anion)[0] - np.log(minus * strength))
    assert np.exp(total / (plus + minus)) == pytest.approx(value, rel=share)


@pytest.mark.parametrize(("cation", "anion", "charge"), [("Na+", "Cl-", 1), ("Zn+2", "SO4-2", 2)])
def test_limiting_law(cation: str, anion: str, charge: int) -> None:
    """P. Debye, E. Hückel, Phys. Z. 24 (1923) 185: ln gamma goes as -A z^2 sqrt(I) where the salt vanishes."""
    model = choose((catalogue().get(cation), catalogue().get(anion)))
    molality, temperature = np.full((1, 2), 1e-7), np.array([298.15])
    ln_gamma, ln_water = model.ln_gamma(molality, temperature)
    limit = -debye_huckel_slope(298.15) * np.log(10.0) * charge**2 * np.sqrt(charge**2 * 1e-7)
    assert ln_gamma[0] == pytest.approx(np.full(2, limit), rel=2e-3)
    assert ln_water[0] == pytest.approx(-2e-7 * 0.0180153, rel=2e-3)


def test_water_activity_obeys_gibbs_and_duhem() -> None:
    """A small change of strength moves ln of the activity of water as sum(m d ln a) / 55.51 with the other sign."""
    model = choose((catalogue().get("Ca+2"), catalogue().get("Cl-")))
    strengths = np.array([0.999, 1.0, 1.001])[:, None] * np.array([1.0, 2.0])
    ln_gamma, ln_water = model.ln_gamma(strengths, np.full(3, 298.15))
    change = ln_gamma[2] - ln_gamma[0] + np.log(strengths[2] / strengths[0])
    assert ln_water[2] - ln_water[0] == pytest.approx(-(strengths[1] @ change) * 0.0180153, rel=1e-4)


@pytest.mark.parametrize(("percent", "expected"), [(3.5, 0.9805), (20.0, 0.837)])
def test_water_over_brine(percent: float, expected: float) -> None:
    # Robinson and Stokes (1959), appendix 8.3: 0.9805 at 0.62 mol/kg and 0.837 at 4.28 mol/kg, from memory.
    recipe = Recipe((Ingredient(parse_formula("NaCl"), percent, "wt%", "salt"),), air=Air.none)
    assert np.exp(speciate(recipe).state.ln_water_activity[0]) == pytest.approx(expected, abs=0.015)

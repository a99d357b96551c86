"""Gibbs energies of formation against temperature, and how their uncertainties hang together.

At every temperature the elements in their reference states, the hydrogen ion and the standard hydrogen
electrode are zero, so that differences are those of reactions at that temperature.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from redoxq.matter.catalogue import Species, catalogue
from redoxq.thermo.constants import T0
from redoxq.thermo.derivation import ELECTRON, parse_derivation, roots

Array = NDArray[np.float64]

CALORIE = 4.184
COBBLE_SPAN = float(np.log(333.15 / T0))
COBBLE_PROTON = 2.5
"""Change of the absolute entropy of H+ from 25 to 60 °C, cal/(mol K)."""

COBBLE = {"cation": (3.9, 0.955), "anion": (-5.1, 0.969), "oxyanion": (-14.0, 1.217), "acid oxyanion": (-13.5, 1.380)}
"""Entropy correspondence between 25 and 60 °C: S(60) = a + b S(25), absolute entropies in cal/(mol K)."""

OXYANION_CENTRES = frozenset({"S", "N", "C", "P", "Cl", "Br", "I", "As", "Se", "Cr", "Mn", "Mo", "W", "V", "B", "Si"})


@dataclass(frozen=True, slots=True)
class Formation:
    """Formation quantities at 298.15 K: J/mol, J/(mol K), J/(mol K), and how they were come by."""

    H: float
    S: float
    Cp: float
    basis: str


def gibbs_energies(species: Sequence[Species], temperature: Array) -> Array:
    """Gibbs energies of formation at each temperature.

    Parameters
    ----------
    species : sequence of Species
    temperature : ndarray, shape (rows,)
        K.

    Returns
    -------
    ndarray, shape (rows, species)
        J/mol. Heat capacities are taken as constant.

    References
    ----------
    Ionic heat capacities that are not in the tables: C. M. Criss, J. W. Cobble, J. Am. Chem. Soc. 86 (1964) 5385,
    5390.
    """
    at = np.asarray(temperature, dtype=float)[:, None]
    if np.all(at == T0):
        return np.broadcast_to([one.G * 1000.0 for one in species], (len(at), len(species))).copy()
    made = [formation(one) for one in species]
    enthalpy = np.array([one.H for one in made])
    entropy = np.array([one.S for one in made])
    capacity = np.array([one.Cp for one in made])
    energies: Array = enthalpy + capacity * (at - T0) - at * (entropy + capacity * np.log(at / T0))
    return energies


@cache
def formation(species: Species) -> Formation:
    """Enthalpy, entropy and heat capacity of formation of a species."""
    if species.key == "H+" or (species.G == 0.0 and species.key in reference_keys()):
        return Formation(0.0, 0.0, 0.0, "reference")
    enthalpy, basis = _enthalpy(species)
    capacity, how = _capacity(species)
    return Formation(enthalpy, (enthalpy - species.G * 1000.0) / T0, capacity, f"{basis}; {how}")


def _enthalpy(species: Species) -> tuple[float, str]:
    """From the row; else from its derivation with no heat of reaction (its constant does not move)."""
    if species.H is not None:
        return species.H * 1000.0, "table"
    if species.derivation:
        derivation = parse_derivation(species.derivation)
        own = derivation.terms[species.key]
        heat = derivation.delta_H
        electrons = derivation.terms.get(ELECTRON, 0)
        given = derivation.delta_G if electrons else (0.0 if heat is None else heat)
        total = sum(
            n * _enthalpy(catalogue().get(key))[0]
            for key, n in derivation.terms.items()
            if key not in (species.key, ELECTRON)
        )
        return (given * 1000.0 - total) / own, "constant of reaction held"
    return species.G * 1000.0, "unknown"


def _capacity(species: Species) -> tuple[float, str]:
    """Heat capacity of formation, J/(mol K)."""
    charge = species.formula.charge
    if species.Cp is not None:
        own, how = species.Cp, "table"
    elif species.phase == "aq" and charge and (entropy := _entropy(species)) is not None:
        own, how = _criss_cobble(species, entropy, charge), "Criss-Cobble"
    else:
        return 0.0, "none"
    table = reference_elements()
    if any(symbol not in table for symbol, _ in species.formula.atoms):
        return 0.0, "none"
    elements = sum(count * (table[symbol][1] or 0.0) for symbol, count in species.formula.atoms)
    return own - elements + 0.5 * charge * 28.836, how


def _entropy(species: Species) -> float | None:
    if species.S is not None:
        return species.S
    if species.H is None:
        return None
    table = reference_elements()
    elements = sum(count * table[symbol][0] for symbol, count in species.formula.atoms if symbol in table)
    return (species.H - species.G) * 1000.0 / T0 + elements - 0.5 * species.formula.charge * 130.68


def _criss_cobble(species: Species, entropy: float, charge: int) -> float:
    slope = COBBLE[_ion_class(species, charge)]
    absolute = entropy / CALORIE - 5.0 * charge
    capacity = (slope[0] + (slope[1] - 1.0) * absolute) / COBBLE_SPAN
    return CALORIE * (capacity - charge * COBBLE_PROTON / COBBLE_SPAN)


def _ion_class(species: Species, charge: int) -> str:
    if charge > 0:
        return "cation"
    symbols = species.symbols
    if "O" in symbols and len(symbols - {"O", "H"}) == 1 and symbols & OXYANION_CENTRES:
        return "acid oxyanion" if "H" in symbols else "oxyanion"
    return "anion"


@cache
def reference_elements() -> Mapping[str, tuple[float, float | None]]:
    """Entropy and heat capacity of one atom of each element in its reference state, J/(mol K)."""
    found: dict[str, tuple[float, float | None]] = {}
    for species in catalogue().species:
        if species.phase != "aq" and species.G == 0.0 and len(species.symbols) == 1 and species.S is not None:
            ((symbol, count),) = species.formula.atoms
            found.setdefault(symbol, (species.S / count, None if species.Cp is None else species.Cp / count))
    return found


@cache
def reference_keys() -> frozenset[str]:
    """Keys of the elements in their reference states."""
    return frozenset(
        one.key for one in catalogue().species if one.phase != "aq" and one.G == 0.0 and len(one.symbols) == 1
    )


def covariance(species: Sequence[Species], temperature: float = T0) -> Array:
    """Covariance of the Gibbs energies of formation, (J/mol)^2, shape (species, species).

    What two rows are both derived from cancels in their difference. Away from 25 °C each row gains what its
    missing enthalpy or heat capacity may add.
    """
    weights = [roots(one) for one in species]
    rows = list(dict.fromkeys(root for weight in weights for root in weight))
    matrix = np.array([[weight.get(root, 0.0) for root in rows] for weight in weights])
    variance = np.array([(root.uncertainty * 1000.0) ** 2 for root in rows])
    total: Array = (matrix * variance) @ matrix.T
    if temperature != T0:
        total = total + np.diag([_temperature_variance(one, temperature) for one in species])
    return total


def _temperature_variance(species: Species, temperature: float) -> float:
    made = formation(species)
    if made.basis == "reference":
        return 0.0
    slope = 5.0 if made.basis.startswith("table") else 40.0
    capacity = 10.0 if made.basis.endswith("table") else 60.0
    step = abs(temperature - T0)
    return float(
        (slope * 0.2 * step if slope == 5.0 else slope * step) ** 2 * 0.25 + (capacity * step**2 / (2 * T0)) ** 2
    )

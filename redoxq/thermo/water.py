"""Liquid water between 0 and 100 °C: density, vapour pressure, permittivity, ion product, Debye-Hückel slopes.

All functions take and return arrays of one shape; the formulas hold to 150 °C along the saturation line.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from redoxq.thermo.constants import (
    AVOGADRO,
    BOLTZMANN,
    ELEMENTARY_CHARGE,
    LN10,
    P0,
    VACUUM_PERMITTIVITY,
    WATER_MOLAR_MASS,
)

Array = NDArray[np.float64]

CRITICAL_TEMPERATURE = 647.096
CRITICAL_DENSITY = 322.0
CRITICAL_PRESSURE = 220.64

COMPRESSIBILITY = 4.6e-5
"""Isothermal compressibility between 10 and 90 °C, 1/bar (CRC Handbook, section 6); its spread is 5 %."""


def vapour_pressure(temperature: ArrayLike) -> Array:
    """Vapour pressure of water, bar.

    Parameters
    ----------
    temperature : array_like, shape (...,)
        K.

    Returns
    -------
    ndarray, shape (...,)

    References
    ----------
    IAPWS SR1-86 (1992), Saturation properties of ordinary water substance, equation 1.
    """
    kelvin = np.asarray(temperature, dtype=float)
    tau = 1.0 - kelvin / CRITICAL_TEMPERATURE
    series = (
        -7.85951783 * tau
        + 1.84408259 * tau**1.5
        - 11.7866497 * tau**3
        + 22.6807411 * tau**3.5
        - 15.9618719 * tau**4
        + 1.80122502 * tau**7.5
    )
    pressure: Array = CRITICAL_PRESSURE * np.exp(CRITICAL_TEMPERATURE / kelvin * series)
    return pressure


def density(temperature: ArrayLike) -> Array:
    """Density of liquid water at 1 bar (above 100 °C: at saturation), kg/m3.

    Parameters
    ----------
    temperature : array_like, shape (...,)
        K.

    Returns
    -------
    ndarray, shape (...,)

    References
    ----------
    IAPWS SR1-86 (1992), equation 2, along saturation; raised to 1 bar by the compressibility.
    """
    kelvin = np.asarray(temperature, dtype=float)
    root = np.cbrt(1.0 - kelvin / CRITICAL_TEMPERATURE)
    ratio = (
        1.0
        + 1.99274064 * root
        + 1.09965342 * root**2
        - 0.510839303 * root**5
        - 1.75493479 * root**16
        - 45.5170352 * root**43
        - 6.74694450e5 * root**110
    )
    excess = np.maximum(P0 - vapour_pressure(kelvin), 0.0)
    value: Array = CRITICAL_DENSITY * ratio * (1.0 + COMPRESSIBILITY * excess)
    return value


_PERMITTIVITY_TERMS = (
    (0.978224486826, 1, 0.25),
    (-0.957771379375, 1, 1.0),
    (0.237511794148, 1, 2.5),
    (0.714692244396, 2, 1.5),
    (-0.298217036956, 3, 1.5),
    (-0.108863472196, 3, 2.5),
    (0.949327488264e-1, 4, 2.0),
    (-0.980469816509e-2, 5, 2.0),
    (0.165167634970e-4, 6, 5.0),
    (0.937359795772e-4, 7, 0.5),
    (-0.123179218720e-9, 10, 10.0),
)


def permittivity(temperature: ArrayLike) -> Array:
    """Relative static permittivity of liquid water at 1 bar.

    Parameters
    ----------
    temperature : array_like, shape (...,)
        K.

    Returns
    -------
    ndarray, shape (...,)

    References
    ----------
    D. P. Fernandez et al., J. Phys. Chem. Ref. Data 26 (1997) 1125; IAPWS R8-97. The constants are the release's own.
    """
    kelvin = np.asarray(temperature, dtype=float)
    mass = density(kelvin)
    reduced, inverse = mass / CRITICAL_DENSITY, CRITICAL_TEMPERATURE / kelvin
    factor = 1.0 + 0.196096504426e-2 * reduced * (kelvin / 228.0 - 1.0) ** -1.2
    for coefficient, power, exponent in _PERMITTIVITY_TERMS:
        factor = factor + coefficient * reduced**power * inverse**exponent
    number = 6.0221367e23 * mass / 18.015268e-3
    dipole = number * 6.138e-30**2 * factor / (8.854187817e-12 * 1.380658e-23 * kelvin)
    polarisation = number * 1.636e-40 / (3.0 * 8.854187817e-12)
    root = np.sqrt(
        9.0 + 2.0 * dipole + 18.0 * polarisation + dipole**2 + 10.0 * dipole * polarisation + 9.0 * polarisation**2
    )
    value: Array = (1.0 + dipole + 5.0 * polarisation + root) / (4.0 * (1.0 - polarisation))
    return value


def ion_product(temperature: ArrayLike) -> Array:
    """Decimal logarithm of the ion product of water, molal scale.

    Parameters
    ----------
    temperature : array_like, shape (...,)
        K.

    Returns
    -------
    ndarray, shape (...,)
        log10 Kw, near -14 at 25 °C.

    References
    ----------
    A. V. Bandura, S. N. Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15; IAPWS R11-07.
    """
    kelvin = np.asarray(temperature, dtype=float)
    mass = density(kelvin) / 1000.0
    ideal_gas = 0.61415 + 48251.33 / kelvin - 67707.93 / kelvin**2 + 10102100.0 / kelvin**3
    cluster = mass * np.exp(-0.702132 + 8681.05 / kelvin - 24145.1 / kelvin**2 * mass ** (2.0 / 3.0))
    repulsion = mass * (0.813876 - 51.4471 / kelvin - 0.469920 * mass)
    association = np.log10(1.0 + cluster) - cluster / (cluster + 1.0) * repulsion
    value: Array = 12.0 * association - ideal_gas - 2.0 * np.log10(WATER_MOLAR_MASS / 1000.0)
    return value


def osmotic_slope(temperature: ArrayLike) -> Array:
    """Debye-Hückel slope of the osmotic coefficient, (kg/mol)^0.5; 0.391 at 25 °C.

    Parameters
    ----------
    temperature : array_like, shape (...,)
        K.

    Returns
    -------
    ndarray, shape (...,)
        A_phi, so that ln gamma = -3 A_phi z^2 sqrt(I) in the limit.

    References
    ----------
    K. S. Pitzer, J. Phys. Chem. 77 (1973) 268, equation 3.
    """
    kelvin = np.asarray(temperature, dtype=float)
    length = ELEMENTARY_CHARGE**2 / (4.0 * np.pi * VACUUM_PERMITTIVITY * permittivity(kelvin) * BOLTZMANN * kelvin)
    slope: Array = np.sqrt(2.0 * np.pi * AVOGADRO * density(kelvin)) * length**1.5 / 3.0
    return slope


def debye_huckel_slope(temperature: ArrayLike) -> Array:
    """Debye-Hückel slope A of log10 gamma, (kg/mol)^0.5; 0.509 at 25 °C.

    Parameters
    ----------
    temperature : array_like, shape (...,)
        K.

    Returns
    -------
    ndarray, shape (...,)
        log10 gamma = -A z^2 sqrt(I) in the limit.
    """
    slope: Array = 3.0 * osmotic_slope(temperature) / LN10
    return slope

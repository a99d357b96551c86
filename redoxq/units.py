"""Units of the trade: how they are written, and what they come to in the units used inside."""

from __future__ import annotations

from collections.abc import Mapping

ZERO_CELSIUS = 273.15
"""K; the kelvin definition of the Celsius scale."""

_STRENGTH: Mapping[str, tuple[str, float]] = {
    "M": ("M", 1.0),
    "mM": ("M", 1e-3),
    "uM": ("M", 1e-6),
    "mol/L": ("M", 1.0),
    "mmol/L": ("M", 1e-3),
    "umol/L": ("M", 1e-6),
    "molar": ("M", 1.0),
    "mol/kg": ("mol/kg", 1.0),
    "mmol/kg": ("mol/kg", 1e-3),
    "umol/kg": ("mol/kg", 1e-6),
    "molal": ("mol/kg", 1.0),
    "kg/L": ("g/L", 1e3),
    "g/L": ("g/L", 1.0),
    "mg/L": ("mg/L", 1.0),
    "kg/kg": ("g/kg", 1e3),
    "g/kg": ("g/kg", 1.0),
    "mg/kg": ("ppm", 1.0),
    "ppm": ("ppm", 1.0),
    "%": ("wt%", 1.0),
    "wt%": ("wt%", 1.0),
    "wt.%": ("wt%", 1.0),
    "%w/w": ("wt%", 1.0),
    "w/w%": ("wt%", 1.0),
    "N": ("N", 1.0),
}
"""As written without spaces -> (unit used inside, factor)."""

_LITRES: Mapping[str, float] = {
    "L": 1.0,
    "mL": 1e-3,
    "m3": 1e3,
    "litre": 1.0,
    "liter": 1.0,
    "litres": 1.0,
    "liters": 1.0,
}

_GRAMS: Mapping[str, float] = {"g": 1.0, "kg": 1e3, "mg": 1e-3, "gram": 1.0, "grams": 1.0}

SIGNIFICANT_DIGITS = 12
"""Digits kept of what was typed; more would only be the rounding of binary fractions."""


def rounded(value: float) -> float:
    """Round to the digits that a typed figure can have, so that 0.1 + 0.2 is 0.3."""
    return float(f"{value:.{SIGNIFICANT_DIGITS}g}")


def strength(value: float, unit: str) -> tuple[float, str]:
    """Turn a strength into one of M, mol/kg, g/L, mg/L, g/kg, ppm, wt% and N.

    Parameters
    ----------
    value : float
    unit : str
        As written, such as `mmol/l` or `% w/w`.

    Returns
    -------
    tuple of float and str

    Raises
    ------
    KeyError
        For a unit that is not in the table.
    """
    name, factor = _STRENGTH[_plain(unit)]
    return (value if factor == 1.0 else rounded(value * factor)), name


def litres(value: float, unit: str) -> float:
    """Return a volume in L."""
    return rounded(value * _LITRES[_plain(unit)])


def grams(value: float, unit: str) -> float:
    """Return a mass in g."""
    return rounded(value * _GRAMS[_plain(unit)])


def kelvin(value: float, unit: str) -> float:
    """Return a temperature in K; the unit is known by its last letter or its name."""
    scale = _plain(unit).replace("℃", "C").replace("℉", "F").removeprefix("degrees").removeprefix("degree")
    letter = scale.removeprefix("deg").removeprefix("°")[0].upper()
    if letter == "C":
        return rounded(value + ZERO_CELSIUS)
    if letter == "F":
        return rounded((value - 32.0) / 1.8 + ZERO_CELSIUS)
    return value


def celsius(temperature: float) -> float:
    """Return a temperature in °C from one in K."""
    return round(temperature - ZERO_CELSIUS, 6)


def written(value: float) -> str:
    """Write a figure as briefly as it can be read back."""
    return f"{value:.{SIGNIFICANT_DIGITS}g}"


def _plain(unit: str) -> str:
    """Unit without spaces, litres in capital, micro as u."""
    plain = unit.replace(" ", "").replace("µ", "u").replace("μ", "u")
    return plain[:-1] + "L" if plain in ("l", "ml") or plain.endswith("/l") else plain

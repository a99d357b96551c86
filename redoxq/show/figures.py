"""Figures as people write them: sensible digits, a sign where it matters, the uncertainty beside."""

from __future__ import annotations

import math


def significant(value: float, digits: int) -> str:
    """A number to so many significant digits, without an exponent where that is readable."""
    if not math.isfinite(value):
        return "unknown"
    if value == 0.0:
        return "0"
    magnitude = math.floor(math.log10(abs(value)))
    if -4 <= magnitude < 6:
        return f"{value:.{max(digits - 1 - magnitude, 0)}f}"
    return f"{value:.{digits - 1}e}"


def amount(value: float) -> str:
    """An amount over many decades, to two or three digits."""
    if not math.isfinite(value):
        return "unknown"
    if value == 0.0:
        return "0"
    return f"{value:.3g}" if 1e-3 <= abs(value) < 1e4 else f"{value:.1e}"


def signed(value: float, decimals: int) -> str:
    """A number with its sign and so many decimals."""
    return f"{value:+.{decimals}f}" if math.isfinite(value) else "unknown"


def plus_minus(value: float, uncertainty: float, unit: str) -> str:
    """A figure with its uncertainty, both to the digit that the uncertainty allows."""
    if not math.isfinite(value):
        return "unknown"
    if not uncertainty or not math.isfinite(uncertainty):
        return f"{value:.4g} {unit}".strip()
    decimals = max(0, -math.floor(math.log10(uncertainty)) + (1 if uncertainty < 1 else 0))
    decimals = min(decimals, 4)
    return f"{value:.{decimals}f} ± {uncertainty:.{decimals}f} {unit}".strip()


def celsius(temperature: float | None) -> str:
    """A temperature in degrees Celsius."""
    return "unknown" if temperature is None else f"{temperature - 273.15:g} °C"

"""Ways of writing the charge of an ion, brought to one: a sign and a number at the end (`Cu+2`)."""

from __future__ import annotations

import re

_PLAIN = str.maketrans("₀₁₂₃₄₅₆₇₈₉₊₋−–·•*", "0123456789+---...")
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")

_RAISED_CHARGE = re.compile(r"[⁰¹²³⁴⁵⁶⁷⁸⁹]*[⁺⁻]+[⁰¹²³⁴⁵⁶⁷⁸⁹]*")
_PHASE = re.compile(r"\s*(\((?:s|l|g|aq)(?:,\s*[\w ]+)?\))$")
_MARKED = re.compile(r"(.+?)(?:\^\{(?P<a>\d*[+-]\d*)\}|\^(?P<b>\d*[+-]\d*)|\((?P<c>\d*[+-]\d*)\))$")
_SIGNED = re.compile(r"(.*?)([+-])(\d{1,3})$")
_REPEATED = re.compile(r"(.*?[^+-])(\++|-+)$")
_ELEMENT = re.compile(r"[A-Z][a-z]?$")

CHAINS = frozenset({"I3", "Br3", "Cl3", "N3", "O2", "O3"})
"""Ions written `I3-`: here the digit counts atoms, elsewhere (`S2-`, `Cu2+`) it is the charge."""

OXO_CATIONS = frozenset({"TiO", "ZrO", "HfO"})
"""Ions written `TiO2+`: here the digit is the charge, elsewhere (`VO2+`, `NO2-`) it counts atoms."""


def charge_last(text: str) -> str:
    """Bring every way of writing a charge to a sign and a number at the end, before the phase.

    Parameters
    ----------
    text : str
        `Cu2+`, `Cu^2+`, `Cu(2+)`, `Cu++`, `SO₄²⁻(aq)`, or anything else, which stays as it is.

    Returns
    -------
    str
        `Cu+2`, `SO4-2(aq)`.
    """
    raised = _RAISED_CHARGE.sub(lambda found: "^" + found[0].translate(_RAISED), text.strip())
    plain = re.sub(r"\s*\.\s*", ".", raised.translate(_PLAIN).translate(_RAISED))
    phase = _PHASE.search(plain)
    end = phase[1] if phase else ""
    body = plain[: phase.start()] if phase else plain
    if body in ("e-", "e^-", "e(-)"):
        return "e-"
    if marked := _MARKED.match(body):
        before, sign, after = re.split(r"([+-])", marked["a"] or marked["b"] or marked["c"])
        return body + end if before and after else f"{marked[1]}{sign}{before or after or 1}{end}"
    if not _SIGNED.match(body) and (repeated := _REPEATED.match(body)):
        return bare_sign(repeated[1], repeated[2]) + end
    return body + end


def bare_sign(body: str, signs: str) -> str:
    """`Cu2+` is Cu+2, `SO42-` is SO4-2, `[Fe(CN)6]4-` is Fe(CN)6-4; `I3-` and `NH4+` carry one charge."""
    if len(signs) > 1:
        return f"{body}{signs[0]}{len(signs)}"
    core = body.rstrip("0123456789")
    digits = body[len(core) :]
    if not digits or digits.endswith("0") or body in CHAINS:
        return body + signs
    whole_charge = _ELEMENT.match(core) or core.endswith(("]", "OH")) or (core in OXO_CATIONS and signs == "+")
    if len(digits) > 1 or whole_charge:
        return f"{core}{digits[:-1]}{signs}{digits[-1]}"
    return body + signs

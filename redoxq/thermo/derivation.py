"""Derivations: how a row of the tables follows from other rows, and the Gibbs energy that follows.

`python -m redoxq.thermo.derivation` prints, for each derived row, what its cell holds and what follows.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache, lru_cache

from redoxq.errors import DataError
from redoxq.matter.catalogue import Species, catalogue
from redoxq.thermo.constants import LN10, T0, F, R

ELECTRON = "e-"
_TERM = re.compile(r"(?:(\d+)\s+)?(\S.*)")


@dataclass(frozen=True, slots=True)
class Derivation:
    """A reaction of catalogue keys and the energy it has at 25 °C.

    Attributes
    ----------
    terms : mapping of str to int
        Negative on the left; electrons as `e-`.
    delta_G : float
        kJ/mol.
    delta_H : float or None
    """

    terms: Mapping[str, int]
    delta_G: float
    delta_H: float | None


def catalogue_key(text: str) -> str:
    """Key of a term: `(aq)` is left out, water is the liquid."""
    text = text.strip().removesuffix("(aq)")
    return "H2O(l)" if text == "H2O" else text


@lru_cache(maxsize=4096)
def parse_derivation(text: str) -> Derivation:
    """Read a derivation such as `Cu+2 + 4 NH3(aq) = Cu(NH3)4+2; log10_K = 13.0`.

    Raises
    ------
    DataError
    """
    reaction, *quantities = [part.strip() for part in text.split(";")]
    values = {}
    for quantity in quantities:
        name, _, number = quantity.partition("=")
        try:
            values[name.strip()] = float(number)
        except ValueError:
            raise DataError(f'In the derivation "{text}" the number of {name.strip()} cannot be read.') from None
    terms: dict[str, int] = {}
    left, _, right = reaction.partition(" = ")
    for sign, side in ((-1, left), (1, right)):
        for term in side.split(" + "):
            found = _TERM.fullmatch(term.strip())
            if not found:
                raise DataError(f'The derivation "{text}" has an empty term.')
            key = catalogue_key(found[2])
            terms[key] = terms.get(key, 0) + sign * int(found[1] or 1)
    return Derivation({k: n for k, n in terms.items() if n}, _energy(values, terms, text), values.get("delta_H"))


def _energy(values: Mapping[str, float], terms: Mapping[str, int], text: str) -> float:
    if "log10_K" in values:
        return -R * T0 * LN10 * values["log10_K"] / 1000.0
    if "E" in values:
        return terms[ELECTRON] * F * values["E"] / 1000.0
    if "delta_G" in values:
        return values["delta_G"]
    raise DataError(f'The derivation "{text}" ends in none of log10_K, E and delta_G.')


def energy_that_follows(species: Species) -> float:
    """Gibbs energy of formation (kJ/mol) that a derived row should hold."""
    derivation = parse_derivation(species.derivation)
    others = sum(n * catalogue().get(k).G for k, n in derivation.terms.items() if k not in (species.key, ELECTRON))
    return (derivation.delta_G - others) / derivation.terms[species.key]


@cache
def roots(species: Species) -> Mapping[Species, float]:
    """The independent rows that the Gibbs energy of a species rests on, each with its weight."""
    found: dict[Species, float] = {species: 1.0}
    if not species.derivation:
        return found
    derivation = parse_derivation(species.derivation)
    own = derivation.terms.get(species.key)
    if not own:
        raise DataError(f"{species.file}, row {species.line}: {species.key} is not in its own derivation.")
    found[species] = 1.0 / abs(own)
    for key, count in derivation.terms.items():
        if key in (species.key, ELECTRON):
            continue
        for root, weight in roots(catalogue().get(key)).items():
            found[root] = found.get(root, 0.0) - weight * count / own
    return found


def main() -> None:
    """Print the derived rows whose cell does not hold what follows."""
    for species in catalogue().species:
        if species.derivation:
            follows = energy_that_follows(species)
            mark = "" if abs(follows - species.G) < 0.02 else "   <-- differs"
            print(f"{species.file}:{species.line}  {species.key}  {species.G:.2f}  follows {follows:.2f}{mark}")


if __name__ == "__main__":
    main()

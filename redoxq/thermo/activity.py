"""Activity coefficients: the interface that every model has, and the choice among models."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from redoxq.matter.catalogue import Species
from redoxq.thermo.sit import SpecificInteraction

Array = NDArray[np.float64]


class ActivityModel(Protocol):
    """A model made for a list of aqueous species, in their order.

    Attributes
    ----------
    name : str
    reach : str
        Where it holds, in words.
    """

    name: str
    reach: str

    def ln_gamma(self, molality: Array, temperature: Array) -> tuple[Array, Array]:
        """Molal activity coefficients and water activity.

        Parameters
        ----------
        molality : ndarray, shape (rows, species)
            mol/kg.
        temperature : ndarray, shape (rows,)
            K.

        Returns
        -------
        ln_gamma : ndarray, shape (rows, species)
            Single ions on the unscaled scale of the model.
        ln_water_activity : ndarray, shape (rows,)
        """
        ...

    def expected_error(self, ionic_strength: Array) -> Array:
        """Standard error of ln gamma of a singly charged ion, shape (rows,)."""
        ...


@lru_cache(maxsize=512)
def _made(species: tuple[Species, ...]) -> ActivityModel:
    return SpecificInteraction(species)


def choose(species: Sequence[Species]) -> ActivityModel:
    """Return the model to use for a list of aqueous species."""
    return _made(tuple(species))

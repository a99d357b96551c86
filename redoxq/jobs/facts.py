"""Facts of a contact, computed, for the rules of practice: a row for each oxidant tried."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from redoxq.rules.facts import Facts
from redoxq.thermo.couples import MetalForm, Oxidant
from redoxq.thermo.speciation import Liquor


@dataclass(frozen=True, slots=True)
class Tried:
    """An oxidant with how hard it drives the metal.

    Attributes
    ----------
    driving, uncertainty : float
        V; the uncertainty is the half-width that covers 95 %.
    """

    oxidant: Oxidant
    driving: float
    uncertainty: float


def contact_facts(
    liquor: Liquor,
    form: MetalForm,
    tried: Sequence[Tried],
    air: bool,
    powder: bool,
    pH: NDArray[np.float64] | None = None,
) -> Facts:
    """Collect the facts of one contact.

    Parameters
    ----------
    liquor : Liquor
    form : MetalForm
    tried : sequence of Tried
    air : bool
    powder : bool
    pH : ndarray, optional
        Other values of the pH to judge a single oxidant at.
    """
    return Facts({**_of_liquor(liquor, pH), **_of_metal(form), **_of_oxidants(tried), "air": air, "powder": powder})


def _of_liquor(liquor: Liquor, pH: NDArray[np.float64] | None) -> Mapping[str, ArrayLike]:
    state = liquor.state
    columns: dict[str, ArrayLike] = {
        "pH": float(state.pH[0]) if pH is None else pH,
        "temperature": float(liquor.temperature[0]),
        "water_activity": float(np.exp(state.ln_water_activity[0])),
        "ionic_strength": float(state.ionic_strength[0]),
    }
    columns |= {f"total of {name}": float(total[0]) for name, total in liquor.totals.items()}
    columns |= {
        f"activity of {one.key}": float(np.exp(value))
        for one, value in zip(liquor.network.aqueous, state.ln_activity[0], strict=True)
    }
    if pH is not None:
        columns["activity of H+"] = 10.0**-pH
        columns["activity of OH-"] = 10.0 ** (pH - 14.0)
    return columns


def _of_metal(form: MetalForm) -> Mapping[str, ArrayLike]:
    return {
        "metal": np.array([form.metal.text]),
        "metal_potential": float(form.potential[0]),
        "product": np.array([form.product.key]),
        "film": np.array(["" if form.film is None else form.film.key]),
        "solid_product": form.product.phase == "s",
    }


def _of_oxidants(tried: Sequence[Tried]) -> Mapping[str, ArrayLike]:
    return {
        "oxidant": np.array([one.oxidant.id for one in tried]),
        "oxidant_kind": np.array([one.oxidant.kind for one in tried]),
        "plated": np.array([one.oxidant.plated for one in tried]),
        "driving": np.array([one.driving for one in tried]),
        "driving_uncertainty": np.array([one.uncertainty for one in tried]),
        "oxidant_potential": np.array([float(one.oxidant.potential[0]) for one in tried]),
    }

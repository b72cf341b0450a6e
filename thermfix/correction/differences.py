"""The difference between two regions of one frame: what is common to both cancels in its uncertainty."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.budgets import input_row, mean_noise_u, mean_sensitivities
from thermfix.correction.defaults import Input
from thermfix.correction.layer import Layer
from thermfix.uncertainty.budget import Budget, BudgetInput, budget

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class Difference:
    """Mean surface temperature of one region minus another's, with a budget of its own. [K]."""

    first: str
    second: str
    value_k: float
    budget: Budget

    @property
    def u_k(self) -> float:
        """Standard uncertainty. [K]."""
        return self.budget.u_k

    @property
    def expanded_u_k(self) -> float:
        """Expanded uncertainty at k = 2. [K]."""
        return self.budget.expanded_u_k


def difference_of(first: tuple[str, Layer, Array], second: tuple[str, Layer, Array]) -> Difference:
    r"""Return the difference first − second.

    Parameters
    ----------
    first, second : (name, layer, temperatures)
        Region name, its layer, and the surface temperatures of all its pixels [K], shape (n,); NaN where
        there is no reading, which must not be everywhere.

    Notes
    -----
    .. math:: u^2(\Delta) = \sum_p \left[(c_{1p} - c_{2p}) u_p\right]^2 + u_{noise,1}^2 + u_{noise,2}^2

    with one p for every input that both regions name: scene, camera accuracy and whatever a solved
    input was found from. Emissivities are independent from region to region, even of one material.

    References
    ----------
    .. [1] JCGM 100:2008, 5.2 and F.1.2.3.
    """
    rows: dict[str, tuple[Input, float]] = {}
    noise_u = 0.0
    for sign, (_, layer, kelvin) in ((1, first), (-1, second)):
        known = np.isfinite(kelvin)
        for one, sensitivity in mean_sensitivities(layer, kelvin, known):
            before = rows[one.name][1] if one.name in rows else 0.0
            rows[one.name] = (one, before + sign * sensitivity)
        noise_u = float(np.hypot(noise_u, mean_noise_u(layer, kelvin, known)))
    entries = [input_row(one, sensitivity) for one, sensitivity in rows.values() if sensitivity != 0]
    entries.append(
        BudgetInput(name="camera: noise", value=0.0, unit="K", u=noise_u, distribution="normal", sensitivity=1.0)
    )
    value = float(np.nanmean(first[2]) - np.nanmean(second[2]))
    return Difference(first=first[0], second=second[0], value_k=value, budget=budget(entries))

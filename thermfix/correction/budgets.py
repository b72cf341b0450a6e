"""The budget of one reading: every input, its uncertainty and what it contributes to the mean of the region."""

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input
from thermfix.correction.layer import Layer
from thermfix.quantities import QUANTITIES, ZERO_C_K
from thermfix.radiometry.curve import KNOTS_K
from thermfix.uncertainty.budget import Budget, BudgetInput, budget
from thermfix.uncertainty.shared import MeanUncertainty

Array = NDArray[np.float64]

_LN_KNOTS = np.log(KNOTS_K)


def knot_weights(kelvin: Array) -> Array:
    """Return the weights with which values at ``KNOTS_K`` make their mean over pixels, shape (320,)."""
    position = (np.log(kelvin) - _LN_KNOTS[0]) / (_LN_KNOTS[1] - _LN_KNOTS[0])
    left = np.clip(position.astype(np.intp), 0, KNOTS_K.size - 2)
    share = position - left
    weights = np.bincount(left, 1 - share, KNOTS_K.size) + np.bincount(left + 1, share, KNOTS_K.size)
    return np.asarray(weights / kelvin.size)


def mean_u(layer: Layer, kelvin: Array) -> MeanUncertainty:
    """Return the uncertainty of the mean over pixels at these temperatures: what they share stays.

    Parameters
    ----------
    layer : Layer
        The region's layer.
    kelvin : ndarray, shape (n,), n ≥ 1
        Surface temperatures of the pixels with a reading. [K].
    """
    weight = knot_weights(kelvin)
    signed = (layer.sensitivities @ weight) * np.array([one.u for one in layer.inputs])
    names = (one.name for one in layer.inputs)
    noise_u = float(layer.noise_u_k @ weight / np.sqrt(kelvin.size))
    return MeanUncertainty(contributions=dict(zip(names, signed.tolist(), strict=True)), noise_u=noise_u)


def budget_of(layer: Layer, kelvin: Array, apparent_k: float) -> Budget:
    """Return the budget of the mean surface temperature of a region.

    Parameters
    ----------
    layer : Layer
        The region's layer.
    kelvin : ndarray, shape (n,), n ≥ 1
        Surface temperatures of the pixels with a reading. [K].
    apparent_k : float
        Mean apparent temperature of the region. [K].

    Notes
    -----
    Temperatures are shown in °C. Noise stands as one row that has been averaged down already.
    """
    weight = knot_weights(kelvin)
    sensitivities = layer.sensitivities @ weight
    rows = [input_row(one, float(c)) for one, c in zip(layer.inputs[:-1], sensitivities[:-1], strict=True) if c != 0]
    instrument = layer.instrument
    accuracy_u = float(instrument.accuracy_u_k(apparent_k))
    rows.append(
        BudgetInput(
            name=instrument.accuracy.name,
            value=apparent_k - ZERO_C_K,
            unit="°C",
            u=accuracy_u,
            distribution="rectangular",
            sensitivity=float(sensitivities[-1]) / accuracy_u if accuracy_u else 0.0,
        )
    )
    rows.append(
        BudgetInput(
            name=f"camera: noise, mean of {kelvin.size} pixels",
            value=0.0,
            unit="K",
            u=float(layer.noise_u_k @ weight / np.sqrt(kelvin.size)),
            distribution="normal",
            sensitivity=1.0,
        )
    )
    return budget(rows)


def input_row(one: Input, sensitivity: float) -> BudgetInput:
    """Return the budget's row of one input; temperatures in °C, the accuracy in its own standard uncertainties."""
    unit = QUANTITIES[one.key].unit if one.key in QUANTITIES else _OTHER_UNITS[one.key]
    value = one.value - ZERO_C_K if unit == "°C" else one.value
    return BudgetInput(name=one.name, value=value, unit=unit, u=one.u, distribution="normal", sensitivity=sensitivity)


_OTHER_UNITS = {"air_model": "1", "noise": "W m⁻² sr⁻¹", "accuracy": "u"}

"""The budget of one reading: every input, its uncertainty and what it contributes to the mean of the region."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input
from thermfix.correction.layer import Layer
from thermfix.quantities import QUANTITIES, ZERO_C_K
from thermfix.uncertainty.budget import Budget, BudgetInput, budget
from thermfix.uncertainty.shared import MeanUncertainty

Array = NDArray[np.float64]

Known = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, kw_only=True)
class Mixing:
    """What unmixing a small target adds: dT/d(input) of its own inputs, and how much it raises the noise."""

    sensitivities: tuple[tuple[Input, float], ...] = ()
    noise_factor: float = 1.0


NO_MIXING = Mixing()


def mean_u(layer: Layer, surface_k: Array, known: Known, mixing: Mixing = NO_MIXING) -> MeanUncertainty:
    """Return the uncertainty of the mean over a layer's pixels: what they share stays, noise averages down.

    Parameters
    ----------
    layer : Layer
        The region's layer.
    surface_k : ndarray, shape (n,)
        Surface temperatures of all its pixels. [K].
    known : ndarray of bool, shape (n,)
        Which of them have a reading; at least one.
    mixing : Mixing
        What unmixing a small target adds.
    """
    weights = layer.mean_weights(surface_k, known)
    means = (layer.sensitivities * weights).sum(axis=(-2, -1))
    rows = _with_mixing(layer, means, mixing)
    single = float((layer.noise_u_k * weights).sum())
    return MeanUncertainty(
        contributions={one.name: slope * one.u for one, slope in rows},
        noise_u=mixing.noise_factor * single / float(np.sqrt(known.sum())),
    )


def mean_sensitivities(
    layer: Layer, surface_k: Array, known: Known, mixing: Mixing = NO_MIXING
) -> list[tuple[Input, float]]:
    """Return every input with its sensitivity, averaged over the known pixels; the camera's accuracy last."""
    means = (layer.sensitivities * layer.mean_weights(surface_k, known)).sum(axis=(-2, -1))
    return _with_mixing(layer, means, mixing)


def _with_mixing(layer: Layer, means: Array, mixing: Mixing) -> list[tuple[Input, float]]:
    rows = {one.name: (one, float(c)) for one, c in zip(layer.inputs, means, strict=True)}
    accuracy = rows.pop(layer.instrument.accuracy.name)
    for one, slope in mixing.sensitivities:
        rows[one.name] = (one, slope + (rows[one.name][1] if one.name in rows else 0.0))
    return [*rows.values(), accuracy]


def mean_noise_u(layer: Layer, surface_k: Array, known: Known, mixing: Mixing = NO_MIXING) -> float:
    """Return what is left of the noise in the mean over the known pixels. [K]."""
    single = float((layer.noise_u_k * layer.mean_weights(surface_k, known)).sum())
    return mixing.noise_factor * single / float(np.sqrt(known.sum()))


def budget_of(layer: Layer, surface_k: Array, known: Known, apparent_k: float, mixing: Mixing = NO_MIXING) -> Budget:
    """Return the budget of the mean surface temperature of a region; parameters as `mean_u`.

    ``apparent_k`` is the mean apparent temperature of the region [K].

    Notes
    -----
    Temperatures are shown in °C. Noise stands as one row that has been averaged down already.
    """
    *others, (_, of_accuracy) = mean_sensitivities(layer, surface_k, known, mixing)
    rows = [input_row(one, slope) for one, slope in others if slope != 0]
    instrument = layer.instrument
    accuracy_u = float(instrument.accuracy_u_k(apparent_k))
    rows.append(
        BudgetInput(
            name=instrument.accuracy.name,
            value=apparent_k - ZERO_C_K,
            unit="°C",
            u=accuracy_u,
            distribution="rectangular",
            sensitivity=of_accuracy / accuracy_u if accuracy_u else 0.0,
        )
    )
    rows.append(
        BudgetInput(
            name=f"camera: noise, mean of {int(known.sum())} pixels",
            value=0.0,
            unit="K",
            u=mean_noise_u(layer, surface_k, known, mixing),
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


_OTHER_UNITS = {"air_model": "1", "noise": "W m⁻² sr⁻¹", "accuracy": "u", "calibration": "u", "radius_px": "px"}

"""Monte Carlo of one reading (JCGM 101), for corrections too curved for first-order uncertainty."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input
from thermfix.correction.layer import REFERENCE_K, Layer
from thermfix.radiometry.planck import spectral_radiance
from thermfix.uncertainty.curvature import CURVED, nonlinearity
from thermfix.uncertainty.draws import RandomInput
from thermfix.uncertainty.first_order import FirstOrderCheck, check_first_order
from thermfix.uncertainty.monte_carlo import MonteCarlo, run

Array = NDArray[np.float64]
Samples = dict[str, Array]

SEED, MOST_TRIALS = 20260301, 200_000

_BINS = 24
_BOUNDED = ("emissivity", "transmittance")
_MINOR = 0.02


@dataclass(frozen=True, slots=True, kw_only=True)
class Trials:
    """A Monte Carlo run of one reading and its verdict on first order. Temperatures in kelvin."""

    found: MonteCarlo
    check: FirstOrderCheck

    @property
    def first_order_holds(self) -> bool:
        """Whether y ± U may be shown."""
        return self.check.adequate


class ReadingModel:
    """Surface temperature as a function of the errors of all inputs, for one mean received radiance.

    The products of emissivity, transmittance and reflection are kept; the spectrum is summed into 24
    bins, which serves for the spread of a reading though not for the reading itself.
    """

    def __init__(self, layer: Layer, received: float) -> None:
        self.layer, self.received = layer, received
        about, setting = layer.circumstances, layer.setting
        self._bins = _Bins(about.band.nodes_um, about.band.weights)
        self._emissivity, self._air = self._bins.mean(setting.emissivity), self._bins.mean(setting.air)
        angle = np.array([layer.geometry.angle_mean_deg])
        self._in_value = self._bins.mean(about.surface.slope_in_value(angle)[0])
        self._in_angle = self._bins.mean(about.surface.slope_in_angle(angle)[0])
        distance = layer.geometry.distance_mean_m
        self._in_air = [(one, self._bins.mean(slope)) for one, slope in about.path.slopes(distance)]
        self.inputs = _random_inputs(layer)
        self._nominal = self._rest_and_share({})

    def __call__(self, errors: Samples) -> Array:
        """Return the surface temperature for errors of the inputs by name, shape kept. [K]; NaN where none."""
        rest, share = self._rest_and_share(errors)
        accuracy = float(self.layer.instrument.accuracy_radiance(self.received))
        received = self.received + accuracy * errors.get(self.layer.instrument.accuracy.name, np.zeros(1))
        calibration = self.layer.instrument.calibration
        if calibration is not None and calibration.name in errors:
            received = received + errors[calibration.name] * float(
                self.layer.instrument.calibration_radiance(self.received)
            )
        # Binning shifts share and rest a little; only their changes are used.
        share = share / self._nominal[1]
        rest = float(self.layer.setting.rest) + rest - self._nominal[0]
        return self.layer.curve.temperature((received - rest) / (share * self.layer.mean_share))

    def _rest_and_share(self, errors: Samples) -> tuple[Array, Array]:
        """Return what arrives without the surface's emission, and the share of its emission that arrives."""
        about = self.layer.circumstances
        window, weights = about.window, self._bins.weights
        emissivity = self._emissivity + _column(errors, about.surface.value) * self._in_value
        for tilt in about.tilts:
            turned = tilt.slope(self.layer.geometry.angle_mean_deg) * _column(errors, tilt.input)
            emissivity = emissivity + turned * self._in_angle
        air = self._air + sum(_column(errors, one) * slope for one, slope in self._in_air)
        emissivity = np.where((emissivity > 0) & (emissivity <= 1), emissivity, np.nan)
        air = np.where((air >= 0) & (air <= 1), air, np.nan)
        b_air = self._b(about.path.air, errors)
        rest = air * (1 - emissivity) * self._reflected(errors) + (1 - air) * b_air
        front = emissivity * air
        if window.tau is not None and window.rho is not None and window.temperature is not None:
            tau = self._bins.mean(window.transmittance) + _column(errors, window.tau)
            rho = self._bins.mean(window.reflectance) + _column(errors, window.rho)
            side = about.path.air if window.camera_side_is_air else window.camera_side
            emitted = (1 - tau - rho) * self._b(window.temperature, errors)
            rest = tau * rest + emitted + rho * self._b(side, errors)
            front = front * tau
        at = weights * spectral_radiance(self._bins.wavelength_um, REFERENCE_K)
        return rest @ weights, front @ at / at.sum()

    def _reflected(self, errors: Samples) -> Array:
        mirrored = self.layer.circumstances.mirrored
        shares = [share.value + _column(errors, share) for _, share in mirrored.sources]
        total = (1.0 - sum(shares)) * self._b(mirrored.surroundings, errors)
        for (source, _), share in zip(mirrored.sources, shares, strict=True):
            total = total + share * self._b(source, errors)
        return np.asarray(total)

    def _b(self, temperature: Input, errors: Samples) -> Array:
        return spectral_radiance(self._bins.wavelength_um, temperature.value + _column(errors, temperature))


def is_curved(model: ReadingModel) -> bool:
    """Return whether a reading bends over the spread of its inputs so that y ± U may promise too much."""
    layer = model.layer
    surface_k = float(model({})[0])
    if not np.isfinite(surface_k):
        return False
    sensitivities = np.abs(layer.typical(layer.sensitivities, surface_k))
    contributions = sensitivities * np.array([one.u for one in layer.inputs])
    total = np.sqrt((contributions**2).sum())
    names = [one.name for one, c in zip(layer.inputs, contributions, strict=True) if c > _MINOR * total]
    if not names:
        return False

    def function(points: Array) -> Array:
        return model(dict(zip(names, points.T, strict=True)))

    u = np.array([model.inputs[name].u for name in names])
    return nonlinearity(function, np.zeros(len(names)), u) > CURVED


def try_many(model: ReadingModel, surface_k: float, u_k: float, trials: int | None = None) -> Trials:
    """Return a Monte Carlo run of a reading and how first order stands against it.

    ``trials`` fixes their number; otherwise they go on until the result has settled, up to 200,000.
    """
    noise = RandomInput(value=0.0, u=1.0)

    def with_noise(samples: Samples) -> Array:
        at = model(samples)
        return at + samples["noise of the mean"] * noise_u

    noise_u = float(model.layer.typical(model.layer.noise_u_k, surface_k))
    noise_u /= np.sqrt(max(model.layer.pixels.size, 1))
    found = run(
        with_noise, {**model.inputs, "noise of the mean": noise}, seed=SEED, trials=trials, max_trials=MOST_TRIALS
    )
    return Trials(found=found, check=check_first_order(found, surface_k, u_k))


class _Bins:
    """Groups of neighbouring nodes, each with its weight and mean wavelength."""

    def __init__(self, nodes_um: Array, weights: Array) -> None:
        edges = np.linspace(0, nodes_um.size, min(_BINS, nodes_um.size) + 1).astype(np.intp)[:-1]
        self._starts, self._weights = edges, weights
        self.weights = np.add.reduceat(weights, edges)
        self.wavelength_um = self.mean(nodes_um)

    def mean(self, spectrum: Array) -> Array:
        """Return the weighted mean of a spectrum in every bin."""
        values = np.broadcast_to(spectrum, self._weights.shape)
        return np.asarray(np.add.reduceat(values * self._weights, self._starts) / self.weights)


def _column(errors: Samples, one: Input) -> Array:
    """Return the error of an input as a column; a solved input's comes from its parts."""
    total = np.zeros((1, 1))
    for part, slope in one.parts or ((one, 1.0),):
        if part.name in errors:
            total = total + slope * errors[part.name][:, None]
    return total


def _random_inputs(layer: Layer) -> dict[str, RandomInput]:
    """Return every error as a random input about 0; what cannot leave 0 to 1 is cut off there."""
    inputs = {}
    for one in layer.inputs:
        if one.origin == "camera" and one.key == "accuracy":
            inputs[one.name] = RandomInput(value=0.0, u=1.0, distribution="rectangular")
        elif one.key in _BOUNDED:
            inputs[one.name] = RandomInput(value=0.0, u=one.u, low=min(1e-4 - one.value, 0.0), high=1.0 - one.value)
        else:
            inputs[one.name] = RandomInput(value=0.0, u=one.u)
    return inputs

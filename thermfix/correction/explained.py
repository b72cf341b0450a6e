"""The measurement equation with one region's numbers in it, so that a person can check it with a calculator."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.layer import Layer
from thermfix.quantities import ZERO_C_K

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Step:
    """One line: what it is, the formula in symbols, the same with numbers, and its result."""

    what: str
    formula: str
    numbers: str
    result: str


def explain(layer: Layer, received: float) -> tuple[Step, ...]:
    """Return the steps from a received radiance to the surface temperature.

    Parameters
    ----------
    layer : Layer
        The region's layer.
    received : float
        Mean received in-band radiance of the region. [W m⁻² sr⁻¹].

    Returns
    -------
    tuple of Step
        Emissivity and transmittance are band-effective for what shines through them in each line:
        air passes a little more of a hot surface's radiance than of a cold one's.
    """
    return (*_Lines(layer, received).all(),)


class _Lines:
    def __init__(self, layer: Layer, received: float) -> None:
        self.layer, self.received = layer, received
        self.about, self.setting, self.band = layer.circumstances, layer.setting, layer.instrument.band
        self.own = received - layer.setting.rest
        self.surface_k = float(layer.curve.temperature(self.own / layer.mean_share))
        self.apparent_k = float(self.band.temperature(received))

    def all(self) -> list[Step]:
        lines = [
            Step(
                "received",
                "L_meas",
                f"apparent {_celsius(self.apparent_k)}",
                _radiance(self.received),
            )
        ]
        lines += [*self._window(), *self._air(), *self._reflected(), *self._left()]
        return lines

    def _b(self, kelvin: float) -> Array:
        return self.band.planck_at(kelvin)

    def _window(self) -> list[Step]:
        window, weights = self.about.window, self.band.weights
        if window.tau is None or window.rho is None or window.temperature is None:
            return []
        emits = float(weights * (1 - window.transmittance - window.reflectance) @ self._b(window.temperature.value))
        mirrors = float(weights * window.reflectance @ self._b(window.camera_side.value))
        at_window = float(self.band.radiance(window.temperature.value))
        at_side = float(self.band.radiance(window.camera_side.value))
        return [
            Step(
                "window emits",
                "(1 − τ_w − ρ_w) L(T_w)",
                f"{emits / at_window:.4f} × {at_window:.4f} at {_celsius(window.temperature.value)}",
                _radiance(emits),
            ),
            Step(
                "window mirrors",
                "ρ_w L(T_cs)",
                f"{mirrors / at_side:.4f} × {at_side:.4f} at {_celsius(window.camera_side.value)}",
                _radiance(mirrors),
            ),
        ]

    def _air(self) -> list[Step]:
        air_k = self.about.path.air.value
        emits = float(self.band.weights * self.about.window.transmittance * (1 - self.setting.air) @ self._b(air_k))
        at_air = float(self.band.radiance(air_k))
        if self.about.path.clear:
            return [Step("air emits", "nothing: the path was taken as clear", "", _radiance(0.0))]
        return [
            Step("air emits", "τ_w (1 − τ_a) L(T_air)", f"{emits / at_air:.4f} × {at_air:.4f} at {_celsius(air_k)}",
                 _radiance(emits))
        ]  # fmt: skip

    def _reflected(self) -> list[Step]:
        front = self.band.weights * self.about.window.transmittance * self.setting.air * (1 - self.setting.emissivity)
        mirrored = self.about.mirrored
        lines = []
        bodies = [(mirrored.surroundings, mirrored.rest), *((one, share.value) for one, share in mirrored.sources)]
        for body, share in bodies:
            arrives = float(share * front @ self._b(body.value))
            at = float(self.band.radiance(body.value))
            name = "reflected" if body is mirrored.surroundings else "reflected source"
            factor = "τ_w τ_a (1 − ε) F" if mirrored.sources else "τ_w τ_a (1 − ε)"
            lines.append(
                Step(name, f"{factor} L(T_refl)", f"{arrives / at:.4f} × {at:.4f} at {_celsius(body.value)}",
                     _radiance(arrives))
            )  # fmt: skip
        return lines

    def _left(self) -> list[Step]:
        left = Step("left for the surface", "L_meas − all of these", "", _radiance(self.own))
        if not np.isfinite(self.surface_k):
            return [left, Step("surface", "no temperature gives this", "", "no reading")]
        at = self._b(self.surface_k)
        emission = float(self.setting.emission @ at)
        total = float(self.band.radiance(self.surface_k))
        weights = self.band.weights
        window = float(weights * self.about.window.transmittance @ at / total)
        through = float(weights * self.about.window.transmittance * self.setting.air @ at / total) / window
        emissivity = emission / total / window / through
        return [
            left,
            Step(
                "surface",
                "L(T_s) = left / (τ_w τ_a ε)",
                f"{self.own:.4f} / ({window:.4f} × {through:.4f} × {emissivity:.4f})",
                _radiance(total),
            ),
            Step(
                "temperature", "T_s = L⁻¹", f"{self.band.lo_um:g} to {self.band.hi_um:g} µm", _celsius(self.surface_k)
            ),
        ]


def _radiance(value: float) -> str:
    return f"{value:.4f} W/(m² sr)"


def _celsius(kelvin: float) -> str:
    return f"{kelvin - ZERO_C_K:.2f} °C"

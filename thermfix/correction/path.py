"""What lies between a surface and the camera, as spectral values at the band's nodes."""

from collections.abc import Mapping
from functools import cache

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input, stated_or_default
from thermfix.errors import InputError, PhysicsError
from thermfix.materials import window_index, window_material
from thermfix.model import Estimate, Scene, Window
from thermfix.radiometry.air import OPTICAL_DEPTH_U, air_transmittance
from thermfix.radiometry.band import Band
from thermfix.radiometry.plate import plate

Array = NDArray[np.float64]

_STEPS = {"air_c": 0.05, "humidity_pct": 0.05, "pressure_hpa": 0.5, "co2_ppm": 1.0}


class AirPath:
    """The air of one scene: its transmittance at any distance and how that goes with each input.

    A measured ``transmittance`` (grey) replaces the model; without a distance the path is clear.
    """

    def __init__(
        self,
        band: Band,
        scene: Scene,
        distance: Input | None,
        measured: Input | None,
    ) -> None:
        self.band = band
        self.air = stated_or_default("air_c", scene.air_k)
        self.measured, self.distance = measured, distance
        self.inputs: Mapping[str, Input] = {}
        if self.modelled:
            self.inputs = {
                "air_c": self.air,
                "humidity_pct": stated_or_default("humidity_pct", scene.humidity_pct),
                "pressure_hpa": stated_or_default("pressure_hpa", scene.pressure_hpa),
                "co2_ppm": stated_or_default("co2_ppm", scene.co2_ppm),
            }
        self._at = cache(self._model)
        self._slopes_at = cache(self._slopes)

    @property
    def modelled(self) -> bool:
        """Whether the air model is in use."""
        return self.measured is None and self.distance is not None

    @property
    def clear(self) -> bool:
        """Whether nobody said anything of the path, so that nothing is absorbed."""
        return self.measured is None and self.distance is None

    def transmittance(self, distance_m: float | None) -> Array:
        """Return τ at the nodes, shape (K,)."""
        if self.measured is not None:
            return np.full(self.band.nodes_um.shape, self.measured.value)
        if distance_m is None:
            return np.ones(self.band.nodes_um.shape)
        return self._at(distance_m)

    def slopes(self, distance_m: float | None) -> list[tuple[Input, Array]]:
        """Return each input of the transmittance with dτ/d(input) at the nodes."""
        return self._slopes_at(distance_m)

    def _slopes(self, distance_m: float | None) -> list[tuple[Input, Array]]:
        if self.measured is not None:
            return [(self.measured, np.ones(self.band.nodes_um.shape))]
        if distance_m is None or self.distance is None:
            return []
        return [
            *((one, self._difference(distance_m, key)) for key, one in self.inputs.items()),
            (self.distance, self._along(distance_m)),
            (Input(key="air_model", value=1.0, u=OPTICAL_DEPTH_U), self._in_depth(distance_m)),
        ]

    def _model(self, distance_m: float, shifted: str = "", step: float = 0.0) -> Array:
        values = {key: one.value + (step if key == shifted else 0.0) for key, one in self.inputs.items()}
        return np.asarray(
            air_transmittance(
                self.band.nodes_um,
                distance_m,
                air_k=values["air_c"],
                humidity_pct=values["humidity_pct"],
                pressure_hpa=values["pressure_hpa"],
                co2_ppm=values["co2_ppm"],
            )
        )

    def _difference(self, distance_m: float, key: str) -> Array:
        step = _STEPS[key]
        value = self.inputs[key].value
        if key in ("humidity_pct", "co2_ppm") and value < step:  # one-sided at the edge of what exists
            return (self._model(distance_m, key, step) - self._at(distance_m)) / step
        return (self._model(distance_m, key, step) - self._model(distance_m, key, -step)) / (2 * step)

    def _along(self, distance_m: float) -> Array:
        step = 1e-3 * max(distance_m, 1e-2)
        return (self._model(distance_m + step) - self._model(max(distance_m - step, 0.0))) / (
            step + min(step, distance_m)
        )

    def _in_depth(self, distance_m: float) -> Array:
        """Return dτ/dm for τ = exp(−m · depth) at m = 1: the model's own error as one factor on the depth."""
        tau = self._at(distance_m)
        return tau * np.log(np.maximum(tau, 1e-300))


class WindowPane:
    """An infrared window: grey numbers, or a plate of a material and thickness; or none at all.

    ``transmittance`` and ``reflectance`` have the shape of the band's nodes; ``tau``, ``rho`` and
    ``temperature`` are the inputs behind them, None without a window.
    """

    def __init__(self, band: Band, scene: Scene, solved: Input | None = None) -> None:
        ones = np.ones(band.nodes_um.shape)
        window = scene.window
        self.transmittance, self.reflectance, self.warning = ones, 0 * ones, ""
        self.tau: Input | None = None
        self.rho: Input | None = None
        self.temperature: Input | None = None
        self.camera_side = stated_or_default("camera_side_c", scene.camera_side_k or scene.air_k)
        self.camera_side_is_air = scene.camera_side_k is None
        if window is None:
            return
        self.temperature = stated_or_default("temperature_c", window.temperature_k, "window")
        if window.material is not None:
            self._plate(band, window)
        else:
            stated = window.transmittance
            self.tau = stated_or_default("transmittance", stated, "window") if isinstance(stated, Estimate) else solved
            self.rho = stated_or_default("reflectance", window.reflectance, "window")
            if self.tau is None:
                raise PhysicsError("The window's transmittance is to be solved, but was not.")
            self.transmittance, self.reflectance = self.tau.value * ones, self.rho.value * ones

    def _plate(self, band: Band, window: Window) -> None:
        """Take the window as an uncoated plate at its angle; its error shifts the whole spectrum."""
        if window.material is None or window.thickness_mm is None:
            raise InputError("A window by its material needs thickness_mm.")
        n, k = window_index(window.material, band.nodes_um)
        angle = 0.0 if window.angle_deg is None else window.angle_deg.value
        optics = plate(n, k, window.thickness_mm.value, band.nodes_um, angle)
        self.transmittance, self.reflectance = optics.transmittance, optics.reflectance
        self.warning = window_material(window.material).warning
        at = band.weights_at(300.0)
        for key, spectrum in (("tau", self.transmittance), ("rho", self.reflectance)):
            quantity = "transmittance" if key == "tau" else "reflectance"
            mean = Estimate(value=float(at @ spectrum / at.sum()))
            setattr(self, key, stated_or_default(quantity, mean, "window"))

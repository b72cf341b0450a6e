"""The camera of an inspection: its band, what its numbers mean, its accuracy and noise."""

from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.correction.defaults import Input
from thermfix.correction.signal import ReceivedSignal
from thermfix.errors import InputError
from thermfix.model import Camera, SignalKind
from thermfix.quantities import ZERO_C_K
from thermfix.radiometry.band import Band

Array = NDArray[np.float64]

DEFAULT_ACCURACY_K, DEFAULT_ACCURACY_REL, DEFAULT_NOISE_K = 2.0, 0.02, 0.1
"""Used where the inspection states none: the limits data sheets of uncooled cameras commonly give."""

NOISE_AT_K = 303.15
"""Noise-equivalent temperature differences are stated at 30 °C. [K]."""


class Instrument:
    """A camera ready for use."""

    def __init__(self, camera: Camera) -> None:
        self.camera = camera
        self.band = _band(camera)
        self.signal = ReceivedSignal(camera, self.band)
        self.accuracy_assumed = camera.accuracy_k is None and camera.accuracy_rel is None
        self.noise_assumed = camera.noise_k is None
        self.limit_k = DEFAULT_ACCURACY_K if self.accuracy_assumed else camera.accuracy_k or 0.0
        self.limit_rel = DEFAULT_ACCURACY_REL if self.accuracy_assumed else camera.accuracy_rel or 0.0
        self.noise_k = DEFAULT_NOISE_K if camera.noise_k is None else camera.noise_k

    @property
    def accuracy(self) -> Input:
        """The camera's accuracy as one input: its error in units of the standard uncertainty at each reading.

        The same for all pixels, readings and frames of the camera; see `accuracy_radiance` for its size.
        """
        return Input(key="accuracy", value=0.0, u=1.0, origin="camera", assumed_u=self.accuracy_assumed)

    @property
    def calibration(self) -> Input | None:
        """The calibration of counts as one input, its error in standard uncertainties; None where it has none."""
        given = self.camera.calibration
        if self.camera.signal.kind is not SignalKind.COUNTS or given is None or given.u_k == 0:
            return None
        return Input(key="calibration", value=0.0, u=1.0, origin="camera")

    def calibration_radiance(self, radiance: ArrayLike) -> Array:
        """Return what one standard uncertainty of the calibration makes in received radiance. [W m⁻² sr⁻¹]."""
        given = self.camera.calibration
        return np.asarray((0.0 if given is None else given.u_k) * self.band.slope(self._apparent_k(radiance)))

    @cached_property
    def noise_radiance(self) -> float:
        """Standard deviation of one pixel's received radiance, the same at every level. [W m⁻² sr⁻¹]."""
        return float(self.noise_k * self.band.slope(NOISE_AT_K))

    def accuracy_u_k(self, apparent_k: ArrayLike) -> Array:
        """Return u of an apparent temperature: half-width / √3, the limits being rectangular. [K].

        The half-width is the larger of the two limits, the relative one taken of the reading in °C.
        """
        celsius = np.abs(np.asarray(apparent_k, dtype=np.float64) - ZERO_C_K)
        return np.asarray(np.maximum(self.limit_k, self.limit_rel * celsius) / np.sqrt(3))

    def accuracy_radiance(self, radiance: ArrayLike) -> Array:
        """Return what one standard uncertainty of the accuracy makes in received radiance. [W m⁻² sr⁻¹]."""
        apparent = self._apparent_k(radiance)
        return self.accuracy_u_k(apparent) * self.band.slope(apparent)

    def _apparent_k(self, radiance: ArrayLike) -> Array:
        # Only an uncertainty hangs on it: at the very ends of the range the nearest temperature will do.
        curve = self.band.curve
        return curve.temperature(np.clip(radiance, curve.lowest, curve.highest))


def _band(camera: Camera) -> Band:
    if camera.response is not None:
        columns = camera.response.columns
        return Band.from_response(columns["wavelength_um"], columns["response"])
    if camera.band_um is None:
        raise InputError("camera.band_um is missing.", hint="Give the wavelengths the camera sees, e.g. [7.5, 14.0].")
    return Band.rectangular(*camera.band_um)

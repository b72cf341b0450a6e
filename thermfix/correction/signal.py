"""From stored numbers to the in-band radiance that the camera received."""

from collections.abc import Callable
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError
from thermfix.model import Applied, BlackbodyTable, Camera, SakumaHattori, SignalKind, TemperatureUnit
from thermfix.quantities import ZERO_C_K
from thermfix.radiometry.band import Band
from thermfix.radiometry.blackbody_table import radiance_from_counts
from thermfix.radiometry.curve import KNOTS_K, Pieces
from thermfix.radiometry.sakuma_hattori import temperature as sakuma_hattori_temperature

Array = NDArray[np.float64]
Fast = NDArray[np.float32]

_TO_KELVIN = {
    TemperatureUnit.KELVIN: (1.0, 0.0),
    TemperatureUnit.CELSIUS: (1.0, ZERO_C_K),
    TemperatureUnit.FAHRENHEIT: (5 / 9, ZERO_C_K - 32 * 5 / 9),
}


class ReceivedSignal:
    """Turns a camera's stored numbers into received radiance; what the camera applied is undone.

    A number that no calibration covers, or that is no number, becomes NaN.
    """

    def __init__(self, camera: Camera, band: Band) -> None:
        self.camera, self.band = camera, band
        signal = camera.signal
        self._scale, self._offset = signal.scale, signal.offset
        if signal.kind is SignalKind.TEMPERATURE:
            factor, shift = _TO_KELVIN[signal.unit]
            self._scale, self._offset = factor * signal.scale, factor * signal.offset + shift
            self._function: Callable[[Array], Array] = _undo(camera.applied or Applied(), band)
        elif signal.kind is SignalKind.RADIANCE:
            self._function = _positive
        else:
            self._function = _from_counts(camera, band)
        self._tables: dict[np.dtype[np.generic], Fast] = {}

    def radiance(self, stored: NDArray[np.generic]) -> Fast:
        """Return the received in-band radiance of stored numbers of any real dtype. [W m⁻² sr⁻¹]."""
        if stored.dtype.kind in "iu" and stored.dtype.itemsize <= 2:
            return self._by_table(stored)
        if self.camera.signal.kind is SignalKind.TEMPERATURE:
            values = stored.astype(np.float32, copy=False)
            return self._pieces(values, scale=self._scale, offset=self._offset)
        return self.exact(stored).astype(np.float32)

    def exact(self, stored: ArrayLike) -> Array:
        """Return the same in float64, without tables."""
        return self._function(np.asarray(stored, dtype=np.float64) * self._scale + self._offset)

    def _by_table(self, stored: NDArray[np.generic]) -> Fast:
        dtype = stored.dtype
        if dtype not in self._tables:
            limits = np.iinfo(dtype.str)
            # A negative number indexes the table from its end, so the order is that of the bit patterns.
            numbers = np.arange(limits.max + 1 - limits.min, dtype=np.int64).astype(dtype)
            table = self.exact(numbers).astype(np.float32)
            table[limits.max] = np.nan  # the highest number of its type is where a signal ends, not a signal
            self._tables[dtype] = table
        return self._tables[dtype].take(stored.astype(np.intp, copy=False), mode="wrap")

    @cached_property
    def _pieces(self) -> Pieces:
        return Pieces(self._function, float(KNOTS_K[0]), float(KNOTS_K[-1]), shift=11)


def _undo(applied: Applied, band: Band) -> Callable[[Array], Array]:
    """Return T → the radiance received: τ_b [ε_b L(T) + (1 − ε_b) L(T_rb)] + (1 − τ_b) L(T_ab)."""
    scale = applied.transmittance * applied.emissivity
    offset = 0.0
    if applied.emissivity < 1:
        offset += applied.transmittance * (1 - applied.emissivity) * _known(applied.reflected_k, "reflected_c", band)
    if applied.transmittance < 1:
        offset += (1 - applied.transmittance) * _known(applied.air_k, "air_c", band)
    return lambda kelvin: scale * band.curve.radiance(kelvin) + offset


def _known(temperature_k: float | None, key: str, band: Band) -> float:
    if temperature_k is None:
        raise InputError(
            f"camera.applied.{key} is missing.",
            hint="It says what the camera assumed; without it nothing can be undone.",
        )
    return float(band.radiance(temperature_k))


def _positive(radiance: Array) -> Array:
    return np.where(radiance > 0, radiance, np.nan)


def _from_counts(camera: Camera, band: Band) -> Callable[[Array], Array]:
    calibration = camera.calibration
    if isinstance(calibration, SakumaHattori):
        c = calibration
        return lambda counts: band.curve.radiance(
            sakuma_hattori_temperature(counts, a_um=c.a_um, b_um_k=c.b_um_k, c=c.c, d=c.d)
        )
    if isinstance(calibration, BlackbodyTable):
        columns = calibration.table.columns
        shots = band.radiance(columns["temperature_k"])
        return lambda counts: radiance_from_counts(counts, columns["counts"], shots)
    raise InputError(
        "The stored numbers are counts, but camera.calibration is missing.",
        hint="Give a Sakuma–Hattori calibration or a table of blackbody shots (see thermfix calibrate).",
    )

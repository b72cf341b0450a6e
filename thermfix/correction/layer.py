"""One region's (or the background's) fast correction: coefficients per pixel, built once per frame set-up."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.cautions import Reason
from thermfix.correction.defaults import Input
from thermfix.correction.instrument import Instrument
from thermfix.correction.setting import Circumstances, Setting
from thermfix.model import Region
from thermfix.radiometry.curve import KNOTS_K, Curve

Array = NDArray[np.float64]
Fast = NDArray[np.float32]

REFERENCE_K = 323.15
"""Temperature at which the coefficients a and b are stated; the layer's curve carries the rest. [K]."""

STEEPEST_DEG = 80.0
"""Beyond this view angle there is no reading. [deg]."""

_NODE_STEP_DEG = 0.5
_FEW = 2048
_NO_PIXELS = np.empty(0, np.intp)
_LN_KNOTS = np.log(KNOTS_K)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Geometry:
    """How a region's pixels are seen: one number for all of them, or one per pixel (n,). [deg], [m]."""

    angle_deg: Array
    distance_m: Array | None

    @property
    def angle_mean_deg(self) -> float:
        """Mean view angle over pixels that have one; NaN if none has."""
        known = self.angle_deg[np.isfinite(self.angle_deg)]
        return float(known.mean()) if known.size else float("nan")

    @property
    def distance_mean_m(self) -> float | None:
        """Mean distance, None for a path that nobody stated."""
        return None if self.distance_m is None else float(self.distance_m.mean())


class Layer:
    """The correction of one set of pixels that share one surface.

    Surface temperature is ``curve⁻¹(a · L_meas + b)``. The coefficients a and b hold per pixel what
    angle and distance change; the curve is the band as seen through this surface and path, so that
    emissivity and transmittance are exact at every surface temperature and not only at the one
    where a and b were taken.

    Parameters
    ----------
    region : Region or None
        None for the pixels outside every region.
    pixels : ndarray of intp, shape (n,)
        Flat indices into the frame, in row order; none for the background, which is the whole frame.
    """

    def __init__(
        self,
        *,
        instrument: Instrument,
        circumstances: Circumstances,
        geometry: Geometry,
        region: Region | None = None,
        pixels: NDArray[np.intp] = _NO_PIXELS,
    ) -> None:
        self.instrument, self.circumstances, self.geometry = instrument, circumstances, geometry
        self.region, self.pixels = region, pixels
        steep = ~(geometry.angle_deg <= STEEPEST_DEG)
        angles = np.where(steep, np.nan, geometry.angle_deg)
        self.too_oblique = steep
        angle = float(np.nanmean(angles)) if not steep.all() else float("nan")
        self.setting: Setting = circumstances.at(angle, geometry.distance_mean_m)
        self._angles = _few_nodes(angles, angle)
        self._place = _position(angles, self._angles)
        share, rest = _coefficients(circumstances, angles, geometry.distance_m)
        self.a = (1 / share).astype(np.float32)
        self.b = (-rest / share).astype(np.float32)
        self.rest = rest.astype(np.float32)
        band = instrument.band
        self.mean_share = float(self.setting.emission @ band.planck_at(REFERENCE_K) / band.radiance(REFERENCE_K))
        self.curve = Curve(
            band.planck_at_knots @ self.setting.emission / self.mean_share,
            band.planck_slope_at_knots @ self.setting.emission / self.mean_share,
        )

    def temperature(self, radiance: Fast) -> Fast:
        """Return the surface temperature of received radiance, shape kept. [K]; NaN where there is none."""
        if radiance.size <= _FEW:
            # The exact inverse costs less here than the table would.
            return self.curve.temperature(self.a * radiance + self.b).astype(np.float32)
        return self.curve.pieces(radiance, scale=_scalar(self.a), offset=_scalar(self.b))

    def temperature_and_u(self, radiance: Fast) -> tuple[Fast, Fast]:
        """Return the surface temperature and its standard uncertainty, noise included, in one pass. [K]."""
        if radiance.size <= _FEW or self._angles.size > 1:
            surface = self.temperature(radiance)
            return surface, self.uncertainty(surface)
        return self.curve.pieces.with_table(radiance, self._u_of_piece, scale=_scalar(self.a), offset=_scalar(self.b))

    def reason(self, radiance: Fast, surface_k: Fast) -> NDArray[np.uint8]:
        """Return why each pixel has no temperature (``Reason``), 0 where it has one."""
        codes = np.zeros(surface_k.shape, np.uint8)
        empty = np.isnan(surface_k)
        if not empty.any():
            return codes
        with np.errstate(invalid="ignore"):
            dark = self.a * radiance + self.b <= 0
        codes[empty] = Reason.OUTSIDE_RANGE
        codes[empty & dark] = Reason.NO_EMISSION
        codes[empty & np.broadcast_to(self.too_oblique, codes.shape)] = Reason.TOO_OBLIQUE
        return codes

    def uncertainty(self, surface_k: Fast) -> Fast:
        """Return the standard uncertainty of single pixels, noise included. [K]."""
        total = np.hypot(self.shared_u_k, self.noise_u_k)
        if self._angles.size > 1:
            return _bilinear(total, self._place, _knot_position(surface_k)).astype(np.float32)
        return np.asarray(np.interp(np.log(surface_k), _LN_KNOTS, total[0]), np.float32)

    def mean_weights(self, surface_k: Array, known: NDArray[np.bool_]) -> Array:
        """Return the weights with which a table over angles and ``KNOTS_K`` makes its mean over the known pixels.

        ``surface_k`` holds the temperatures of all the layer's pixels [K]; at least one is known. Shape (J, 320).
        """
        column = _knot_position(surface_k[known])
        rows, columns = self._angles.size, _LN_KNOTS.size
        j = _cell(column, columns)
        right = column - j
        if rows == 1:
            single = np.bincount(j, 1 - right, columns) + np.bincount(j + 1, right, columns)
            return np.asarray(single[None, :] / column.size)
        row = np.broadcast_to(self._place, surface_k.shape)[known]
        i = _cell(row, rows)
        down, weights = row - i, np.zeros(rows * columns)
        for di, share_i in ((0, 1 - down), (1, down)):
            for dj, share_j in ((0, 1 - right), (1, right)):
                weights += np.bincount((i + di) * columns + j + dj, share_i * share_j, rows * columns)
        return np.asarray(weights.reshape(rows, columns) / column.size)

    def typical(self, table: Array, kelvin: float) -> Array:
        """Return a table over angles and ``KNOTS_K`` at the mean angle and one temperature [K], shape (...)."""
        row = _position(np.array([self.geometry.angle_mean_deg]), self._angles)[0] if self._angles.size > 1 else 0.0
        upper = min(int(row) + 1, table.shape[-2] - 1)
        at_angle = table[..., int(row), :] * (1 - row % 1) + table[..., upper, :] * (row % 1)
        column = float(_knot_position(np.array([kelvin]))[0])
        j = int(np.clip(column, 0, table.shape[-1] - 2))
        return np.asarray(at_angle[..., j] * (1 - (column - j)) + at_angle[..., j + 1] * (column - j))

    @cached_property
    def inputs(self) -> tuple[Input, ...]:
        """Every input with an error of its own, the camera's accuracy last: the rows of `sensitivities`."""
        return self._resolved[0]

    @cached_property
    def sensitivities(self) -> Array:
        """dT/d(input) over angle nodes and ``KNOTS_K``, shape (inputs, J, 320).

        Solved inputs are spread over what they were found from.
        """
        return self._resolved[1]

    @cached_property
    def _settings(self) -> tuple[Setting, ...]:
        if self._angles.size == 1:
            return (self.setting,)
        distance = self.geometry.distance_mean_m
        return tuple(self.circumstances.at(float(angle), distance) for angle in self._angles)

    @cached_property
    def _resolved(self) -> tuple[tuple[Input, ...], Array]:
        found = [self._rows_of(setting) for setting in self._settings]
        table = np.stack([np.stack([row for _, row in rows.values()]) for rows in found], axis=1)
        return tuple(one for one, _ in found[0].values()), table

    def _rows_of(self, setting: Setting) -> dict[str, tuple[Input, Array]]:
        band = self.instrument.band
        slope = band.planck_slope_at_knots @ setting.emission
        rows: dict[str, tuple[Input, Array]] = {}
        for term in setting.terms:
            gain = 0.0 if term.gain is None else band.planck_at_knots @ term.gain
            _spread(rows, term.input, -(gain + term.offset) / slope)
        received = band.planck_at_knots @ setting.emission + setting.rest
        if self.instrument.calibration is not None:
            _spread(rows, self.instrument.calibration, self.instrument.calibration_radiance(received) / slope)
        _spread(rows, self.instrument.accuracy, self.instrument.accuracy_radiance(received) / slope)
        # Solved inputs may have brought the camera's accuracy in early; it stands last all the same.
        rows[self.instrument.accuracy.name] = rows.pop(self.instrument.accuracy.name)
        return rows

    @cached_property
    def noise_u_k(self) -> Array:
        """Standard uncertainty of one pixel from noise, over angle nodes and ``KNOTS_K``, shape (J, 320). [K]."""
        slopes = [self.instrument.band.planck_slope_at_knots @ one.emission for one in self._settings]
        return np.asarray(self.instrument.noise_radiance / np.stack(slopes))

    @cached_property
    def shared_u_k(self) -> Array:
        """Standard uncertainty that all pixels share, over angle nodes and ``KNOTS_K``, shape (J, 320). [K]."""
        u = np.array([one.u for one in self.inputs])
        return np.asarray(np.sqrt(((self.sensitivities * u[:, None, None]) ** 2).sum(axis=0)))

    @cached_property
    def _u_of_piece(self) -> Fast:
        """Uncertainty in the middle of every piece of the curve: across one of them it changes by less than 0.1 %."""
        total = np.hypot(self.shared_u_k, self.noise_u_k)[0]
        return np.asarray(np.interp(np.log(self.curve.pieces.middles), _LN_KNOTS, total), np.float32)


def _spread(rows: dict[str, tuple[Input, Array]], one: Input, sensitivity: Array) -> None:
    """Add an input's row of sensitivities; a solved input's goes to its parts, which have no parts themselves."""
    for part, slope in one.parts or ((one, 1.0),):
        before = rows[part.name][1] if part.name in rows else 0.0
        rows[part.name] = (part, before + slope * sensitivity)


def _scalar(values: Fast) -> Fast | float:
    return float(values[0]) if values.size == 1 else values


def _coefficients(about: Circumstances, angles_deg: Array, distance_m: Array | None) -> tuple[Array, Array]:
    """Return the share g and the rest per pixel, by bilinear interpolation between nodes of angle and distance."""
    angle_nodes = _nodes(angles_deg, _NODE_STEP_DEG)
    distance_nodes: list[float | None] = [None]
    if distance_m is not None:
        distance_nodes = list(_nodes(distance_m, max(float(np.nanmean(distance_m)) * 0.02, 1e-9)))
    share, rest = about.coefficients(angle_nodes, distance_nodes, REFERENCE_K)
    row = _position(angles_deg, angle_nodes)
    column = np.zeros(1) if distance_m is None else _position(distance_m, np.array(distance_nodes, dtype=np.float64))
    return _bilinear(share, row, column), _bilinear(rest, row, column)


def _nodes(values: Array, step: float) -> Array:
    known = values[np.isfinite(values)]
    if known.size == 0:
        return np.array([0.0])
    low, high = float(known.min()), float(known.max())
    return np.linspace(low, high, int(np.ceil((high - low) / step)) + 1)


def _position(values: Array, nodes: Array) -> Array:
    if nodes.size == 1:
        return np.where(np.isfinite(values), 0.0, np.nan)
    return np.asarray((values - nodes[0]) / (nodes[1] - nodes[0]))


def _few_nodes(angles_deg: Array, mean_deg: float) -> Array:
    """Return the angles at which sensitivities are worked out: one, or seven where the angle varies by over 1°."""
    known = angles_deg[np.isfinite(angles_deg)]
    if known.size == 0 or np.ptp(known) <= 1:
        return np.array([mean_deg])
    return np.linspace(known.min(), known.max(), 7)


def _knot_position(kelvin: NDArray[np.floating]) -> Array:
    return np.asarray((np.log(kelvin.astype(np.float64)) - _LN_KNOTS[0]) / (_LN_KNOTS[1] - _LN_KNOTS[0]))


def _cell(position: Array, size: int) -> NDArray[np.intp]:
    return np.clip(position.astype(np.intp), 0, max(size - 2, 0))


def _bilinear(table: Array, row: Array, column: Array) -> Array:
    row, column = np.broadcast_arrays(row, column)
    known = np.isfinite(row) & np.isfinite(column)
    r, c = np.where(known, row, 0.0), np.where(known, column, 0.0)
    i, j = _cell(r, table.shape[0]), _cell(c, table.shape[1])
    i1, j1 = np.minimum(i + 1, table.shape[0] - 1), np.minimum(j + 1, table.shape[1] - 1)
    fr, fc = r - i, c - j
    top = table[i, j] * (1 - fc) + table[i, j1] * fc
    bottom = table[i1, j] * (1 - fc) + table[i1, j1] * fc
    return np.where(known, top * (1 - fr) + bottom * fr, np.nan)

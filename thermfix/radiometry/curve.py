"""A rising curve of radiance against temperature, inverted exactly enough (float64) or fast (float32 pieces)."""

from collections.abc import Callable
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

KNOTS_K: Array = np.geomspace(200.0, 3400.0, 320)
"""Temperatures at which curves are evaluated. Evenly spaced in ln T, where ln L is nearly straight."""
KNOTS_K.flags.writeable = False

LOWEST_K, HIGHEST_K = 213.15, 3273.15
"""Readings are carried from −60 °C to 3000 °C; outside, the inverse gives NaN."""

_BLOCK = 65_536


class Curve:
    """In-band radiance L(T) seen through something, given by its values and slopes at ``KNOTS_K``.

    Parameters
    ----------
    radiance : array_like, shape (320,)
        L at the knots. [W m⁻² sr⁻¹], > 0 and rising.
    slope : array_like, shape (320,)
        dL/dT at the knots. [W m⁻² sr⁻¹ K⁻¹], > 0.

    Notes
    -----
    Between knots ln L and ln T are cubic Hermite functions of each other; their error is below
    1e-8 relative for bands within 2–15 µm.
    """

    def __init__(self, radiance: ArrayLike, slope: ArrayLike) -> None:
        values = np.asarray(radiance, dtype=np.float64)
        self._ln_t = np.log(KNOTS_K)
        self._ln_l = np.log(values)
        self._order = KNOTS_K * np.asarray(slope, dtype=np.float64) / values  # d ln L / d ln T
        self.lowest, self.highest = (float(v) for v in self.radiance([LOWEST_K, HIGHEST_K]))

    def radiance(self, temperature_k: ArrayLike) -> Array:
        """Return L(T) by interpolation; NaN outside 200–3400 K. [W m⁻² sr⁻¹]."""
        temperature = np.asarray(temperature_k, dtype=np.float64)
        with np.errstate(invalid="ignore", divide="ignore"):
            return np.exp(_hermite(np.log(temperature), self._ln_t, self._ln_l, self._order))

    def temperature(self, radiance: ArrayLike) -> Array:
        """Return T(L) for −60…3000 °C, NaN elsewhere and for radiance that is not positive. [K]."""
        values = np.asarray(radiance, dtype=np.float64)
        # A billionth of slack, so that T(L(T)) survives at both ends of the range.
        inside = (values >= self.lowest * (1 - 1e-9)) & (values <= self.highest * (1 + 1e-9))
        ln_l = np.log(np.where(inside, values, np.nan))
        return np.exp(_hermite(ln_l, self._ln_l, self._ln_t, 1 / self._order))

    @cached_property
    def pieces(self) -> "Pieces":
        """The inverse as float32 linear pieces: within 0.25 mK, and 0.06 mK below 400 K."""
        return Pieces(self.temperature, self.lowest, self.highest, shift=12)


class Pieces:
    """A function of a positive float32 as linear pieces, looked up by the number's own bit pattern.

    Parameters
    ----------
    function : callable
        Float64 array in, float64 array out; smooth on [lowest, highest].
    lowest, highest : float
        Ends of the domain. Everything else (negative, zero, NaN, infinite) gives NaN.
    shift : int
        Low bits dropped: 2**(23 − shift) pieces per octave.

    Notes
    -----
    The bits of a positive float rise with its value, so ``bits >> shift`` numbers pieces of equal
    relative width. The bits are read *unsigned*: a sign bit then makes a large number, which falls
    on the last, empty piece instead of a plausible one. Within a piece the value
    is ``start + gradient * (L - L_start)``: that difference is exact in float32.
    """

    def __init__(self, function: Callable[[Array], Array], lowest: float, highest: float, *, shift: int) -> None:
        first, last = (int(bits) >> shift for bits in np.array([lowest, highest], np.float32).view(np.uint32))
        starts = np.arange(first, last + 2, dtype=np.uint32) << np.uint32(shift)
        edges = starts.view(np.float32).astype(np.float64)
        left, right = np.clip(edges[:-1], lowest, highest), np.clip(edges[1:], lowest, highest)
        f_left, f_mid, f_right = function(left), function((left + right) / 2), function(right)
        with np.errstate(invalid="ignore", divide="ignore"):
            gradient = np.where(right > left, (f_right - f_left) / (right - left), 0.0)
        # Half of the mid deviation evens out the error of the chord to both sides.
        start = f_left - gradient * (left - edges[:-1]) + (f_mid - (f_left + f_right) / 2) / 2
        self._shift = np.uint32(shift)
        self._high_bits = np.uint32((0xFFFFFFFF >> shift) << shift)
        # One empty piece at each end: whatever lies outside the domain is clipped onto them.
        self._below = first - 1
        self.middles = np.concatenate([[np.nan], f_mid, [np.nan]])
        self._start = np.concatenate([[np.nan], start, [np.nan]]).astype(np.float32)
        self._gradient = np.concatenate([[np.nan], gradient, [np.nan]]).astype(np.float32)

    def __call__(
        self,
        values: NDArray[np.float32],
        *,
        scale: NDArray[np.float32] | float = 1.0,
        offset: NDArray[np.float32] | float = 0.0,
    ) -> NDArray[np.float32]:
        """Return the function of ``scale * values + offset`` (shape kept), NaN outside the domain.

        ``values`` is float32; ``scale`` and ``offset`` are numbers or float32 arrays of its shape.
        """
        out = np.empty(values.shape, np.float32)
        self._run(values, scale, offset, out, None)
        return out

    def with_slope(
        self,
        values: NDArray[np.float32],
        *,
        scale: NDArray[np.float32] | float = 1.0,
        offset: NDArray[np.float32] | float = 0.0,
    ) -> tuple[NDArray[np.float32], NDArray[np.float32]]:
        """Return the function and its derivative with respect to ``scale * values + offset``."""
        out, slope = np.empty(values.shape, np.float32), np.empty(values.shape, np.float32)
        self._run(values, scale, offset, out, slope)
        return out, slope

    def with_table(
        self,
        values: NDArray[np.float32],
        table: NDArray[np.float32],
        *,
        scale: NDArray[np.float32] | float = 1.0,
        offset: NDArray[np.float32] | float = 0.0,
    ) -> tuple[NDArray[np.float32], NDArray[np.float32]]:
        """Return the function, and for each value the entry of a table with one number for every piece.

        The table goes with `middles`: the function in the middle of each piece, NaN at both ends.
        """
        out, found = np.empty(values.shape, np.float32), np.empty(values.shape, np.float32)
        self._run(values, scale, offset, out, None, (table, found.reshape(-1)))
        return out, found

    def _run(
        self,
        values: NDArray[np.float32],
        scale: NDArray[np.float32] | float,
        offset: NDArray[np.float32] | float,
        out: NDArray[np.float32],
        slope: NDArray[np.float32] | None,
        also: tuple[NDArray[np.float32], NDArray[np.float32]] | None = None,
    ) -> None:
        flat, flat_out = np.ascontiguousarray(values).reshape(-1), out.reshape(-1)
        size = min(flat.size, _BLOCK)
        x, floor, gradient = np.empty(size, np.float32), np.empty(size, np.uint32), np.empty(size, np.float32)
        piece = np.empty(size, np.intp)
        plain = np.ndim(scale) == 0 and scale == 1.0 and np.ndim(offset) == 0 and offset == 0.0
        scales, offsets = _part(scale), _part(offset)
        with np.errstate(invalid="ignore", over="ignore"):
            for begin in range(0, flat.size, _BLOCK):
                part = slice(begin, min(begin + _BLOCK, flat.size))
                n = part.stop - begin
                block = flat[part]
                if not plain:
                    block = np.multiply(block, scales(part), out=x[:n])
                    block += offsets(part)
                steep = gradient[:n] if slope is None else slope.reshape(-1)[part]
                self._look_up(block, flat_out[part], steep, floor[:n], piece[:n])
                if also is not None:
                    also[0].take(piece[:n], out=also[1][part], mode="clip")

    def _look_up(
        self,
        block: NDArray[np.float32],
        target: NDArray[np.float32],
        gradient: NDArray[np.float32],
        floor: NDArray[np.uint32],
        piece: NDArray[np.intp],
    ) -> None:
        """Fill target and gradient; floor and piece are scratch of the same length."""
        bits = block.view(np.uint32)
        np.right_shift(bits, self._shift, out=piece, casting="unsafe", dtype=np.uint32)
        piece -= self._below
        self._gradient.take(piece, out=gradient, mode="clip")
        np.bitwise_and(bits, self._high_bits, out=floor)
        np.subtract(block, floor.view(np.float32), out=target)
        target *= gradient
        start = floor.view(np.float32)
        self._start.take(piece, out=start, mode="clip")
        target += start


def _part(factor: NDArray[np.float32] | float) -> Callable[[slice], NDArray[np.float32] | np.float32]:
    """Return what gives the block of an array, or the number itself in float32."""
    if np.ndim(factor) == 0:
        number = np.float32(factor)
        return lambda _: number
    flat = np.ascontiguousarray(factor, dtype=np.float32).reshape(-1)
    return lambda part: flat[part]


def _hermite(x: Array, knots: Array, values: Array, slopes: Array) -> Array:
    """Cubic Hermite interpolation; NaN outside the knots. All float64; knots rising."""
    inside = (x >= knots[0]) & (x <= knots[-1])
    i = np.clip(np.searchsorted(knots, np.where(inside, x, knots[0]), side="right") - 1, 0, knots.size - 2)
    width = knots[i + 1] - knots[i]
    s = (x - knots[i]) / width
    start, end = slopes[i] * width, slopes[i + 1] * width
    rise = values[i + 1] - values[i]
    result = values[i] + s * (start + s * (3 * rise - 2 * start - end + s * (start + end - 2 * rise)))
    return np.where(inside, result, np.nan)

"""Shift and turn between two frames of the same scene, by phase correlation and least squares."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError

Array = NDArray[np.float64]

_LEAST = 16
_WORST_TURN_DEG = 30.0
_TURNS = 1024
_MOST_POINTS = 40_000


@dataclass(frozen=True, slots=True, kw_only=True)
class Motion:
    """How the second frame lies on the first.

    A point (x, y) of the first is found in the second at R (x − c) + c + (shift_x_px, shift_y_px), with c the
    frame's centre and R a turn by ``turn_deg``, clockwise as seen (x right, y down). ``quality`` is the linear
    correlation of the two where they overlap once laid on each other, 0 to 1; unrelated scenes of a few large
    patches have reached 0.7, so believe nothing below 0.8.
    """

    shift_x_px: float
    shift_y_px: float
    turn_deg: float
    quality: float


def motion_between(first: NDArray[np.floating], second: NDArray[np.floating], *, turning: bool = True) -> Motion:
    r"""Return shift and turn from one frame to another of the same size.

    Parameters
    ----------
    first, second : ndarray, shape (rows, columns), both ≥ 16
        Values of any unit; pixels without a number count as the frame's median.
    turning : bool
        Whether to look for a turn too, up to ±30°; without, frames are only shifted.

    Raises
    ------
    InputError
        If the frames differ in shape, are too small, or one of them is even.

    Notes
    -----
    .. math:: r = F^{-1}\left[\frac{F_2 F_1^*}{|F_2 F_1^*|}\,W\right]

    peaks at the shift; W is a Gaussian low pass that leaves out frequencies of noise alone. The turn is the
    shift along the angle between the two amplitude spectra in polar coordinates, which do not see the frames'
    own shift. From there (and from no turn) shift and turn are refined by least squares on the smoothed values,
    with a gain and an offset free, so that a scene may have warmed evenly.

    References
    ----------
    .. [1] C. D. Kuglin and D. C. Hines, "The phase correlation image alignment method", IEEE Int. Conf. Cybernetics
       and Society, 1975.
    .. [2] B. S. Reddy and B. N. Chatterji, IEEE Trans. Image Process. 5 (1996) 1266: the turn.
    .. [3] B. D. Lucas and T. Kanade, Proc. 7th Int. Joint Conf. Artificial Intelligence, 1981, 674: the refinement.
    """
    one, other = _prepared(first), _prepared(second)
    if one.shape != other.shape:
        raise InputError(f"The frames differ in shape: {first.shape} and {second.shape}.")
    starts = {0.0, _turn(one, other)} if turning else {0.0}
    found = [_refined(one, other, _shifted(one, other, turn), turning=turning) for turn in sorted(starts)]
    (shift_x, shift_y, turn), quality = max(found, key=lambda one: one[1])
    return Motion(
        shift_x_px=float(shift_x),
        shift_y_px=float(shift_y),
        turn_deg=float(np.degrees(turn)),
        quality=max(quality, 0.0),
    )


def _prepared(frame: NDArray[np.floating]) -> Array:
    values = np.asarray(frame, dtype=np.float64)
    if values.ndim != 2 or min(values.shape) < _LEAST:
        raise InputError(f"A frame to lay over another must have {_LEAST} × {_LEAST} pixels or more.")
    known = np.isfinite(values)
    if not known.any() or float(np.ptp(values[known])) == 0:
        raise InputError("A frame without any detail cannot be laid over another.")
    filled = np.where(known, values, np.median(values[known]))
    return np.asarray((filled - filled.mean()) / filled.std())


def _windowed(values: Array) -> Array:
    """Return the frame faded out to its rim, whose jump would otherwise stand still in every frame."""
    rows, columns = values.shape
    return np.asarray(values * np.hanning(rows + 2)[1:-1, None] * np.hanning(columns + 2)[1:-1])


def _shifted(one: Array, other: Array, turn_deg: float) -> Array:
    """Return shift x, shift y [px] and turn [rad] for a given turn."""
    a = float(np.radians(turn_deg))
    dy, dx = _peak(_windowed(one), _windowed(_laid(other, np.array([0.0, 0.0, a]))[0]))
    # Found with the second frame turned back: the shift turns with it.
    return np.array([np.cos(a) * dx - np.sin(a) * dy, np.sin(a) * dx + np.cos(a) * dy, a])


def _refined(one: Array, other: Array, motion: Array, *, turning: bool) -> tuple[Array, float]:
    """Return shift and turn by least squares from a start, coarse before fine, and the frames' correlation there."""
    fine = _smoothed(one, 2), _smoothed(other, 2)
    best = motion, _likeness(*fine, motion)
    for rim, frames in ((8, (_smoothed(fine[0], 10), _smoothed(fine[1], 10))), (3, fine)):
        moved = _steps(*frames, best[0], rim, turning=turning)
        likeness = _likeness(*fine, moved)
        if likeness > best[1]:
            best = moved, likeness
    return best


def _steps(one: Array, other: Array, motion: Array, rim: int, *, turning: bool) -> Array:
    """Return shift and turn after Gauss–Newton; the rims, which were smoothed with what is not there, are left out."""
    slope_y, slope_x = (np.asarray(np.gradient(other, axis=axis), dtype=np.float64) for axis in (0, 1))
    stride = max(int(np.sqrt(one.size / _MOST_POINTS)), 1)
    free = 3 if turning else 2
    for _ in range(20):
        x, y, shown = _places(one.shape, motion, stride, rim)
        values, down, across = (_sampled(which, x, y)[shown] for which in (other, slope_y, slope_x))
        rows, columns = one.shape
        arm_x, arm_y = x[shown] - (columns - 1) / 2 - motion[0], y[shown] - (rows - 1) / 2 - motion[1]
        terms = [across, down, down * arm_x - across * arm_y][:free]
        matrix = np.stack([*terms, values, np.ones(values.size)], axis=1)
        if values.size < _LEAST**2:
            break
        target = one[::stride, ::stride][shown]
        solved = np.linalg.lstsq(matrix.T @ matrix, matrix.T @ target, rcond=None)[0]
        if not abs(solved[free]) > 0.05:
            break
        # The linear form is gain × (value + slope × step): the steps come out times the gain.
        step = np.zeros(3)
        step[:free] = np.clip(solved[:free] / solved[free], -3, 3)
        step[2] = np.clip(step[2], -0.05, 0.05)
        motion = motion + step
        if np.abs(step[:2]).max() < 1e-3 and abs(step[2]) < 1e-5:
            break
    return motion


def _likeness(one: Array, other: Array, motion: Array) -> float:
    """Return the linear correlation of the frames where they overlap; 0 where that is under a tenth of a frame."""
    laid, shown = _laid(other, motion)
    if shown.sum() < 0.1 * one.size:
        return 0.0
    a, b = one[shown] - one[shown].mean(), laid[shown] - laid[shown].mean()
    size = float(np.sqrt((a @ a) * (b @ b)))
    return float(a @ b) / size if size > 0 else 0.0


def _smoothed(values: Array, passes: int) -> Array:
    """Return values after so many passes of (1, 2, 1)/4 both ways."""
    for _ in range(passes):
        for axis in (0, 1):
            wide = np.pad(values, [(1, 1) if axis == one else (0, 0) for one in (0, 1)], mode="edge")
            low, high = (wide[:-2], wide[2:]) if axis == 0 else (wide[:, :-2], wide[:, 2:])
            values = (low + 2 * values + high) / 4
    return values


def _peak(one: Array, other: Array, width: float = 0.18) -> tuple[float, float]:
    """Return where the second array lies from the first (down, across), to a part of a cell."""
    cross = np.fft.rfft2(other) * np.conj(np.fft.rfft2(one))
    size = np.abs(cross)
    phase = cross / np.maximum(size, 1e-12 * size.max())
    down, across = np.fft.fftfreq(one.shape[0])[:, None], np.fft.rfftfreq(one.shape[1])
    found = np.fft.irfft2(phase * np.exp(-(down**2 + across**2) / (2 * width**2)), s=one.shape)
    row, column = (int(one) for one in np.unravel_index(found.argmax(), found.shape))
    return _vertex(found[:, column], row), _vertex(found[row], column)


def _vertex(values: Array, top: int) -> float:
    """Return the place of a Gaussian-shaped peak by its three highest points, counted from −n/2 to n/2."""
    count = len(values)
    before, here, after = (float(values[(top + step) % count]) for step in (-1, 0, 1))
    place = float(top if top <= count // 2 else top - count)
    if min(before, after) <= 0 or before + after >= 2 * here:
        return place
    low, middle, high = np.log([before, here, after])
    return place + float(0.5 * (low - high) / (low - 2 * middle + high))


def _turn(one: Array, other: Array) -> float:
    """Return the angle of the second frame against the first. [deg]."""
    angle = _peak(_polar(one), _polar(other), 0.1)[0] * 180.0 / _TURNS
    return angle if abs(angle) <= _WORST_TURN_DEG else 0.0


def _polar(values: Array) -> Array:
    """Return the log amplitude of the spectrum by angle (rows, half a turn) and log frequency (columns)."""
    side = max(values.shape)
    spectrum = np.fft.fftshift(np.abs(np.fft.fft2(_windowed(values), s=(side, side))))
    angles = np.pi * np.arange(_TURNS) / _TURNS
    radii = np.geomspace(0.03, 0.35, 96) * side
    x = side // 2 + np.cos(angles)[:, None] * radii
    y = side // 2 + np.sin(angles)[:, None] * radii
    polar = np.log(_sampled(spectrum, x, y) + 1e-6 * spectrum.max())
    return np.asarray((polar - polar.mean(axis=0)) * np.hanning(len(radii) + 2)[1:-1])


def _laid(values: Array, motion: Array) -> tuple[Array, NDArray[np.bool_]]:
    """Return the second frame laid on the first, 0 (its mean) where it shows nothing, and where it shows something."""
    x, y, shown = _places((values.shape[0], values.shape[1]), motion)
    return np.where(shown, _sampled(values, x, y), 0.0), shown


def _places(
    shape: tuple[int, ...], motion: Array, stride: int = 1, rim: int = 0
) -> tuple[Array, Array, NDArray[np.bool_]]:
    """Return where the first frame's pixels lie in the second, and which of them, rims left out, it shows."""
    rows, columns = shape
    shift_x, shift_y, a = motion
    y, x = np.mgrid[0:rows:stride, 0:columns:stride] - np.array([(rows - 1) / 2, (columns - 1) / 2])[:, None, None]
    there_x = np.cos(a) * x - np.sin(a) * y + (columns - 1) / 2 + shift_x
    there_y = np.sin(a) * x + np.cos(a) * y + (rows - 1) / 2 + shift_y
    shown = (there_x >= rim) & (there_x <= columns - 1 - rim) & (there_y >= rim) & (there_y <= rows - 1 - rim)
    shown &= (np.abs(x) <= (columns - 1) / 2 - rim) & (np.abs(y) <= (rows - 1) / 2 - rim)
    return there_x, there_y, shown


def _sampled(values: Array, x: Array, y: Array) -> Array:
    """Return values between pixels, bilinear, from the nearest inside beyond the rim."""
    x, y = np.clip(x, 0, values.shape[1] - 1.001), np.clip(y, 0, values.shape[0] - 1.001)
    left, top = x.astype(np.intp), y.astype(np.intp)
    part_x, part_y = x - left, y - top
    upper = values[top, left] * (1 - part_x) + values[top, left + 1] * part_x
    lower = values[top + 1, left] * (1 - part_x) + values[top + 1, left + 1] * part_x
    return np.asarray(upper * (1 - part_y) + lower * part_y)

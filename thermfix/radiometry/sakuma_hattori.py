"""The Planckian Sakuma–Hattori equation between counts and temperature, and its fit to blackbody shots."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError
from thermfix.radiometry.planck import C2_UM_K

Array = NDArray[np.float64]

# Bounds of a fit: ln of A in µm, and B as a share of A times the coldest temperature, so that A T + B stays > 0.
_LOW, _HIGH = (np.log(0.5), -0.5), (np.log(50.0), 2.0)
_ROUNDS, _SETTLED = 8, 1e-8
_RANK_LIMIT = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class SakumaHattoriFit:
    """A fitted calibration and how well it holds.

    Attributes
    ----------
    parameters : tuple of float
        A [µm], B [µm K], C [counts], D [counts].
    covariance : ndarray, shape (4, 4)
        Of the four, from the scatter of the residuals; row and column of a fixed D are 0. All NaN
        if ``degenerate``.
    residual_counts : ndarray, shape (n,)
        Counts the fit gives at each temperature minus the given counts, in the order given.
    residual_k : ndarray, shape (n,)
        Temperature the fit gives for each shot's counts minus the given temperature. [K]; NaN where
        the counts are not above D. Its sign is opposite to that of ``residual_counts``.
    degrees_of_freedom : int
        Number of shots minus number of fitted parameters.
    degenerate : bool
        Whether the shots do not settle all parameters (too narrow or too few): the curve then holds
        near the shots, and its parameters mean nothing one by one.
    """

    parameters: tuple[float, float, float, float]
    covariance: Array
    residual_counts: Array
    residual_k: Array
    degrees_of_freedom: int
    degenerate: bool


def signal(temperature_k: ArrayLike, a_um: float, b_um_k: float, c: float, d: float = 0.0) -> Array:
    r"""Return the counts (or any signal) a blackbody gives.

    Parameters
    ----------
    temperature_k : array_like, shape (...)
        Temperature. [K], > 0.
    a_um, b_um_k : float
        Effective wavelength far up in temperature [µm] and its rise toward low ones [µm K]; A > 0.
    c, d : float
        Gain, > 0, and the signal without any radiance. [counts]

    Returns
    -------
    ndarray, shape (...)
        Signal in the unit of c; NaN for T ≤ 0 or A T + B ≤ 0.

    Notes
    -----
    .. math:: S = \frac{C}{\exp(c_2/(AT + B)) - 1} + D

    References
    ----------
    .. [1] F. Sakuma and S. Hattori, in "Temperature: Its Measurement and Control in Science and
       Industry", vol. 5, 1982.
    .. [2] P. Saunders and D. R. White, "Physical basis of interpolation equations for radiation thermometry",
       Metrologia 40, 195 (2003): the Planckian form.

    Examples
    --------
    >>> float(signal(373.15, 9.364, 178.4, 1.0).round(9))
    0.020291895
    """
    reach = _reach(temperature_k, a_um, b_um_k)
    with np.errstate(over="ignore"):
        return np.asarray(c / np.expm1(C2_UM_K / reach) + d)


def slope(temperature_k: ArrayLike, a_um: float, b_um_k: float, c: float) -> Array:
    r"""Return dS/dT of `signal`. [counts K⁻¹]; parameters as there (D does not matter).

    Notes
    -----
    .. math:: \frac{dS}{dT} = \frac{C A c_2}{(AT + B)^2}\,\frac{e^x}{(e^x - 1)^2},\quad x = \frac{c_2}{AT + B}
    """
    reach = _reach(temperature_k, a_um, b_um_k)
    x = C2_UM_K / reach
    with np.errstate(over="ignore"):
        return np.asarray(c * a_um * x / reach / (np.expm1(x) * -np.expm1(-x)))


def temperature(signal: ArrayLike, a_um: float, b_um_k: float, c: float, d: float = 0.0) -> Array:
    r"""Return the blackbody temperature that gives a signal, the inverse of `signal`.

    Parameters
    ----------
    signal : array_like, shape (...)
        Counts.
    a_um, b_um_k, c, d : float
        As in `signal`.

    Returns
    -------
    ndarray, shape (...)
        Temperature. [K]; NaN where S ≤ D (no radiance gives such a signal) or the result is not > 0.

    Notes
    -----
    .. math:: T = \frac{c_2}{A \ln(1 + C/(S - D))} - \frac{B}{A}

    References
    ----------
    .. [1] As `signal`.

    Examples
    --------
    >>> float(temperature(0.020291894522, 9.364, 178.4, 1.0).round(4))
    373.15
    """
    above = np.asarray(signal, dtype=np.float64) - d
    above = np.where((above > 0) & np.isfinite(above), above, np.nan)
    kelvin = (C2_UM_K / np.log1p(c / above) - b_um_k) / a_um
    return np.where(kelvin > 0, kelvin, np.nan)


def parameters_of_band(lo_um: float, hi_um: float) -> tuple[float, float]:
    r"""Return A [µm] and B [µm K] that a rectangular band gives, to second order in its width.

    Notes
    -----
    .. math:: A = \lambda_0 (1 - 6\sigma^2/\lambda_0^2),\quad B = c_2 \sigma^2/2\lambda_0^2,
        \quad \lambda_0 = (\lambda_1 + \lambda_2)/2,\quad \sigma^2 = (\lambda_2 - \lambda_1)^2/12

    Good for narrow bands and as a start. Matched at 100 °C it misses the exact 8–14 µm signal by
    −0.2 K at −40 °C and +2.6 K at 1000 °C, and 3–5 µm by −4 and +14 K: fit, or integrate.

    References
    ----------
    .. [1] P. Saunders and D. R. White, Metrologia 40, 195 (2003).

    Examples
    --------
    >>> tuple(round(value, 3) for value in parameters_of_band(8, 14))
    (9.364, 178.361)
    """
    centre = (lo_um + hi_um) / 2
    spread = ((hi_um - lo_um) / centre) ** 2 / 12
    return centre * (1 - 6 * spread), C2_UM_K * spread / 2


def fit(temperature_k: ArrayLike, counts: ArrayLike, *, fixed_d: float | None = None) -> SakumaHattoriFit:
    """Fit A, B, C and D to shots of a blackbody.

    Parameters
    ----------
    temperature_k : array_like, shape (n,)
        Blackbody temperatures. [K], > 0. Repeated shots at one temperature are welcome.
    counts : array_like, shape (n,)
        Counts, rising with temperature (the mean of repeated shots).
    fixed_d : float, optional
        Signal without any radiance, if known; then only A, B and C are fitted. [counts]

    Returns
    -------
    SakumaHattoriFit
        Parameters, covariance and residuals.

    Raises
    ------
    InputError
        If the columns differ in length or hold values that are not finite or temperatures ≤ 0; if
        there are fewer shots than fitted parameters + 1 or fewer temperatures than parameters; if
        counts do not rise with temperature; if counts are not above ``fixed_d``.

    Notes
    -----
    Weighted least squares in which every shot is taken to be equally uncertain in kelvin: residuals
    in counts are divided by dS/dT. That is right where the blackbody's temperature limits the
    calibration; leave out cold shots whose counts hardly differ from those of no radiance. For each
    A and B the best C and D follow linearly, so that only two parameters are searched: A from 0.5 to
    50 µm and B/(A T_min) from −0.5 to 2, from the best point of a coarse grid.

    Examples
    --------
    >>> shots = np.linspace(273.15, 573.15, 7)
    >>> found = fit(shots, signal(shots, 9.4, 180.0, 50_000.0, 300.0))
    >>> [round(value, 3) for value in found.parameters]
    [9.4, 180.0, 50000.0, 300.0]
    """
    kelvin, given = _checked(temperature_k, counts, fixed_d)
    shape, per_count = _search(kelvin, given, fixed_d)
    a, b, c, d = _curve(shape, kelvin, given, fixed_d, per_count)
    residual = signal(kelvin, a, b, c, d) - given
    freedom = given.size - _fitted(fixed_d)
    covariance = _covariance(kelvin, (a, b, c, d), residual, per_count, freedom, fixed_d is not None)
    at_a_bound = bool(np.any(np.isclose(shape, _LOW, atol=1e-6) | np.isclose(shape, _HIGH, atol=1e-6)))
    degenerate = at_a_bound or covariance is None
    return SakumaHattoriFit(
        parameters=(a, b, c, d),
        covariance=np.full((4, 4), np.nan) if at_a_bound or covariance is None else covariance,
        residual_counts=residual,
        residual_k=temperature(given, a, b, c, d) - kelvin,
        degrees_of_freedom=freedom,
        degenerate=degenerate,
    )


def _reach(temperature_k: ArrayLike, a_um: float, b_um_k: float) -> Array:
    """Return A T + B where both it and T are positive, else NaN."""
    kelvin = np.asarray(temperature_k, dtype=np.float64)
    reach = a_um * kelvin + b_um_k
    return np.where((kelvin > 0) & (reach > 0), reach, np.nan)


def _fitted(fixed_d: float | None) -> int:
    return 4 if fixed_d is None else 3


def _checked(temperature_k: ArrayLike, counts: ArrayLike, fixed_d: float | None) -> tuple[Array, Array]:
    kelvin, given = np.asarray(temperature_k, dtype=np.float64), np.asarray(counts, dtype=np.float64)
    if kelvin.ndim != 1 or kelvin.shape != given.shape:
        raise InputError(
            f"A calibration has {kelvin.size} temperatures and {given.size} counts; it needs as many of both."
        )
    if not (np.isfinite(kelvin).all() and np.isfinite(given).all() and (kelvin > 0).all()):
        raise InputError(
            "A calibration holds a value that is not a finite number, or a temperature not above absolute zero.",
            hint="Remove that shot.",
        )
    _check_enough(kelvin, _fitted(fixed_d))
    _check_rising(kelvin, given)
    if fixed_d is not None and given.min() <= fixed_d:
        raise InputError(
            f"The lowest counts of the calibration are {given.min():g}; "
            f"they must be above the fixed offset {fixed_d:g}.",
            hint="Remove the coldest shots, or let the offset be fitted.",
        )
    return kelvin, given


def _check_enough(kelvin: Array, fitted: int) -> None:
    distinct = np.unique(kelvin).size
    if kelvin.size < fitted + 1 or distinct < fitted:
        raise InputError(
            f"A calibration has {kelvin.size} shots at {distinct} temperatures; "
            f"fitting {fitted} parameters needs at least {fitted + 1} shots at {fitted} temperatures.",
            hint="Add shots at other temperatures" + (", or fix the offset D." if fitted == 4 else "."),
        )


def _levels(kelvin: Array, given: Array) -> tuple[Array, Array, NDArray[np.intp]]:
    """Return the distinct temperatures, the mean counts at each, and which one each shot is at."""
    levels, which = np.unique(kelvin, return_inverse=True)
    return levels, np.bincount(which, weights=given) / np.bincount(which), which


def _check_rising(kelvin: Array, given: Array) -> None:
    levels, means, _ = _levels(kelvin, given)
    falling = np.flatnonzero(np.diff(means) <= 0)
    if falling.size:
        i = int(falling[0])
        raise InputError(
            f"Counts do not rise from {levels[i]:.2f} K ({means[i]:g}) to {levels[i + 1]:.2f} K ({means[i + 1]:g}).",
            hint="Check that temperatures and counts belong together, or remove that shot.",
        )


def _search(kelvin: Array, given: Array, fixed_d: float | None) -> tuple[Array, Array]:
    """Return the best (ln A, B/(A T_min)) and the weights, in kelvin per count, it was found with."""
    # Loaded here: importing it takes longer than all else at start-up.
    from scipy.optimize import least_squares

    def misfit(shape: Array, per_count: Array) -> Array:
        return (signal(kelvin, *_curve(shape, kelvin, given, fixed_d, per_count)) - given) * per_count

    levels, means, which = _levels(kelvin, given)
    per_count: Array = (1 / np.gradient(means, levels))[which]  # from the shots themselves, until there is a curve
    grid = [np.array([u, v]) for u in np.linspace(_LOW[0], _HIGH[0], 16) for v in (-0.1, 0.1, 0.4)]
    best = min(grid, key=lambda shape: float((misfit(shape, per_count) ** 2).sum()))
    for _ in range(_ROUNDS):
        found = least_squares(
            misfit, best, args=(per_count,), bounds=(_LOW, _HIGH), jac="3-point", xtol=1e-14, ftol=1e-14, gtol=1e-14
        )
        moved = float(np.abs(found.x - best).max())
        best = np.asarray(found.x)
        a, b, c, _ = _curve(best, kelvin, given, fixed_d, per_count)
        if moved < _SETTLED:
            break
        per_count = 1 / slope(kelvin, a, b, c)
    return best, per_count


def _curve(
    shape: Array, kelvin: Array, given: Array, fixed_d: float | None, per_count: Array
) -> tuple[float, float, float, float]:
    """Return A and B of a shape, with the C and D that fit best for it (both enter linearly).

    C comes out positive: weighted, two rising columns never go against each other.
    """
    a = float(np.exp(shape[0]))
    b = float(shape[1] * a * kelvin.min())
    unit = signal(kelvin, a, b, 1.0)
    largest = float(unit.max())
    columns = [per_count * unit / largest]
    if fixed_d is None:
        columns.append(per_count)
    matrix = np.stack(columns, axis=1)
    solution, *_ = np.linalg.lstsq(matrix, (given - (fixed_d or 0.0)) * per_count)
    return a, b, float(solution[0]) / largest, float(solution[1]) if fixed_d is None else fixed_d


def _covariance(
    kelvin: Array,
    parameters: tuple[float, float, float, float],
    residual: Array,
    per_count: Array,
    freedom: int,
    fixed: bool,
) -> Array | None:
    """Return the covariance from the scatter of the weighted residuals; None if the shots do not settle it."""
    a, b, c, _ = parameters
    by_reach = slope(kelvin, a, b, c) / a
    columns = [by_reach * kelvin, by_reach, signal(kelvin, a, b, 1.0), np.ones(kelvin.size)]
    jacobian = np.stack(columns[: 3 if fixed else 4], axis=1) * per_count[:, None]
    size = np.linalg.norm(jacobian, axis=0)  # unit columns: the parameters differ by orders of magnitude
    _, values, axes = np.linalg.svd(jacobian / size, full_matrices=False)
    if values[-1] < _RANK_LIMIT * values[0]:
        return None
    half = axes.T / values / size[:, None]
    covariance = np.zeros((4, 4))
    fitted = size.size
    covariance[:fitted, :fitted] = half @ half.T * ((residual * per_count) ** 2).sum() / freedom
    return covariance

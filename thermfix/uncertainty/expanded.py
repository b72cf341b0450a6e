"""Expanded uncertainty: coverage factors, effective degrees of freedom, and how the numbers are rounded."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.propagation import checked_u

K = 2.0
"""Coverage factor of every expanded uncertainty that is shown: about 95 % for a normal distribution."""

_ROUNDING = 1e-9


@dataclass(frozen=True, slots=True)
class Rounded:
    """A value and its expanded uncertainty rounded to the same decimal place.

    ``decimals`` may be negative: −1 means tens.
    """

    value: float
    expanded_u: float
    decimals: int

    def __str__(self) -> str:
        places = max(self.decimals, 0)
        return f"{self.value:.{places}f} ± {self.expanded_u:.{places}f}"


def effective_dof(contributions: ArrayLike, dof: ArrayLike) -> float:
    r"""Return the effective degrees of freedom of a combined standard uncertainty (Welch–Satterthwaite).

    Parameters
    ----------
    contributions : array_like, shape (n,)
        c·u of each independent input. [output unit].
    dof : array_like, shape (n,)
        Degrees of freedom of each u, > 0; infinite where u is known exactly.

    Returns
    -------
    float
        ν_eff > 0, infinite where nothing limits it.

    Raises
    ------
    InputError
        If the shapes differ, a contribution is not finite, or a number of degrees of freedom is not positive.

    Notes
    -----
    .. math:: \nu_{eff} = u_c^4 \Big/ \sum_i \frac{(c_i u_i)^4}{\nu_i}

    Valid for independent inputs only.

    References
    ----------
    .. [1] JCGM 100:2008, eq. (G.2b).

    Examples
    --------
    >>> effective_dof([1.0, 1.0], [10, float("inf")])
    40.0
    """
    parts = np.asarray(contributions, dtype=np.float64)
    nu = np.asarray(dof, dtype=np.float64)
    if parts.ndim != 1 or parts.shape != nu.shape or not np.isfinite(parts).all():
        raise InputError("Contributions and degrees of freedom must be two rows of equal length, all finite.")
    if not (nu > 0).all():
        raise InputError("Degrees of freedom must be positive.", hint="Use infinity for limits taken as exact.")
    largest = float(np.abs(parts).max(initial=0.0))
    if largest == 0:
        return float("inf")
    scaled = parts / largest
    weight = float((scaled**4 / nu).sum())
    return float("inf") if weight == 0 else float(np.square(scaled).sum()) ** 2 / weight


def coverage_factor(dof: float, probability: float = 0.95) -> float:
    r"""Return the coverage factor for a two-sided coverage probability.

    Parameters
    ----------
    dof : float
        Effective degrees of freedom, ≥ 1; cut down to a whole number, which never understates.
    probability : float
        Coverage probability, 0 < p < 1.

    Returns
    -------
    float
        The quantile of Student's t at (1 + p)/2; of the normal distribution for infinite ``dof``.

    Raises
    ------
    OutOfRange
        If ``dof`` or ``probability`` is outside its range.

    References
    ----------
    .. [1] JCGM 100:2008, G.3.2, G.4.1 and Table G.2.

    Examples
    --------
    >>> round(coverage_factor(16.7, 0.99), 2), round(coverage_factor(float("inf")), 3)
    (2.92, 1.96)
    """
    if not dof >= 1:
        raise OutOfRange.of("degrees of freedom", dof, 1, float("inf"))
    if not 0 < probability < 1:
        raise OutOfRange.of("the coverage probability", probability, 0, 1)
    from scipy.special import ndtri, stdtrit  # late: scipy is slow to load; its statistics slower still

    upper = (1 + probability) / 2
    return float(ndtri(upper) if math.isinf(dof) else stdtrit(math.floor(dof), upper))


def round_up(expanded_u: float, digits: int = 2) -> float:
    """Return an uncertainty rounded up to a number of significant digits, so that it never understates.

    Parameters
    ----------
    expanded_u : float
        Uncertainty, ≥ 0.
    digits : int
        Significant digits to keep, ≥ 1.

    Raises
    ------
    OutOfRange
        If the uncertainty is negative or not finite, or ``digits`` is below 1.

    Notes
    -----
    An excess of a billionth of the last digit is taken as rounding of the computation, not rounded up.

    References
    ----------
    .. [1] JCGM 100:2008, 7.2.6.

    Examples
    --------
    >>> round_up(0.3621), round_up(10.47), round_up(2.0), round_up(9.91)
    (0.37, 11.0, 2.0, 10.0)
    """
    return rounded(0.0, expanded_u, digits).expanded_u


def rounded(value: float, expanded_u: float, digits: int = 2) -> Rounded:
    """Return a value and its expanded uncertainty rounded to the same place, the uncertainty up.

    Parameters
    ----------
    value : float
        The estimate, finite.
    expanded_u : float
        Its expanded uncertainty, ≥ 0. At 0 the value is kept as it is, with 2 decimals to show.
    digits : int
        Significant digits of the uncertainty, ≥ 1.

    Raises
    ------
    OutOfRange
        If a number is not finite, the uncertainty is negative, or ``digits`` is below 1.

    References
    ----------
    .. [1] JCGM 100:2008, 7.2.6.

    Examples
    --------
    >>> str(rounded(100.0212, 2.7659))
    '100.0 ± 2.8'
    """
    if not math.isfinite(value):
        raise OutOfRange.of("the value to round", value, float("-inf"), float("inf"))
    if digits < 1:
        raise OutOfRange.of("significant digits", digits, 1, float("inf"))
    u = float(checked_u(expanded_u))
    if u == 0:
        return Rounded(value, 0.0, 2)
    step = math.floor(math.log10(u)) - digits + 1
    count = math.ceil(u / 10.0**step - _ROUNDING)
    if count >= 10**digits:  # 9.91 → 10: one place less holds the same number of digits
        count, step = 10 ** (digits - 1), step + 1
    return Rounded(round(value, -step), round(count * 10.0**step, -step), -step)

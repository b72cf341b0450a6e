"""A cheap test whether a function is too curved over the uncertainties of its inputs for first order."""

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError
from thermfix.uncertainty.propagation import checked_u

Array = NDArray[np.float64]

CURVED = 0.05
"""From this `nonlinearity` on a Monte Carlo run is due.

Along an input of measure q the function departs from its tangent by q z² u at z standard
uncertainties. At the ends of a k = 2 interval that is 4 q u, or 2 q of U: 0.05 makes a tenth of U,
what may change the first of the two digits U is shown with. The standard deviation is then still
right to 0.25 % (√(1 + 2q²) for a normal input): it is the ends of the interval that go wrong first.
"""


def nonlinearity(function: Callable[[Array], Array], x: ArrayLike, u: ArrayLike) -> float:
    r"""Return the largest curvature of a function within one standard uncertainty, relative to u_c.

    Parameters
    ----------
    function : callable
        Takes points of shape (m, n), returns values of shape (m,).
    x : array_like, shape (n,)
        Estimates of the inputs.
    u : array_like, shape (n,)
        Their standard uncertainties, ≥ 0, inputs independent.

    Returns
    -------
    float
        0 for a linear function, at or above `CURVED` where first order is doubtful, infinite where
        the function is not finite at one standard uncertainty from x, or curved where it is level.

    Raises
    ------
    InputError
        If shapes do not fit.
    OutOfRange
        If an uncertainty is negative or not finite.

    Notes
    -----
    For one input

    .. math:: q = \frac{|f(x+u) + f(x-u) - 2 f(x)|}{2\, u_c}

    For several, q is the largest eigenvalue in size of H/(2 u_c), H the matrix of second differences
    with steps u_i: the same measure in whatever direction it is largest, so that a product of two
    inputs is seen too. It is never below the largest one-input value. 1 + 2n² evaluations in one call.

    References
    ----------
    .. [1] JCGM 100:2008, 5.1.2 note (second-order terms); JCGM 101:2008, 5.8.

    Examples
    --------
    >>> round(nonlinearity(lambda x: 1 / x[:, 0], [0.15], [0.05]), 2)
    0.33
    """
    centre = np.asarray(x, dtype=np.float64)
    step = checked_u(u)
    if centre.ndim != 1 or centre.shape != step.shape:
        raise InputError(f"Estimates of shape {centre.shape} do not fit uncertainties of shape {step.shape}.")
    n = centre.size
    first, second = np.triu_indices(n, 1)
    moves = np.concatenate([np.zeros((1, n)), np.eye(n), -np.eye(n), *_diagonal_moves(n, first, second)])
    # A move into the non-physical is an answer here, not an accident.
    with np.errstate(all="ignore"):
        f = np.asarray(function(centre + moves * step), dtype=np.float64)
    if f.shape != (moves.shape[0],):
        raise InputError(f"The function returned shape {f.shape} for points of shape {moves.shape}.")
    if not np.isfinite(f).all():
        return float("inf")
    up, down = f[1 : n + 1], f[n + 1 : 2 * n + 1]
    pp, pm, mp, mm = f[2 * n + 1 :].reshape(4, -1)
    curvature = np.diag(up + down - 2 * f[0])
    curvature[first, second] = curvature[second, first] = (pp - pm - mp + mm) / 4
    largest = float(np.abs(np.linalg.eigvalsh(curvature)).max(initial=0.0))
    u_combined = float(np.linalg.norm((up - down) / 2))
    # Differences of nearly equal numbers carry their rounding, which is no curvature.
    if largest <= 1e-12 * float(np.abs(f).max()):
        return 0.0
    return float("inf") if u_combined == 0 else largest / (2 * u_combined)


def _diagonal_moves(n: int, first: NDArray[np.intp], second: NDArray[np.intp]) -> list[Array]:
    """Return moves by (+,+), (+,−), (−,+) and (−,−) of every pair of inputs, each of shape (pairs, n)."""
    unit = np.eye(n)
    return [one * unit[first] + other * unit[second] for one in (1, -1) for other in (1, -1)]

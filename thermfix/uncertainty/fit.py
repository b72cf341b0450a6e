"""Uncertainty of fitted parameters, and of what is predicted with them."""

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.propagation import checked_u

Array = NDArray[np.float64]

_LEAST_RANK = 1e-10


def parameter_covariance(jacobian: ArrayLike, residuals: ArrayLike) -> Array:
    r"""Return the covariance of least-squares parameters whose points scatter with one unknown u.

    Parameters
    ----------
    jacobian : array_like, shape (m, n)
        Derivatives of the m fitted values with respect to the n parameters, m > n.
    residuals : array_like, shape (m,)
        Fitted minus observed values at the optimum. If points were weighted, both arguments are.

    Returns
    -------
    ndarray, shape (n, n)
        :math:`s^2 (J^T J)^{-1}` with :math:`s^2 = \sum r^2/(m - n)`.

    Raises
    ------
    InputError
        If shapes do not fit, a number is not finite, or the points do not determine all parameters.

    References
    ----------
    .. [1] JCGM 100:2008, H.3 (for a straight line); ISO/TS 28037:2010 for lines in general.
    """
    r = np.asarray(residuals, dtype=np.float64)
    j = np.asarray(jacobian, dtype=np.float64)
    if j.ndim != 2 or r.shape != j.shape[:1] or not np.isfinite(r).all():
        raise InputError(f"Residuals of shape {r.shape} do not fit a Jacobian of shape {j.shape}, or are not finite.")
    m, n = j.shape
    if m <= n:
        raise InputError(
            f"{m} points leave nothing to judge the scatter of a fit with {n} parameters by.",
            hint=f"Give at least {n + 1} points, or the uncertainty of each.",
        )
    scatter = float(r @ r) / (m - n)
    result: Array = _inverse_normal_matrix(j) * scatter
    return result


def parameter_covariance_of_known_u(jacobian: ArrayLike, u: ArrayLike) -> Array:
    r"""Return the covariance of least-squares parameters whose points have known, independent u.

    Parameters
    ----------
    jacobian : array_like, shape (m, n)
        Derivatives of the m fitted values with respect to the n parameters, not weighted, m ≥ n.
    u : array_like, shape (m,)
        Standard uncertainty of each point, > 0; the fit weighted them by 1/u².

    Returns
    -------
    ndarray, shape (n, n)
        :math:`(J^T W J)^{-1}`, W = diag(1/u²).

    Raises
    ------
    InputError
        If shapes do not fit or the points do not determine all parameters.
    OutOfRange
        If an uncertainty is not positive and finite.

    References
    ----------
    .. [1] JCGM 102:2011, 6.2; ISO/TS 28037:2010, clause 6.
    """
    j = np.asarray(jacobian, dtype=np.float64)
    spread = checked_u(u)
    if j.ndim != 2 or spread.shape != j.shape[:1]:
        raise InputError(f"Uncertainties of shape {spread.shape} do not fit a Jacobian of shape {j.shape}.")
    if not (spread > 0).all():
        raise OutOfRange.of("the uncertainty of a point", 0.0, 0, math.inf, "unit of the points")
    return _inverse_normal_matrix(j / spread[:, None])


def prediction_u(jacobian: ArrayLike, covariance: ArrayLike) -> Array:
    r"""Return the standard uncertainty of predicted values from that of the parameters.

    Parameters
    ----------
    jacobian : array_like, shape (..., n)
        Derivatives of each predicted value with respect to the n parameters.
    covariance : array_like, shape (n, n)
        Covariance of the parameters.

    Returns
    -------
    ndarray, shape (...)
        :math:`\sqrt{j\,V\,j^T}` of each: the uncertainty of the curve, without the scatter of a new point.

    Raises
    ------
    InputError
        If shapes do not fit.

    References
    ----------
    .. [1] JCGM 100:2008, H.3.4 (predicted value of a fitted line).
    """
    j = np.asarray(jacobian, dtype=np.float64)
    v = np.asarray(covariance, dtype=np.float64)
    if j.ndim == 0 or v.shape != (j.shape[-1], j.shape[-1]):
        raise InputError(f"A Jacobian of shape {j.shape} does not fit a covariance of shape {v.shape}.")
    # A direction without uncertainty may leave a rounding residue just below zero.
    variance = np.maximum(np.einsum("...i,ij,...j->...", j, v, j), 0.0)
    return np.asarray(np.sqrt(variance), dtype=np.float64)


def _inverse_normal_matrix(j: Array) -> Array:
    """Return (JᵀJ)⁻¹ through singular values of J with columns scaled to length 1, or refuse."""
    length = np.linalg.norm(j, axis=0)
    if not np.isfinite(length).all():
        raise InputError("The Jacobian of a fit must be finite.")
    undetermined = InputError(
        f"The {j.shape[0]} points do not determine all {j.shape[1]} parameters of the fit.",
        hint="Spread the points over a wider range, or add some.",
    )
    if j.shape[0] < j.shape[1] or not (length > 0).all():
        raise undetermined
    _, singular, vt = np.linalg.svd(j / length, full_matrices=False)
    if singular[-1] < _LEAST_RANK * singular[0]:
        raise undetermined
    half = (vt.T / singular) / length[:, None]
    result: Array = half @ half.T
    return result

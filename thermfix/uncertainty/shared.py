"""Uncertainty of the mean of a region's pixels, and of the difference of two such means.

An emissivity that is wrong is wrong in the same way in every pixel of a region: averaging does not
help. Only independent noise averages down. A `MeanUncertainty` therefore keeps the signed
contribution of every shared input, by name, next to the noise: there is no way to get at a sum of
both before the mean is taken, and a difference lets common errors cancel because it finds them by name.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.propagation import checked_u, combine, correlation_matrix

Pairs = Mapping[tuple[str, str], float]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MeanUncertainty:
    """What is known about the error of one mean, or of a difference of means.

    Attributes
    ----------
    contributions : mapping of str to float
        Signed c·u of every shared input, by its name. [output unit]. Equal names are one and the same error.
    noise_u : float
        Standard uncertainty from independent noise, already averaged down. [output unit].
    correlations : mapping of (str, str) to float
        Correlation coefficients between shared inputs of different names.
    """

    contributions: Mapping[str, float]
    noise_u: float
    correlations: Pairs = field(default_factory=dict)

    @property
    def shared_u(self) -> float:
        """Standard uncertainty from the shared inputs alone. [output unit]."""
        if not self.contributions:
            return 0.0
        names = tuple(self.contributions)
        correlation = correlation_matrix(names, self.correlations) if self.correlations else None
        return float(combine(list(self.contributions.values()), np.ones(len(names)), correlation))

    @property
    def u(self) -> float:
        """Combined standard uncertainty. [output unit]."""
        return float(np.hypot(self.shared_u, self.noise_u))


def mean_uncertainty(
    contributions: Mapping[str, ArrayLike], *, noise_u: ArrayLike, count: int, correlations: Pairs | None = None
) -> MeanUncertainty:
    r"""Return the uncertainty of the mean of ``count`` pixels.

    Parameters
    ----------
    contributions : mapping of str to array_like, shape () or (count,)
        Signed c·u of each shared input, one number for all pixels or one for each. [output unit].
    noise_u : array_like, shape () or (count,)
        Standard uncertainty of single pixels from independent noise. [output unit], ≥ 0.
    count : int
        Number of pixels in the mean, ≥ 1.
    correlations : mapping of (str, str) to float, optional
        Correlation coefficients between shared inputs.

    Returns
    -------
    MeanUncertainty
        With the noise averaged down and the shared part not.

    Raises
    ------
    InputError
        If a shape does not fit ``count``, a contribution is not finite, or correlations do not fit.
    OutOfRange
        If ``count`` is below 1 or ``noise_u`` is negative or not finite.

    Notes
    -----
    .. math:: u^2 = \sum_i \Big(\frac1N \sum_p c_{ip} u_i\Big)^2 + \frac{1}{N^2} \sum_p u_{noise,p}^2

    plus the cross terms of correlated inputs. Noise is taken as independent from pixel to pixel.

    References
    ----------
    .. [1] JCGM 100:2008, eqs. (10), (16) and 5.2.2 (the mean as an output of inputs shared by its terms).

    Examples
    --------
    >>> one = mean_uncertainty({"emissivity": -1.5}, noise_u=0.05, count=400)
    >>> round(one.shared_u, 4), round(one.noise_u, 4), round(one.u, 4)
    (1.5, 0.0025, 1.5)
    """
    if count < 1:
        raise OutOfRange.of("the number of pixels in a mean", count, 1, float("inf"))
    means = {name: float(_per_pixel(part, count, name).mean()) for name, part in contributions.items()}
    pairs = dict(correlations or {})
    correlation_matrix(tuple(means), pairs)  # refuses pairs that do not fit
    single = checked_u(_per_pixel(noise_u, count, "noise"))
    noise = float(np.sqrt(np.square(single).sum())) / count
    return MeanUncertainty(contributions=means, noise_u=noise, correlations=pairs)


def difference(first: MeanUncertainty, second: MeanUncertainty) -> MeanUncertainty:
    r"""Return the uncertainty of ``first − second``, means of two regions without common pixels.

    Parameters
    ----------
    first, second : MeanUncertainty
        The two means. An input that both name is one and the same error in both.

    Returns
    -------
    MeanUncertainty
        Contributions of common inputs subtracted with their sign; noise added in quadrature.

    Raises
    ------
    InputError
        If the two state different correlations for the same inputs.

    Notes
    -----
    .. math:: u^2 = \sum_i (c_{1i} - c_{2i})^2 u_i^2 + u_{noise,1}^2 + u_{noise,2}^2

    For regions that overlap the noise is overstated, as common pixels cancel in part.

    References
    ----------
    .. [1] JCGM 100:2008, eq. (16) with r = 1 between common inputs; F.1.2.3.

    Examples
    --------
    >>> hot = mean_uncertainty({"reflected": -0.30, "emissivity hot": -1.2}, noise_u=0.0, count=1)
    >>> cold = mean_uncertainty({"reflected": -0.30}, noise_u=0.0, count=1)
    >>> round(difference(hot, cold).u, 6)
    1.2
    """
    names = [*first.contributions, *(name for name in second.contributions if name not in first.contributions)]
    parts = {name: first.contributions.get(name, 0.0) - second.contributions.get(name, 0.0) for name in names}
    pairs: dict[tuple[str, str], float] = {}
    for (one, other), r in (*first.correlations.items(), *second.correlations.items()):
        if pairs.setdefault((min(one, other), max(one, other)), r) != r:
            raise InputError(f"The correlation between {one} and {other} is given as two different numbers.")
    noise = float(np.hypot(first.noise_u, second.noise_u))
    return MeanUncertainty(contributions=parts, noise_u=noise, correlations=pairs)


def _per_pixel(values: ArrayLike, count: int, what: str) -> NDArray[np.float64]:
    array = np.asarray(values, dtype=np.float64)
    if array.shape not in ((), (count,)):
        raise InputError(f"The values for {what} have shape {array.shape}; {count} pixels need () or ({count},).")
    if not np.isfinite(array).all():
        raise InputError(
            f"The values for {what} are not all finite.", hint="Leave pixels without a reading out of the mean."
        )
    return np.broadcast_to(array, (count,))

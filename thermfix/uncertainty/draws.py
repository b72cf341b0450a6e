"""Random draws of inputs from their distributions."""

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.distributions import Shape, shape_of
from thermfix.uncertainty.propagation import checked_u, correlation_matrix

Array = NDArray[np.float64]
Pairs = Mapping[tuple[str, str], float]


@dataclass(frozen=True, slots=True, kw_only=True)
class RandomInput:
    """One input: its estimate, standard uncertainty and distribution, perhaps cut off at bounds.

    Attributes
    ----------
    value, u : float
        Mean and standard deviation of the distribution before it is cut off. [any unit], u ≥ 0.
    distribution : str
        ``normal``, ``rectangular``, ``triangular`` or ``u-shaped``.
    low, high : float
        Values the quantity cannot go beyond (an emissivity: 0 and 1). The distribution is cut off there and
        scaled up to full probability in between, which moves its mean inward. Infinite: not cut off.

    Raises
    ------
    InputError
        If the distribution is unknown.
    OutOfRange
        If u is negative or not finite, or the value is not finite or outside its bounds.
    """

    value: float
    u: float
    distribution: str = "normal"
    low: float = -math.inf
    high: float = math.inf

    def __post_init__(self) -> None:
        shape_of(self.distribution)
        checked_u(self.u)
        if not math.isfinite(self.value) or not self.low <= self.value <= self.high:
            raise OutOfRange.of("an input drawn at random", self.value, self.low, self.high, "input unit")

    @property
    def is_cut_off(self) -> bool:
        """Whether a bound lies within the distribution."""
        reach = shape_of(self.distribution).half_width * self.u if self.u else 0.0
        return self.value - reach < self.low or self.value + reach > self.high


def draw(
    inputs: Mapping[str, RandomInput], count: int, rng: np.random.Generator, correlations: Pairs | None = None
) -> dict[str, Array]:
    """Return ``count`` random values of every input.

    Parameters
    ----------
    inputs : mapping of str to RandomInput
        Inputs by name. Their order and the state of ``rng`` fix every number.
    count : int
        Number of values of each, ≥ 1.
    rng : numpy.random.Generator
        Source of randomness.
    correlations : mapping of (str, str) to float, optional
        Correlation coefficients. Only between normal inputs that are not cut off: for others a
        coefficient does not define a joint distribution.

    Returns
    -------
    dict of str to ndarray, shape (count,)
        The values, in the inputs' order.

    Raises
    ------
    InputError
        If correlations do not fit the inputs.
    OutOfRange
        If ``count`` is below 1 or a coefficient outside −1 to 1.

    Notes
    -----
    Correlated normals are z R½ u + x, with R½ the symmetric root of the correlation matrix: it also
    exists for coefficients of ±1, where the Cholesky factor does not. Every other input is the
    quantile of a uniform number, between the shares that lie below its two bounds.

    References
    ----------
    .. [1] JCGM 101:2008, 6.4 and C.2 to C.5.
    """
    if count < 1:
        raise OutOfRange.of("the number of draws", count, 1, math.inf)
    together = _joint_normals(inputs, count, rng, correlations) if correlations else {}
    return {
        name: together[name] if name in together else one.value + one.u * _standard(one, count, rng)
        for name, one in inputs.items()
    }


def _joint_normals(
    inputs: Mapping[str, RandomInput], count: int, rng: np.random.Generator, correlations: Pairs
) -> dict[str, Array]:
    named = {name for pair in correlations for name in pair}
    names = [name for name in inputs if name in named]
    root = _symmetric_root(correlation_matrix(names, correlations))
    for name in names:
        if inputs[name].distribution != "normal" or inputs[name].is_cut_off:
            raise InputError(
                f"{name} is correlated with another input, but is not normal without bounds.",
                hint="Leave out the correlation, or describe the input as normal and without bounds.",
            )
    z = rng.standard_normal((count, len(names))) @ root
    return {name: inputs[name].value + inputs[name].u * z[:, column] for column, name in enumerate(names)}


def _symmetric_root(matrix: Array) -> Array:
    values, vectors = np.linalg.eigh(matrix)
    # Eigenvalues that are zero may come out a rounding below it.
    root: Array = (vectors * np.sqrt(np.maximum(values, 0.0))) @ vectors.T
    return root


def _standard(one: RandomInput, count: int, rng: np.random.Generator) -> Array:
    """Return draws of mean 0 and standard deviation 1 (before cutting off)."""
    shape = shape_of(one.distribution)
    if one.u == 0:
        return np.zeros(count)
    if one.distribution == "normal" and not one.is_cut_off:
        return rng.standard_normal(count)
    low, high = _shares(one, shape)
    return shape.quantile(low + (high - low) * rng.random(count))


def _shares(one: RandomInput, shape: Shape) -> tuple[float, float]:
    ends = (np.array([one.low, one.high]) - one.value) / one.u
    low, high = shape.share_below(ends)
    return float(low), float(high)

"""Propagation of distributions by Monte Carlo: mean, spread and coverage intervals, repeatable for a seed."""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError, OutOfRange, PhysicsError
from thermfix.uncertainty.draws import Pairs, RandomInput, draw

Array = NDArray[np.float64]
Interval = tuple[float, float]
Model = Callable[[dict[str, Array]], Array]

_FEWEST_VALID_SHARE = 0.01
_BLOCK = 10_000
_FEWEST_BLOCKS = 10
_MOST = 1_000_000


@dataclass(frozen=True, slots=True, kw_only=True)
class MonteCarlo:
    """What a Monte Carlo run found. Everything but the two counts is conditional on a valid trial.

    Attributes
    ----------
    mean, sd, median : float
        Of the output. [output unit]. ``sd`` is its standard uncertainty.
    interval, shortest : (float, float)
        Coverage interval with equal probability on both sides, and the shortest one. [output unit].
    probability : float
        Coverage probability of both.
    trials : int
        Number of trials, the invalid ones included.
    invalid_share : float
        Share of trials whose output was not finite: combinations of inputs that no surface can have.
    u_of_sd : float
        Standard error of ``sd`` from the limited number of trials. [output unit].
    numerical_error : float
        Twice the largest standard error among mean, sd and both ends of ``interval``. [output unit]; infinite
        after a single block.
    tolerance : float
        Numerical tolerance aimed at. [output unit]; see `numerical_tolerance`.
    """

    mean: float
    sd: float
    median: float
    interval: Interval
    shortest: Interval
    probability: float
    trials: int
    invalid_share: float
    u_of_sd: float
    numerical_error: float
    tolerance: float

    @property
    def converged(self) -> bool:
        """Whether mean, sd and both ends of ``interval`` have settled within ``tolerance``."""
        return self.numerical_error <= self.tolerance


def run(
    model: Model,
    inputs: Mapping[str, RandomInput],
    *,
    seed: int,
    correlations: Pairs | None = None,
    trials: int | None = None,
    max_trials: int = _MOST,
    probability: float = 0.95,
    digits: int = 2,
) -> MonteCarlo:
    r"""Propagate the inputs' distributions through a model.

    Parameters
    ----------
    model : callable
        Takes a dict of arrays of shape (m,), one for each input, and returns the output, shape (m,).
        Not finite where the inputs are non-physical.
    inputs : mapping of str to RandomInput
        Inputs by name.
    seed : int
        Seed of the PCG64 generator, ≥ 0. The same call gives the same numbers.
    correlations : mapping of (str, str) to float, optional
        Correlation coefficients between normal inputs.
    trials : int, optional
        Fixed number of trials, rounded up to full blocks of 10 000. Left out: blocks are added until the results have
        settled, or ``max_trials`` is reached.
    max_trials : int
        Limit of the adaptive procedure.
    probability : float
        Coverage probability, 0.5 ≤ p ≤ 0.99.
    digits : int
        Significant digits of ``sd`` that are meant to hold, 1 or 2.

    Returns
    -------
    MonteCarlo
        Statistics of the valid trials.

    Raises
    ------
    InputError
        If the model returns another shape, or correlations do not fit.
    OutOfRange
        If seed, trials, probability or digits is outside its range.
    PhysicsError
        If fewer than 1 % of the trials of a block are valid.

    Notes
    -----
    After every block the standard deviations of the blocks' means, standard deviations and interval
    ends are found; twice their standard errors must fall below the numerical tolerance. At least 10
    blocks are run: a standard error judged from the standard's two is itself uncertain by 70 %.

    References
    ----------
    .. [1] JCGM 101:2008, clauses 5.9, 7.2 to 7.7 and 7.9 (adaptive procedure).

    Examples
    --------
    >>> found = run(lambda x: x["a"] + x["b"], {"a": RandomInput(value=1, u=3), "b": RandomInput(value=2, u=4)}, seed=1)
    >>> found.converged, round(found.sd, 1), round(found.mean)
    (True, 5.0, 3)
    """
    _check(seed, trials, max_trials, probability, digits)
    rng = np.random.Generator(np.random.PCG64(seed))
    most = max_trials if trials is None else trials
    valid: list[Array] = []
    rows: list[tuple[float, float, float, float]] = []
    while True:
        values = _evaluate(model, draw(inputs, _BLOCK, rng, correlations))
        valid.append(values)
        rows.append((float(values.mean()), float(values.std(ddof=1)), *symmetric_interval(values, probability)))
        done = len(rows) * _BLOCK
        tolerance = numerical_tolerance(float(np.mean([row[1] for row in rows])), digits)
        error = _numerical_error(rows)
        settled = len(rows) >= _FEWEST_BLOCKS and error <= tolerance
        if done >= most or (trials is None and settled):
            return _summary(np.concatenate(valid), done, probability, error, tolerance)


def numerical_tolerance(u: float, digits: int = 2) -> float:
    """Return half a unit in the last of the significant digits of an uncertainty that are meant to hold.

    Parameters
    ----------
    u : float
        Standard uncertainty, ≥ 0 (0 gives 0).
    digits : int
        Significant digits, ≥ 1.

    References
    ----------
    .. [1] JCGM 101:2008, 7.9.2.

    Examples
    --------
    >>> numerical_tolerance(0.00035), numerical_tolerance(31.2, 1)
    (5e-06, 5.0)
    """
    if u == 0:
        return 0.0
    last_place = int(f"{u:.{digits - 1}e}".partition("e")[2]) - digits + 1
    return float(f"5e{last_place - 1}")


def symmetric_interval(values: ArrayLike, probability: float = 0.95) -> Interval:
    """Return the coverage interval with equal probability on both sides of a sample, shape (m,).

    References
    ----------
    .. [1] JCGM 101:2008, 7.7.2.
    """
    ordered, reach = _ordered(values, probability)
    first = (ordered.size - reach + 1) // 2 - 1
    return float(ordered[first]), float(ordered[first + reach])


def shortest_interval(values: ArrayLike, probability: float = 0.95) -> Interval:
    """Return the shortest coverage interval of a sample, shape (m,).

    References
    ----------
    .. [1] JCGM 101:2008, 5.3.4 and 7.7.3.

    Examples
    --------
    >>> shortest_interval([0, 1, 2, 3, 10], 0.6)
    (0.0, 3.0)
    """
    ordered, reach = _ordered(values, probability)
    first = int(np.argmin(ordered[reach:] - ordered[: ordered.size - reach]))
    return float(ordered[first]), float(ordered[first + reach])


def standard_error_of_sd(values: ArrayLike) -> float:
    r"""Return the standard error of the standard deviation of a sample, shape (m,), m ≥ 4, of any distribution.

    Notes
    -----
    .. math:: u(s) \approx \frac{1}{2s} \sqrt{\frac1m \Big(m_4 - \frac{m-3}{m-1} s^4\Big)}

    With a normal distribution this is s/√(2m); heavy tails make it larger.

    References
    ----------
    .. [1] Kendall's Advanced Theory of Statistics, vol. 1, ch. 10 (variance of a sample variance).
    """
    sample = np.asarray(values, dtype=np.float64)
    m = sample.size
    if m < 4:
        raise OutOfRange.of("the size of the sample", m, 4, math.inf)
    s = float(sample.std(ddof=1))
    if s == 0:
        return 0.0
    fourth = float((((sample - sample.mean()) / s) ** 4).mean())
    return s / 2 * math.sqrt(max(fourth - (m - 3) / (m - 1), 0.0) / m)


def _ordered(values: ArrayLike, probability: float) -> tuple[Array, int]:
    if not 0 < probability < 1:
        raise OutOfRange.of("the coverage probability", probability, 0, 1)
    ordered = np.sort(np.asarray(values, dtype=np.float64))
    if ordered.ndim != 1 or ordered.size < 2 or not np.isfinite(ordered[[0, -1]]).all():
        raise InputError("A coverage interval needs a row of at least 2 finite numbers.")
    return ordered, min(math.floor(probability * ordered.size + 0.5), ordered.size - 1)


def _evaluate(model: Model, samples: dict[str, Array]) -> Array:
    # Non-physical draws are expected: they become NaN and are counted.
    with np.errstate(all="ignore"):
        values = np.asarray(model(samples), dtype=np.float64)
    if values.shape != (_BLOCK,):
        raise InputError(f"The model returned shape {values.shape} for draws of shape ({_BLOCK},).")
    valid = values[np.isfinite(values)]
    if valid.size < _FEWEST_VALID_SHARE * _BLOCK:
        raise PhysicsError(
            f"Only {valid.size} of {_BLOCK} trials gave a physical result; "
            f"at least {_FEWEST_VALID_SHARE:.0%} are needed to state an uncertainty.",
            hint="Check the inputs with the largest uncertainties: at least one of them is wrong.",
        )
    return valid


def _numerical_error(rows: list[tuple[float, float, float, float]]) -> float:
    if len(rows) == 1:
        return math.inf
    return 2 * float(np.array(rows).std(axis=0, ddof=1).max()) / math.sqrt(len(rows))


def _summary(values: Array, trials: int, probability: float, error: float, tolerance: float) -> MonteCarlo:
    return MonteCarlo(
        mean=float(values.mean()),
        sd=float(values.std(ddof=1)),
        median=float(np.median(values)),
        interval=symmetric_interval(values, probability),
        shortest=shortest_interval(values, probability),
        probability=probability,
        trials=trials,
        invalid_share=1 - values.size / trials,
        u_of_sd=standard_error_of_sd(values),
        numerical_error=error,
        tolerance=tolerance,
    )


def _check(seed: int, trials: int | None, max_trials: int, probability: float, digits: int) -> None:
    rows = (
        ("the seed", seed, 0, math.inf),
        ("the number of trials", _BLOCK if trials is None else trials, 1, math.inf),
        ("the limit of trials", max_trials, 1, math.inf),
        ("the coverage probability", probability, 0.5, 0.99),
        ("the number of significant digits", digits, 1, 2),
    )
    for name, value, low, high in rows:
        if not low <= value <= high:
            raise OutOfRange.of(name, value, low, high)

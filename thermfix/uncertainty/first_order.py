"""Whether first-order propagation is good enough: its interval held against a Monte Carlo run's."""

from dataclasses import dataclass

from thermfix.errors import OutOfRange
from thermfix.uncertainty.expanded import K, coverage_factor
from thermfix.uncertainty.monte_carlo import MonteCarlo, numerical_tolerance

EXCESS_ALLOWED = 0.1
"""Share of U by which a Monte Carlo interval may reach beyond y ± U before the latter is not adequate."""


@dataclass(frozen=True, slots=True, kw_only=True)
class FirstOrderCheck:
    """Both ends of the first-order interval against those of a Monte Carlo run. Everything in the output unit.

    Attributes
    ----------
    low, high : float
        Ends of the first-order interval at the run's coverage probability, normal distribution.
    miss_low, miss_high : float
        Distances of those ends from the run's.
    tolerance : float
        What the distances may be; half a unit in the last significant digit of u that is meant to hold.
    first_order_holds : bool
        The verdict of JCGM 101 clause 8: both distances are within ``tolerance``.
    decisive : bool
        Whether the run had settled finely enough for that verdict, to ``tolerance``/5 or better.
    excess : float
        How far the run's interval reaches beyond y ± U (k = 2), as a share of U; ≤ 0 where it stays inside.
    """

    low: float
    high: float
    miss_low: float
    miss_high: float
    tolerance: float
    first_order_holds: bool
    decisive: bool
    excess: float

    @property
    def adequate(self) -> bool:
        """Whether y ± U (k = 2) may be shown: the run's interval reaches at most 10 % of U beyond it.

        The strict verdict also fails where first order is merely cautious, as with a linear model of one
        rectangular input. This one fails only where it would promise too much.
        """
        return self.excess <= EXCESS_ALLOWED


def check_first_order(found: MonteCarlo, value: float, u: float, *, digits: int = 2) -> FirstOrderCheck:
    r"""Compare y ± k_p u with the interval of a Monte Carlo run.

    Parameters
    ----------
    found : MonteCarlo
        A run of the same model and inputs.
    value, u : float
        Estimate and first-order standard uncertainty. [output unit], u > 0.
    digits : int
        Significant digits of u that are meant to hold, 1 or 2.

    Returns
    -------
    FirstOrderCheck
        Distances, tolerance and both verdicts.

    Raises
    ------
    OutOfRange
        If u is not positive and finite.

    Notes
    -----
    .. math:: d_{low} = |y - U_p - y_{low}|,\quad d_{high} = |y + U_p - y_{high}|,\quad U_p = k_p u

    Holds if neither exceeds the numerical tolerance of u.

    References
    ----------
    .. [1] JCGM 101:2008, clause 8.1 and 8.2 (tolerance of the run one fifth of that of the comparison).
    """
    if not 0 < u < float("inf"):
        raise OutOfRange.of("the standard uncertainty", u, 0, float("inf"), "output unit")
    reach = coverage_factor(float("inf"), found.probability) * u
    low, high = value - reach, value + reach
    miss_low, miss_high = abs(low - found.interval[0]), abs(high - found.interval[1])
    tolerance = numerical_tolerance(u, digits)
    beyond = max(value - K * u - found.interval[0], found.interval[1] - value - K * u)
    return FirstOrderCheck(
        low=low,
        high=high,
        miss_low=miss_low,
        miss_high=miss_high,
        tolerance=tolerance,
        first_order_holds=max(miss_low, miss_high) <= tolerance,
        decisive=found.numerical_error <= tolerance / 5,
        excess=beyond / (K * u),
    )

"""The budget: what each input contributes to the uncertainty of one reading."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from thermfix.errors import OutOfRange
from thermfix.uncertainty.expanded import K, Rounded, rounded
from thermfix.uncertainty.propagation import checked_u, correlation_matrix


@dataclass(frozen=True, slots=True, kw_only=True)
class BudgetInput:
    """One input of a reading.

    Attributes
    ----------
    name : str
        Different from every other input's.
    value : float
        Estimate. [unit].
    unit : str
        As it is to be shown.
    u : float
        Standard uncertainty. [unit], ≥ 0.
    distribution : str
        As it is to be shown.
    sensitivity : float
        Derivative of the reading with respect to this input, with its sign. [K / unit].
    """

    name: str
    value: float
    unit: str
    u: float
    distribution: str
    sensitivity: float


@dataclass(frozen=True, slots=True, kw_only=True)
class BudgetRow:
    """One contribution: of an input, or of the correlation between two (then ``input`` is None).

    Attributes
    ----------
    name : str
        The input's, or ``first × second`` for the covariance of a correlated pair.
    input : BudgetInput or None
        The input itself.
    contribution_k : float
        |c|·u. [K]. For a pair the root of the covariance term's size.
    share_pct : float
        Share of the combined variance. [%]. Negative for a pair whose errors cancel; all shares sum to 100.
    """

    name: str
    input: BudgetInput | None
    contribution_k: float
    share_pct: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Budget:
    """All contributions, the largest share first, and what they combine to."""

    rows: tuple[BudgetRow, ...]
    u_k: float

    @property
    def expanded_u_k(self) -> float:
        """Expanded uncertainty at k = 2. [K]."""
        return K * self.u_k

    def stated(self, value: float) -> Rounded:
        """Return a reading and its expanded uncertainty as they are to be shown: two digits, rounded up."""
        return rounded(value, self.expanded_u_k)


def budget(inputs: Sequence[BudgetInput], correlations: Mapping[tuple[str, str], float] | None = None) -> Budget:
    r"""Return the budget of one reading.

    Parameters
    ----------
    inputs : sequence of BudgetInput
        All inputs, each name once.
    correlations : mapping of (str, str) to float, optional
        Correlation coefficients of pairs; others are independent.

    Returns
    -------
    Budget
        One row for each input and one for each correlated pair. Shares are 0 where nothing is uncertain.

    Raises
    ------
    InputError
        If a name is repeated, or correlations do not fit the inputs.
    OutOfRange
        If a standard uncertainty is negative or not finite, or a sensitivity is not finite.

    Notes
    -----
    .. math:: u_c^2 = \sum_i (c_i u_i)^2 + 2 \sum_{i<j} c_i u_i\, c_j u_j\, r_{ij}

    References
    ----------
    .. [1] JCGM 100:2008, eqs. (10), (11), (16) and 7.2.7; the table follows H.1, Table H.1.

    Examples
    --------
    >>> found = budget([
    ...     BudgetInput(name="ε", value=0.95, unit="1", u=0.02, distribution="normal", sensitivity=-64.0),
    ...     BudgetInput(name="camera", value=96.9, unit="°C", u=0.5, distribution="rectangular", sensitivity=1.04),
    ... ])
    >>> [(row.name, round(row.contribution_k, 2), round(row.share_pct)) for row in found.rows]
    [('ε', 1.28, 86), ('camera', 0.52, 14)]
    >>> str(found.stated(100.02))
    '100.0 ± 2.8'
    """
    pairs = dict(correlations or {})
    correlation_matrix([one.name for one in inputs], pairs)  # refuses names and coefficients that do not fit
    signed = {one.name: _signed_contribution(one) for one in inputs}
    terms: list[tuple[str, BudgetInput | None, float]] = [(one.name, one, signed[one.name] ** 2) for one in inputs]
    for (first, second), r in pairs.items():
        terms.append((f"{first} × {second}", None, 2 * r * signed[first] * signed[second]))
    # Terms that cancel exactly may leave a rounding residue just below zero.
    variance = max(math.fsum(size for _, _, size in terms), 0.0)
    rows = [
        BudgetRow(
            name=name,
            input=one,
            contribution_k=math.sqrt(abs(size)),
            share_pct=100 * size / variance if variance else 0.0,
        )
        for name, one, size in terms
    ]
    rows.sort(key=lambda row: row.contribution_k, reverse=True)
    return Budget(rows=tuple(rows), u_k=math.sqrt(variance))


def _signed_contribution(one: BudgetInput) -> float:
    if not math.isfinite(one.sensitivity):
        raise OutOfRange.of(f"the sensitivity to {one.name}", one.sensitivity, -math.inf, math.inf, f"K/{one.unit}")
    return one.sensitivity * float(checked_u(one.u))

"""The verdict whether first order is good enough, on cases whose answer is known."""

import numpy as np
import pytest

from thermfix.errors import OutOfRange
from thermfix.uncertainty.draws import RandomInput
from thermfix.uncertainty.first_order import check_first_order
from thermfix.uncertainty.monte_carlo import run

TRIALS = 400_000


def total(samples):
    return sum(samples.values())


def test_linear_and_normal_holds():
    """JCGM 101 9.2.2: the normal sum, where clause 8 is met. One digit, as 4e5 trials settle to a fifth of that."""
    inputs = {name: RandomInput(value=0.0, u=1.0) for name in "abcd"}
    found = check_first_order(run(total, inputs, seed=1, trials=TRIALS), 0.0, 2.0, digits=1)
    assert found.first_order_holds
    assert found.decisive
    assert found.adequate
    assert (found.low, found.high) == pytest.approx((-3.92, 3.92), abs=0.005)


def test_dominating_rectangle_is_cautious_but_not_validated():
    """JCGM 101 9.2.4: ±19.9 against ±17.0 is not validated; yet it promises nothing too much."""
    inputs = {name: RandomInput(value=0.0, u=1.0, distribution="rectangular") for name in "abc"}
    inputs["d"] = RandomInput(value=0.0, u=10.0, distribution="rectangular")
    u = float(np.sqrt(103))
    found = check_first_order(run(total, inputs, seed=2, trials=TRIALS), 0.0, u)
    assert not found.first_order_holds
    assert found.miss_low == pytest.approx(19.9 - 17.0, abs=0.1)
    assert found.adequate
    assert found.excess < 0


@pytest.mark.rows("g_radiometric_mc", "g_mc_paint95_mc", "g_mc_oxid70_mc", "g_mc_bare", "g_mc_near_amb_mc")
def test_radiometric_cases(row, row_case):
    """Adequate for paint and oxide (the stated ends lie within y ± U), not below: 19, 28, 36 % of U too short."""
    case, stated = row_case
    run_of_it = run(case.surface_k, case.inputs, seed=3, trials=200_000)
    found = check_first_order(run_of_it, case.nominal_k, case.first_order_u)
    assert found.adequate == any(name in row["id"] for name in ("paint95", "oxid70"))
    published = max(stated["t_obj"] - stated["q2.5"], stated["q97.5"] - stated["t_obj"]) / (2 * case.first_order_u) - 1
    assert found.excess == pytest.approx(published, abs=0.03)  # 4 standard errors of an end over U


def test_low_emissivity_does_not_hold(faint_case):
    found = check_first_order(
        run(faint_case.surface_k, faint_case.inputs, seed=4, trials=200_000),
        faint_case.nominal_k,
        faint_case.first_order_u,
        digits=1,
    )
    assert not found.first_order_holds
    assert not found.adequate


def test_an_unsettled_run_is_not_decisive():
    inputs = {"a": RandomInput(value=0.0, u=1.0)}
    assert not check_first_order(run(total, inputs, seed=5, trials=20_000), 0.0, 1.0).decisive


@pytest.mark.parametrize("u", [0.0, -1.0, np.nan, np.inf])
def test_refuses(u):
    found = run(total, {"a": RandomInput(value=0.0, u=1.0)}, seed=5, trials=1)
    with pytest.raises(OutOfRange):
        check_first_order(found, 0.0, u)

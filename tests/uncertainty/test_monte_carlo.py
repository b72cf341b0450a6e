"""Monte Carlo held to JCGM 101 clause 9, to radiometric rows, and to distributions known exactly.

Trials are kept at or below 4e5. With N trials of a normal output the standard error of the sd is
sd/√(2N), 0.11 % at 4e5, and of a 95 % end 2.67 sd/√N, 0.42 % of sd: the tolerances state how many of those.
"""

import numpy as np
import pytest
from scipy import stats

from thermfix.errors import InputError, OutOfRange, PhysicsError
from thermfix.uncertainty.draws import RandomInput
from thermfix.uncertainty.monte_carlo import (
    numerical_tolerance,
    run,
    shortest_interval,
    standard_error_of_sd,
    symmetric_interval,
)

TRIALS = 400_000


def total(samples):
    return sum(samples.values())


def four(distribution, last_u=1.0):
    inputs = {f"x{place}": RandomInput(value=0.0, u=1.0, distribution=distribution) for place in range(3)}
    return {**inputs, "x3": RandomInput(value=0.0, u=last_u, distribution=distribution)}


@pytest.mark.rows("g_jcgm101", "j101_92")
def test_jcgm101_9_2_sums(row, expected):
    """Sums of four normals, of four rectangles; 4 standard errors of an end, 0.034, or the row's 0.01 of 1e6 trials.

    The row of the GUM framework (19.9, one rectangle of u = 10) is what first order says, not Monte Carlo.
    """
    if row["id"] == "j101_924_guf":
        assert 1.959963984540054 * np.sqrt(3 + 10**2) == pytest.approx(expected, rel=1e-12)
        return
    distribution = {"j101_922": "normal", "j101_923": "rectangular"}[row["id"]]
    found = run(total, four(distribution), seed=1, trials=TRIALS)
    assert np.subtract(*found.interval[::-1]) / 2 == pytest.approx(expected, abs=0.02)
    assert found.sd == pytest.approx(2.0, abs=0.01)
    assert found.mean == pytest.approx(0.0, abs=0.013)


def test_jcgm101_9_2_4_dominating_rectangle():
    """One rectangle of u = 10 among three of 1: printed ±17.0 where first order says ±19.9."""
    found = run(total, four("rectangular", 10.0), seed=2, trials=TRIALS)
    assert found.interval == pytest.approx((-17.0, 17.0), abs=0.07)
    assert found.sd == pytest.approx(np.sqrt(103), rel=0.004)


def mismatch(samples):
    return samples["x1"] ** 2 + samples["x2"] ** 2


def comparison_loss(x1, r):
    inputs = {"x1": RandomInput(value=x1, u=0.005), "x2": RandomInput(value=0.0, u=0.005)}
    return run(mismatch, inputs, seed=3, trials=TRIALS, correlations={("x1", "x2"): r} if r else None)


@pytest.mark.rows("g_jcgm101", "j101_94")
def test_jcgm101_9_4_comparison_loss(row, expected):
    """Exact moments of the quadratic form; 1 % as the rows allow: 3 standard errors or more at 4e5 trials."""
    if row["id"] == "j101_94_0_hi":
        found = comparison_loss(0.0, 0.0)
        assert found.shortest[0] == pytest.approx(0.0, abs=1e-6)
        assert found.shortest[1] == pytest.approx(expected, rel=0.02)  # the shortest interval settles slower
        return
    x1, r, what = row["id"].removeprefix("j101_94_").split("_")
    found = comparison_loss(float(x1), float(r))
    assert {"mean": found.mean, "u": found.sd}[what] == pytest.approx(expected, rel=0.01)


@pytest.mark.parametrize(
    ("x1", "r", "printed"),
    [
        (0.0, 0.0, 50e-6),
        (0.0, 0.9, 67e-6),
        (0.01, 0.0, 112e-6),
        (0.01, 0.9, 121e-6),
        (0.05, 0.0, 502e-6),
        (0.05, 0.9, 505e-6),
    ],
)
def test_jcgm101_9_4_printed_u(x1, r, printed):
    """JCGM 101 Tables 3 and 4, u(δy) by Monte Carlo, from memory: a last digit of the print, and 1 %."""
    assert comparison_loss(x1, r).sd == pytest.approx(printed, abs=1e-6, rel=0.01)


@pytest.mark.rows("g_radiometric_mc", "g_mc_")
def test_radiometric_rows(row, expected, row_case):
    """First order: analytic, 1e-6. Monte Carlo (rows of 4e6 trials, other generator): 1 % of the sd, 6 errors."""
    case, stated = row_case
    assert case.nominal_k - 273.15 == pytest.approx(stated["t_obj"], abs=1e-5)
    if row["id"].endswith("_gum"):
        assert case.first_order_u == pytest.approx(expected, rel=1e-6)
        return
    found = run(case.surface_k, case.inputs, seed=4, trials=TRIALS)
    assert found.sd == pytest.approx(expected, rel=0.01)
    assert found.mean - 273.15 == pytest.approx(stated["mean"], abs=4 * found.sd / np.sqrt(TRIALS))
    assert found.interval[0] - 273.15 == pytest.approx(stated["q2.5"], abs=0.02 * found.sd)
    assert found.interval[1] - 273.15 == pytest.approx(stated["q97.5"], abs=0.03 * found.sd)
    assert found.invalid_share == stated["invalid"] == 0


def test_low_emissivity_is_understated_by_first_order(faint_case):
    """ε 0.15 ± 0.05 at 120 °C: 25 K by first order, 31 K and 8 K higher on average by Monte Carlo."""
    found = run(faint_case.surface_k, faint_case.inputs, seed=5, trials=TRIALS)
    assert faint_case.first_order_u == pytest.approx(25, abs=0.6)
    assert found.sd == pytest.approx(31, abs=0.6)
    assert found.mean - faint_case.nominal_k == pytest.approx(8, abs=0.5)
    assert found.shortest[1] - found.shortest[0] < found.interval[1] - found.interval[0]


def skewed(samples):
    return np.exp(samples["x"])


def test_skewed_distribution_known_exactly():
    """Lognormal, σ = 0.5: moments and quantiles in closed form. 4 standard errors each."""
    found = run(skewed, {"x": RandomInput(value=0.0, u=0.5)}, seed=6, trials=TRIALS)
    exact = stats.lognorm(0.5)
    assert found.mean == pytest.approx(exact.mean(), abs=4 * exact.std() / np.sqrt(TRIALS))
    assert found.sd == pytest.approx(exact.std(), abs=4 * found.u_of_sd)
    assert found.median == pytest.approx(1.0, abs=4 * 1.2533 * 0.5 / np.sqrt(TRIALS))
    for end, p in zip(found.interval, (0.025, 0.975), strict=True):
        error = np.sqrt(p * (1 - p) / TRIALS) / exact.pdf(exact.ppf(p))
        assert end == pytest.approx(exact.ppf(p), abs=4 * error)
    assert exact.cdf(found.shortest[1]) - exact.cdf(found.shortest[0]) == pytest.approx(0.95, abs=0.002)
    assert exact.pdf(found.shortest[0]) == pytest.approx(exact.pdf(found.shortest[1]), rel=0.15)  # its defining trait


def test_intervals_cover_what_they_promise():
    """200 samples of 2000 of a skewed distribution: coverage 0.95 ± 4 × 0.0049/√200; shortest ones lean low."""
    rng = np.random.default_rng(8)
    exact = stats.lognorm(0.8)
    covered = []
    for _ in range(200):
        low, high = symmetric_interval(np.exp(0.8 * rng.standard_normal(2000)))
        covered.append(exact.cdf(high) - exact.cdf(low))
    assert np.mean(covered) == pytest.approx(0.95, abs=0.0014)


def test_standard_error_of_the_sd():
    """Against 3000 repeated samples of a lognormal (true error known to 1.3 %); and s/√(2m) for a normal."""
    rng = np.random.default_rng(9)
    samples = np.exp(0.3 * rng.standard_normal((3000, 1000)))
    seen = samples.std(axis=1, ddof=1).std(ddof=1)
    assert np.mean([standard_error_of_sd(one) for one in samples]) == pytest.approx(seen, rel=0.08)
    normal = rng.standard_normal(100_000)
    assert standard_error_of_sd(normal) == pytest.approx(normal.std() / np.sqrt(200_000), rel=0.03)
    assert standard_error_of_sd(np.ones(10)) == 0


def test_one_seed_one_answer():
    inputs = {"x": RandomInput(value=0.0, u=0.5)}
    assert run(skewed, inputs, seed=11) == run(skewed, inputs, seed=11)
    assert run(skewed, inputs, seed=12).mean != run(skewed, inputs, seed=11).mean


def test_adds_blocks_until_settled_or_at_the_limit():
    """To settle an end to δ = 0.005 takes (2 × 2.67 sd/δ)² trials: 19,000 for an sd of 0.13, 730,000 for 0.80.

    At least 10 blocks are run. The error that decides is itself an estimate, hence the wide limits.
    """
    quick = run(total, {"x": RandomInput(value=0.0, u=0.13)}, seed=13)
    assert (quick.trials, quick.converged) == (100_000, True)
    assert quick.numerical_error <= quick.tolerance == 0.005
    slow = run(total, {"x": RandomInput(value=0.0, u=0.80)}, seed=13)
    assert slow.converged
    assert 300_000 < slow.trials < 1_000_000
    cut = run(total, {"x": RandomInput(value=0.0, u=0.80)}, seed=13, max_trials=30_000)
    assert (cut.trials, cut.converged) == (30_000, False)
    single = run(total, {"x": RandomInput(value=0.0, u=0.13)}, seed=13, trials=1)
    assert (single.trials, single.converged) == (10_000, False)


def test_the_settled_error_is_as_small_as_it_says():
    """Twice a standard error is exceeded by about 1 in 20; of 20 runs at most 4 sds may miss by more."""
    inputs = {"x": RandomInput(value=0.0, u=0.5)}
    exact = stats.lognorm(0.5).std()
    runs = [run(skewed, inputs, seed=seed, digits=1, trials=50_000) for seed in range(20)]
    assert sum(abs(one.sd - exact) > 2 * one.u_of_sd for one in runs) <= 4


def test_non_physical_trials_are_counted_and_left_out():
    """√x of a normal with mean 1, u 1: 15.87 % have no root; the rest is conditional. 4 binomial errors."""
    found = run(lambda x: np.sqrt(x["x"]), {"x": RandomInput(value=1.0, u=1.0)}, seed=14, trials=100_000)
    assert found.invalid_share == pytest.approx(stats.norm.cdf(-1), abs=4 * 0.00116)
    assert np.isfinite([found.mean, found.sd, *found.interval]).all()
    assert found.interval[0] >= 0
    infinite = run(
        lambda x: np.where(x["x"] > 1, np.inf, x["x"]), {"x": RandomInput(value=1.0, u=1.0)}, seed=1, trials=1
    )
    assert infinite.invalid_share == pytest.approx(0.5, abs=0.02)


def test_too_few_physical_trials_give_no_figure():
    with pytest.raises(PhysicsError, match="of 10000 trials") as raised:
        run(lambda x: np.log(x["x"]), {"x": RandomInput(value=-5.0, u=1.0)}, seed=1)
    assert raised.value.hint


def test_intervals_of_small_samples():
    """JCGM 101 7.7: q = 95 of 100, r = 3 (from (100 − 95 + 1)/2): y(3) to y(98)."""
    values = np.arange(1.0, 101.0)
    assert symmetric_interval(values[::-1]) == (3.0, 98.0)
    assert shortest_interval(np.square(values)) == (1.0, 96.0**2)
    assert symmetric_interval([1.0, 2.0]) == (1.0, 2.0)


@pytest.mark.parametrize(
    ("u", "digits", "tolerance"),
    [(0.00035, 2, 5e-6), (0.00035, 1, 5e-5), (2.0, 1, 0.5), (2.0, 2, 0.05), (9.96, 2, 0.5), (0, 2, 0)],
)
def test_numerical_tolerance(u, digits, tolerance):
    """The first three are of JCGM 101 7.9.2 (its example 1) and 9.2.2."""
    assert numerical_tolerance(u, digits) == tolerance


@pytest.mark.parametrize(
    "options",
    [{"seed": -1}, {"trials": 0}, {"max_trials": 0}, {"probability": 1.0}, {"probability": 0.1}, {"digits": 3}],
)
def test_refuses_options_outside_their_range(options):
    with pytest.raises(OutOfRange):
        run(total, {"x": RandomInput(value=0.0, u=1.0)}, **{"seed": 1, **options})


def test_refuses_what_does_not_fit():
    with pytest.raises(InputError, match="shape"):
        run(lambda x: 1.0, {"x": RandomInput(value=0.0, u=1.0)}, seed=1)
    with pytest.raises(InputError, match="finite"):
        symmetric_interval([1.0, np.nan])
    with pytest.raises(OutOfRange):
        symmetric_interval([1.0, 2.0], 1.0)
    with pytest.raises(OutOfRange):
        standard_error_of_sd([1.0])

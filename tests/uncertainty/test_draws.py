"""Random draws have the moments, bounds and correlations they were asked for."""

import numpy as np
import pytest
from scipy import stats

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.draws import RandomInput, draw

N = 100_000


def generator(seed=5):
    return np.random.Generator(np.random.PCG64(seed))


@pytest.mark.parametrize("name", ["normal", "rectangular", "triangular", "u-shaped"])
def test_mean_and_standard_deviation(name):
    """The standard errors are u/√N = 0.006 of 2 and at most u/√(2N) = 0.0045; allowed 4 of them."""
    x = draw({"x": RandomInput(value=10.0, u=2.0, distribution=name)}, N, generator())["x"]
    assert x.mean() == pytest.approx(10, abs=0.025)
    assert x.std(ddof=1) == pytest.approx(2, abs=0.018)


@pytest.mark.parametrize(("value", "u"), [(0.15, 0.1), (0.98, 0.05), (1.0, 0.02), (0.5, 10.0), (0.5, 0.01)])
def test_cut_off_normal_is_the_truncated_normal(value, u):
    """Kolmogorov–Smirnov against an independent implementation; 1.95/√N is exceeded once in 1000 seeds."""
    x = draw({"x": RandomInput(value=value, u=u, low=0.0, high=1.0)}, N, generator())["x"]
    assert x.min() >= 0
    assert x.max() <= 1
    reference = stats.truncnorm((0 - value) / u, (1 - value) / u, loc=value, scale=u)
    assert stats.kstest(x, reference.cdf).statistic < 1.95 / np.sqrt(N)


def test_cut_off_rectangle_is_the_shorter_rectangle():
    x = draw({"x": RandomInput(value=0.97, u=0.05, distribution="rectangular", high=1.0)}, N, generator())["x"]
    low = 0.97 - 0.05 * np.sqrt(3)
    assert stats.kstest(x, stats.uniform(low, 1 - low).cdf).statistic < 1.95 / np.sqrt(N)


@pytest.mark.parametrize("r", [-1.0, -0.4, 0.9, 1.0])
def test_correlated_normals(r):
    """u(r) = (1 − r²)/√N ≤ 0.003; allowed 4 of it. ±1 must work too."""
    inputs = {"a": RandomInput(value=5, u=2), "z": RandomInput(value=1, u=1), "b": RandomInput(value=-3, u=0.5)}
    x = draw(inputs, N, generator(), {("b", "a"): r})
    assert list(x) == ["a", "z", "b"]
    assert np.corrcoef(x["a"], x["b"])[0, 1] == pytest.approx(r, abs=0.012)
    assert np.corrcoef(x["a"], x["z"])[0, 1] == pytest.approx(0, abs=0.013)
    assert x["b"].mean() == pytest.approx(-3, abs=0.0065)
    assert x["b"].std() == pytest.approx(0.5, abs=0.0045)


def test_a_seed_fixes_every_number_and_u_0_is_a_constant():
    inputs = {"a": RandomInput(value=5, u=2), "c": RandomInput(value=3, u=0, low=3, high=3)}
    first, second = draw(inputs, 100, generator()), draw(inputs, 100, generator())
    assert (first["a"] == second["a"]).all()
    assert (first["c"] == 3).all()
    assert (draw(inputs, 100, generator(6))["a"] != first["a"]).all()


def test_refuses():
    bounded = {"a": RandomInput(value=0.9, u=0.1, high=1.0), "b": RandomInput(value=1, u=1)}
    with pytest.raises(InputError, match="a is correlated"):
        draw(bounded, 10, generator(), {("a", "b"): 0.5})
    with pytest.raises(InputError, match="not two of the inputs"):
        draw(bounded, 10, generator(), {("b", "zz"): 0.5})
    with pytest.raises(OutOfRange):
        draw(bounded, 0, generator())
    with pytest.raises(InputError, match="distribution"):
        RandomInput(value=1, u=1, distribution="gaussian")
    for value, u in ((1.5, 0.1), (np.nan, 0.1), (0.5, -0.1), (0.5, np.nan)):
        with pytest.raises(OutOfRange):
            RandomInput(value=value, u=u, low=0, high=1)

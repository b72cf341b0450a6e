"""Standard uncertainties of limits, and the distributions' functions against quadrature and each other."""

import numpy as np
import pytest

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.distributions import SHAPES, standard_u

BOUNDED = ["rectangular", "triangular", "u-shaped"]


@pytest.mark.parametrize(
    ("distribution", "variance"),
    [("rectangular", 1 / 3), ("triangular", 1 / 6), ("u-shaped", 1 / 2), ("normal", 1 / 4)],
)
def test_variance_of_unit_limits(distribution, variance):
    """JCGM 100 eqs. (7), (9b); JCGM 101 Table 1; a normal's limits stand for k = 2 unless told."""
    assert standard_u(1.0, distribution).item() ** 2 == pytest.approx(variance, rel=1e-14)


def test_gum_examples():
    """JCGM 100 4.3.7 a = 0.40e-6 → 0.23e-6, and F.2.2.1 a resolution δx → 0.29 δx: two printed digits."""
    assert standard_u(0.40e-6, "rectangular").item() == pytest.approx(0.23e-6, abs=0.005e-6)
    assert standard_u(0.5, "rectangular").item() == pytest.approx(0.29, abs=0.005)
    assert standard_u([3.0, 6.0], "normal", k=3).tolist() == [1.0, 2.0]


@pytest.mark.parametrize("name", SHAPES)
def test_mean_0_and_standard_deviation_1(name):
    """Moments as integrals of the quantile over the probability; the midpoint rule is good to 1e-5 here."""
    p = (np.arange(2_000_000) + 0.5) / 2_000_000
    x = SHAPES[name].quantile(p)
    assert x.mean() == pytest.approx(0, abs=1e-9)
    assert np.square(x).mean() == pytest.approx(1, abs=1e-5)
    assert np.abs(x).max() <= SHAPES[name].half_width


@pytest.mark.parametrize("name", SHAPES)
def test_quantile_inverts_share_below(name):
    p = np.linspace(0.001, 0.999, 501)
    shape = SHAPES[name]
    assert shape.share_below(shape.quantile(p)) == pytest.approx(p, abs=1e-12)
    assert (np.diff(shape.quantile(p)) > 0).all()


@pytest.mark.parametrize("name", BOUNDED)
def test_beyond_the_limits(name):
    assert SHAPES[name].share_below(np.array([-9.0, 9.0])).tolist() == [0.0, 1.0]


def test_refuses():
    with pytest.raises(InputError, match="rectangular, triangular"):
        standard_u(1.0, "uniform")
    with pytest.raises(InputError, match="coverage factor"):
        standard_u(1.0, "normal", k=0)
    with pytest.raises(OutOfRange):
        standard_u(-1.0, "rectangular")

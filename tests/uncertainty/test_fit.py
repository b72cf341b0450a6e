"""Covariance of fits, held to the straight line of JCGM 100 Annex H.3 and to simulated calibrations."""

import numpy as np
import pytest

from thermfix.errors import InputError, OutOfRange
from thermfix.uncertainty.fit import parameter_covariance, parameter_covariance_of_known_u, prediction_u
from thermfix.uncertainty.propagation import split_covariance

# JCGM 100:2008 Table H.6: thermometer readings and corrections, °C. Typed from memory; that the GUM's
# printed results come out of them is what the first test shows.
READING_C = [21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511]
CORRECTION_K = [-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.160]


def test_gum_h3_thermometer_calibration():
    """Printed: −0.1712(29), 0.00218(67), r −0.930, s 0.0035, b(30 °C) = −0.1494(41). Half a last digit each."""
    j = np.stack([np.ones(11), np.array(READING_C) - 20.0], axis=1)
    y, *_ = np.linalg.lstsq(j, np.array(CORRECTION_K), rcond=None)
    residuals = j @ y - CORRECTION_K
    covariance = parameter_covariance(j, residuals)
    u, r = split_covariance(covariance)
    assert y == pytest.approx([-0.1712, 0.00218], abs=5e-5)
    assert u[0] == pytest.approx(0.0029, abs=5e-5)
    assert u[1] == pytest.approx(0.00067, abs=5e-6)
    assert r[0, 1] == pytest.approx(-0.930, abs=5e-4)
    assert np.sqrt(residuals @ residuals / 9) == pytest.approx(0.0035, abs=5e-5)
    assert y @ [1, 10] == pytest.approx(-0.1494, abs=5e-5)
    assert prediction_u([1.0, 10.0], covariance).item() == pytest.approx(0.0041, abs=5e-5)


def test_known_u_against_simulation():
    """4000 quadratic fits with unequal noise: the sd of a prediction scatters by 1.1 %, allowed 4 of that."""
    rng = np.random.default_rng(3)
    x = np.linspace(300, 600, 8)
    j = np.stack([np.ones(8), x, x**2], axis=1)
    u = np.linspace(0.1, 0.4, 8)
    observed = j @ [5.0, 0.3, 1e-4] + rng.standard_normal((4000, 8)) * u
    fits = np.linalg.lstsq(j / u[:, None], (observed / u).T, rcond=None)[0]
    at = np.stack([np.ones(4), [320, 450, 580, 650], np.square([320, 450, 580, 650])], axis=1)
    found = prediction_u(at, parameter_covariance_of_known_u(j, u))
    assert found == pytest.approx((at @ fits).std(axis=1, ddof=1), rel=0.045)


def test_badly_scaled_parameters_keep_their_digits():
    """A parameter in millionths beside one in millions: column scaling leaves rounding only."""
    x = np.linspace(0, 1, 9)
    j = np.stack([np.ones(9), x, x**2], axis=1)
    scale = np.array([1e-9, 1.0, 1e9])
    plain = parameter_covariance_of_known_u(j, np.ones(9))
    scaled = parameter_covariance_of_known_u(j * scale, np.ones(9))
    assert scaled * np.outer(scale, scale) == pytest.approx(plain, rel=1e-9)


def test_refuses():
    line = np.stack([np.ones(4), np.arange(4.0)], axis=1)
    with pytest.raises(InputError, match="do not determine"):
        parameter_covariance_of_known_u(np.ones((4, 2)), np.ones(4))
    with pytest.raises(InputError, match="do not determine"):
        parameter_covariance_of_known_u(np.zeros((4, 2)), np.ones(4))
    with pytest.raises(InputError, match="2 points leave nothing"):
        parameter_covariance(line[:2], np.zeros(2))
    with pytest.raises(InputError, match="fit"):
        parameter_covariance(line, np.zeros(3))
    with pytest.raises(InputError, match="fit"):
        parameter_covariance_of_known_u(line, np.ones(3))
    with pytest.raises(InputError, match="finite"):
        parameter_covariance_of_known_u(np.full((4, 2), np.nan), np.ones(4))
    with pytest.raises(OutOfRange):
        parameter_covariance_of_known_u(line, np.zeros(4))
    with pytest.raises(InputError, match="fit"):
        prediction_u([1.0, 2.0, 3.0], np.eye(2))

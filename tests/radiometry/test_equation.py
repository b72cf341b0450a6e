"""The measurement equation inverted and differentiated, against independently manufactured solutions."""

import re

import numpy as np
import pytest

from thermfix.radiometry import Band
from thermfix.radiometry.equation import Chain, received_radiance, surface_temperature

KELVIN = 273.15


def chain_of(row):
    text = row["inputs"]
    low, high = map(float, re.search(r"rect band ([\d.]+)-([\d.]+) um", text).groups())
    v = {name: float(value) for name, value in re.findall(r"(\w+)=([-+\d.]+)", text)}
    chain = Chain(
        emissivity=v["eps"],
        reflected_k=v["t_refl"] + KELVIN,
        air_transmittance=v["tau_atm"],
        air_k=v["t_atm"] + KELVIN,
        window_transmittance=v["tau_win"],
        window_reflectance=v["rho_win"],
        window_k=v["t_win"] + KELVIN,
        camera_side_k=v["t_refl_win"] + KELVIN,
    )
    return Band.rectangular(low, high), chain, v


@pytest.mark.rows("g_measurement_equation", "g_inv_")
def test_inverted_measurement_equation(row, expected):
    """Manufactured in mpmath to 30 digits: the surface temperature comes back, and so does the signal."""
    band, chain, v = chain_of(row)
    # The signal column has twelve digits: 1e-6 K, as the row says.
    assert float(surface_temperature(band, v["signal"], chain)) - KELVIN == pytest.approx(expected, abs=1e-6)
    assert float(received_radiance(band, expected + KELVIN, chain)) == pytest.approx(v["signal"], rel=1e-10)
    assert float(band.temperature(v["signal"])) - KELVIN == pytest.approx(v["t_app"], abs=1e-6)


def test_air_at_the_apparent_temperature_changes_nothing():
    """Row g_lim_atm_eq: ε = 1 and air as warm as the surface, τ = 0.2."""
    band = Band.rectangular(8, 14)
    chain = Chain(air_transmittance=0.2, air_k=12.34 + KELVIN)
    received = band.radiance(12.34 + KELVIN)
    assert float(surface_temperature(band, received, chain)) - KELVIN == pytest.approx(12.34, abs=1e-7)


def test_sources_share_the_reflected_hemisphere():
    """A source that fills it all is the same as surroundings at its temperature."""
    band = Band.rectangular(3, 5)
    alone = Chain(emissivity=0.4, reflected_k=450.0)
    source = Chain(emissivity=0.4, reflected_k=290.0, sources=[(450.0, 1.0)])
    half = Chain(emissivity=0.4, reflected_k=290.0, sources=[(450.0, 0.5)])
    assert float(received_radiance(band, 350.0, source)) == pytest.approx(float(received_radiance(band, 350.0, alone)))
    cold = float(received_radiance(band, 350.0, Chain(emissivity=0.4, reflected_k=290.0)))
    hot = float(received_radiance(band, 350.0, alone))
    assert float(received_radiance(band, 350.0, half)) == pytest.approx((cold + hot) / 2)


@pytest.mark.parametrize("radiance", [0.0, -3.0, 1.0, np.nan])
def test_no_temperature_when_reflection_alone_is_brighter(radiance):
    band = Band.rectangular(8, 14)
    assert np.isnan(surface_temperature(band, radiance, Chain(emissivity=0.2, reflected_k=300.0)))

"""Analytic sensitivities against published ones and against finite differences of the reference model."""

import re

import numpy as np
import pytest

from thermfix.correction.setting import Circumstances
from thermfix.correction.surface import material_surface
from thermfix.materials import find
from thermfix.model import Estimate, Window
from thermfix.radiometry import Band
from thermfix.radiometry.air import air_transmittance
from thermfix.radiometry.equation import Chain, surface_temperature
from thermfix.radiometry.planck import spectral_radiance, spectral_radiance_slope

KELVIN = 273.15


def sensitivity(layer, key, surface_k):
    """dT/d(input) at one temperature, from the layer's setting and without its table of knots."""
    setting, nodes = layer.setting, layer.instrument.band.nodes_um
    term = next(one for one in setting.terms if one.input.key == key)
    gain = 0.0 if term.gain is None else term.gain @ spectral_radiance(nodes, surface_k)
    return -(gain + term.offset) / (setting.emission @ spectral_radiance_slope(nodes, surface_k))


@pytest.mark.rows("g_measurement_equation", "g_sens_")
def test_published_sensitivities(row, expected, layer_of):
    """Analytic and mpmath; ten digits, of inputs printed to 1e-10 K: 1e-6 relative."""
    text = row["inputs"]
    low, high = map(float, re.search(r"rect band ([\d.]+)-([\d.]+) um", text).groups())
    v = {name: float(value) for name, value in re.findall(r"(\w+)=([-+\d.]+)", text)}
    pane = None
    if v["tau_win"] < 1 or v["rho_win"] > 0:
        pane = Window(
            transmittance=Estimate(value=v["tau_win"]),
            reflectance=Estimate(value=v["rho_win"]),
            temperature_k=Estimate(value=v["t_win"] + KELVIN),
        )
    layer = layer_of(
        (low, high), emissivity=v["eps"], reflected=v["t_refl"], transmittance=v["tau_atm"], air=v["t_atm"],
        window=pane, camera_side_k=Estimate(value=v["t_refl_win"] + KELVIN),
    )  # fmt: skip
    band = layer.instrument.band
    chain = Chain(
        emissivity=v["eps"], reflected_k=v["t_refl"] + KELVIN, air_transmittance=v["tau_atm"],
        air_k=v["t_atm"] + KELVIN, window_transmittance=v["tau_win"], window_reflectance=v["rho_win"],
        window_k=v["t_win"] + KELVIN, camera_side_k=v["t_refl_win"] + KELVIN,
    )  # fmt: skip
    surface_k = float(surface_temperature(band, v["signal"], chain))
    if row["id"].startswith("g_sens_tapp"):
        slope = layer.setting.emission @ spectral_radiance_slope(band.nodes_um, surface_k)
        found = float(band.slope(v["t_app"] + KELVIN)) / slope
    else:
        name = row["id"].split("_")[2]
        key = {"eps": "emissivity", "trefl": "reflected_c", "tau": "transmittance", "tatm": "air_c"}[name]
        found = sensitivity(layer, key, surface_k)
    assert found == pytest.approx(expected, rel=1e-6)


PANE = Window(transmittance=Estimate(value=0.8), reflectance=Estimate(value=0.1), temperature_k=Estimate(value=300.0))
BASE = {
    "emissivity": 0.6, "reflected_c": 30.0, "air_c": 15.0, "humidity_pct": 60.0, "pressure_hpa": 1000.0,
    "co2_ppm": 450.0, "distance_m": 30.0, "air_model": 1.0, "tau_w": 0.8, "rho_w": 0.1, "temperature_c": 26.85,
    "camera_side_c": 22.0, "angle_deg": 50.0,
}  # fmt: skip
STEPS = {"emissivity": 1e-4, "air_model": 1e-3, "tau_w": 1e-4, "rho_w": 1e-4}


def reference(band, received, values, material=None):
    """Surface temperature of the reference model for plain numbers; ε may come from optical constants."""
    air = air_transmittance(
        band.nodes_um, values["distance_m"], air_k=values["air_c"] + KELVIN, humidity_pct=values["humidity_pct"],
        pressure_hpa=values["pressure_hpa"], co2_ppm=values["co2_ppm"],
    )  # fmt: skip
    emissivity = values["emissivity"]
    if material is not None:
        surface = material_surface(band, material, "test")
        emissivity = surface.emissivity(np.array([values["angle_deg"]]))[0] + (
            values["emissivity"] - BASE["emissivity"]
        )
    chain = Chain(
        emissivity=emissivity, reflected_k=values["reflected_c"] + KELVIN, air_transmittance=air ** values["air_model"],
        air_k=values["air_c"] + KELVIN, window_transmittance=values["tau_w"], window_reflectance=values["rho_w"],
        window_k=values["temperature_c"] + KELVIN, camera_side_k=values["camera_side_c"] + KELVIN,
    )  # fmt: skip
    return float(surface_temperature(band, received, chain))


@pytest.mark.parametrize("key", [*BASE])
@pytest.mark.parametrize(("band_um", "celsius"), [((7.5, 14.0), 80.0), ((3.0, 5.0), 300.0)])
def test_finite_differences_of_the_reference_model(layer_of, key, band_um, celsius):
    """Every input of the chain, within 1e-5 relative; central differences of steps that leave 1e-6 of their own."""
    material = find("fused silica, smooth") if key == "angle_deg" else None
    if material is not None and band_um[0] < 5:
        pytest.skip("the optical constants do not cover this band")
    layer = layer_of(
        band_um, emissivity=BASE["emissivity"], reflected=BASE["reflected_c"], air=BASE["air_c"],
        humidity_pct=BASE["humidity_pct"], pressure_hpa=BASE["pressure_hpa"], co2_ppm=BASE["co2_ppm"],
        distance_m=BASE["distance_m"], window=PANE, camera_side_k=Estimate(value=BASE["camera_side_c"] + KELVIN),
        surface=None if material is None else lambda band: material_surface(band, material, "test"),
        angle_deg=BASE["angle_deg"] if material is not None else 0.0,
    )  # fmt: skip
    band = layer.instrument.band
    surface_k = celsius + KELVIN
    setting = layer.setting
    received = setting.emission @ spectral_radiance(band.nodes_um, surface_k) + setting.rest
    step = STEPS.get(key, 0.02)
    ends = [reference(band, received, {**BASE, key: BASE[key] + sign * step}, material) for sign in (1, -1)]
    known = {"tau_w": ("window", "transmittance"), "rho_w": ("window", "reflectance")}.get(key)
    if known:
        term = next(one for one in setting.terms if (one.input.origin, one.input.key) == known)
        gain = 0.0 if term.gain is None else term.gain @ spectral_radiance(band.nodes_um, surface_k)
        slope = setting.emission @ spectral_radiance_slope(band.nodes_um, surface_k)
        found = -(gain + term.offset) / slope
    else:
        found = sensitivity(layer, key, surface_k)
    assert found == pytest.approx((ends[0] - ends[1]) / (2 * step), rel=1e-5, abs=1e-9)


def test_the_air_enters_once(layer_of):
    """Air temperature sets transmittance, emission and, without a camera side of its own, the window's mirror."""
    layer = layer_of(distance_m=30.0, window=PANE)
    keys = [(term.input.origin, term.input.key) for term in layer.setting.terms]
    assert len(keys) == len(set(keys))
    assert isinstance(layer.circumstances, Circumstances)


def test_knots_agree_with_the_setting(layer_of):
    """The table of sensitivities that readings use, at one of its own temperatures."""
    layer = layer_of(distance_m=10.0, emissivity=0.4)
    knot = layer.sensitivities[[one.key for one in layer.inputs].index("emissivity"), 0, 100]
    from_setting = sensitivity(layer, "emissivity", 200.0 * 17 ** (100 / 319))
    assert knot == pytest.approx(from_setting, rel=1e-9)
    assert Band.rectangular(7.5, 14.0).nodes_um.size == layer.instrument.band.nodes_um.size

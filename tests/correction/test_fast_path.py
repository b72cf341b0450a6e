"""The fast path held to the reference forward model, inverted wavelength by wavelength by bisection."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from thermfix.correction.surface import Normal, material_surface
from thermfix.materials import find
from thermfix.model import Angular, Estimate, Material, Table, Window
from thermfix.radiometry import Band
from thermfix.radiometry.air import air_transmittance
from thermfix.radiometry.equation import Chain, received_radiance

BANDS = [(3.0, 5.0), (7.5, 14.0), (8.0, 14.0)]
KELVIN = np.linspace(253.15, 1273.15, 400)


def dense(low, high):
    """A quadrature that knows nothing of the fast path's nodes: 40,001 trapezoids in wavelength."""
    nodes = np.linspace(low, high, 40_001)
    weights = np.full(nodes.size, nodes[1] - nodes[0])
    weights[[0, -1]] /= 2
    return Band(nodes, weights, low, high)


def worst(layer, band, chain, kelvin=KELVIN):
    received = received_radiance(band, kelvin, chain).astype(np.float32)
    found = layer.temperature(received)
    # Where the reference's own signal ends beyond what can be carried there is nothing to compare.
    assert np.isfinite(found).all()
    return np.abs(found - kelvin).max()


def air_of(band, distance_m, scene):
    return air_transmittance(
        band.nodes_um, distance_m, air_k=scene["air"] + 273.15, humidity_pct=scene["humidity_pct"],
        pressure_hpa=1013.25, co2_ppm=420.0,
    )  # fmt: skip


@pytest.mark.parametrize("band_um", BANDS)
@pytest.mark.parametrize("emissivity", [0.3, 0.7, 1.0])
@pytest.mark.parametrize(("distance_m", "air"), [(1.0, 20.0), (50.0, 30.0), (200.0, 10.0)])
def test_grey_surfaces_within_5_mk(layer_of, band_um, emissivity, distance_m, air):
    """−20 to 1000 °C; the spectral air included. τ is at least 0.5 in all of these cases."""
    scene = {"emissivity": emissivity, "distance_m": distance_m, "air": air, "humidity_pct": 50.0, "reflected": 35.0}
    band = dense(*band_um)
    chain = Chain(
        emissivity=emissivity, reflected_k=308.15, air_transmittance=air_of(band, distance_m, scene), air_k=air + 273.15
    )
    assert worst(layer_of(band_um, **scene), band, chain) <= 5e-3


@given(
    emissivity=st.floats(0.3, 1.0),
    reflected=st.floats(-40, 80),
    air=st.floats(-20, 40),
    transmittance=st.floats(0.5, 1.0),
    window=st.floats(0.5, 0.95),
    band_um=st.sampled_from(BANDS),
)
@settings(max_examples=25)
def test_grey_chain_with_window(layer_of, emissivity, reflected, air, transmittance, window, band_um):
    """Every part of the chain at once, grey: within 5 mK."""
    pane = Window(
        transmittance=Estimate(value=window), reflectance=Estimate(value=0.04), temperature_k=Estimate(value=305.0)
    )
    layer = layer_of(
        band_um, emissivity=emissivity, reflected=reflected, air=air, transmittance=transmittance, window=pane
    )
    chain = Chain(
        emissivity=emissivity,
        reflected_k=reflected + 273.15,
        air_transmittance=transmittance,
        air_k=air + 273.15,
        window_transmittance=window,
        window_reflectance=0.04,
        window_k=305.0,
        camera_side_k=air + 273.15,
    )
    # Colder than −20 °C surroundings aside, 3–5 µm has hardly any signal of its own below 0 °C.
    kelvin = KELVIN if band_um[0] > 5 else KELVIN[KELVIN > 300]
    assert worst(layer, dense(*band_um), chain, kelvin) <= 5e-3


@pytest.mark.parametrize("name", ["water", "window glass, uncoated"])
@pytest.mark.parametrize("angle_deg", [0.0, 45.0, 70.0])
def test_smooth_spectral_surfaces_within_20_mk(layer_of, name, angle_deg):
    """Optical constants of the library, seen through 20 m of air."""
    material = find(name)
    scene = {"distance_m": 20.0, "air": 20.0, "humidity_pct": 50.0, "reflected": 10.0}
    layer = layer_of(
        (8.0, 14.0), surface=lambda band: material_surface(band, material, "test"), angle_deg=angle_deg, **scene
    )
    band = dense(8.0, 14.0)
    chain = Chain(
        emissivity=material_surface(band, material, "test").emissivity(np.array([angle_deg]))[0],
        reflected_k=283.15,
        air_transmittance=air_of(band, 20.0, scene),
        air_k=293.15,
    )
    assert worst(layer, band, chain) <= 20e-3


@pytest.mark.parametrize("band_um", BANDS)
def test_steep_spectrum_within_20_mk(layer_of, band_um):
    """An emissivity that falls from 0.95 to 0.35 across the band, as a made-up worst case."""
    low, high = band_um
    wavelength = np.linspace(low, high, 12)
    table = Table(columns={"wavelength_um": wavelength, "emissivity": np.linspace(0.95, 0.35, 12)}, source="made up")
    material = Material(name="slope", spectrum=table, angular=Angular.DIELECTRIC, u=0.02)
    layer = layer_of(band_um, surface=lambda band: material_surface(band, material, "test"), angle_deg=30.0)
    band = dense(low, high)
    chain = Chain(emissivity=material_surface(band, material, "test").emissivity(np.array([30.0]))[0])
    assert worst(layer, band, chain) <= 20e-3


def test_coefficients_are_those_of_a_grey_surface(layer_of):
    """Grey and clear: y = a L + b is the surface's own radiance, a = 1/ε, b = −(1 − ε) L(T_refl)/ε."""
    layer = layer_of((8.0, 14.0), emissivity=0.5, reflected=30.0)
    background = float(Band.rectangular(8, 14).radiance(303.15))
    assert float(layer.a[0]) == pytest.approx(2.0, rel=1e-6)
    assert float(layer.b[0]) == pytest.approx(-background, rel=1e-6)


def test_nothing_is_left_of_a_dark_signal(layer_of):
    """ε = 0.1 before a 60 °C reflection, and a signal below what the reflection alone would send."""
    layer = layer_of((8.0, 14.0), emissivity=0.1, reflected=60.0)
    received = np.array([40.0, 0.0, -1.0, np.nan], np.float32)
    assert np.isnan(layer.temperature(received)).all()


def test_grey_metal_and_dielectric_follow_their_angles(layer_of):
    """At 70° a dielectric emits less and a metal more than at the normal, so the readings part."""
    signal = np.array([52.0], np.float32)

    def reading(normal, angular, angle_deg):
        def surface(band):
            value = layer_of((8.0, 14.0)).circumstances.surface.value
            return Normal(band=band, value=value, normal=np.array([normal]), angular=angular)

        layer = layer_of((8.0, 14.0), surface=surface, angle_deg=angle_deg, reflected=10.0)
        return float(layer.temperature(signal)[0])

    for normal in (0.1, 0.9):
        assert reading(normal, Angular.DIFFUSE, 70.0) == pytest.approx(reading(normal, Angular.DIFFUSE, 0.0))
    assert reading(0.9, Angular.DIELECTRIC, 70.0) > reading(0.9, Angular.DIFFUSE, 70.0) + 1
    assert reading(0.1, Angular.METAL, 70.0) < reading(0.1, Angular.DIFFUSE, 70.0) - 10

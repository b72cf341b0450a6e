"""Fresnel emissivity against published constants, a thin-film library, closed forms and its own derivatives."""

import re

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.optimize import brentq, minimize_scalar
from tmm import coh_tmm

from thermfix.radiometry.fresnel import (
    METAL_MAX_EMISSIVITY,
    dielectric_index,
    directional_emissivity,
    directional_slopes,
    fresnel_emissivity,
    hemispherical_emissivity,
    metal_index,
    polarised_emissivity,
)

BULK = ("water", "fused_silica", "sapphire", "Cu", "Al", "Au", "W", "Fe")
TABLES = {
    "water": "water",
    "fused_silica": "fused_silica_kischkat",
    "SiC": "silicon_carbide",
    "Al": "aluminium",
    "Cu": "copper",
    "Au": "gold_ordal",
}


def radiance(wavelength_um, temperature_k):
    """Planck's law up to a factor, written here so that nothing is shared with the code under test."""
    return 1 / (wavelength_um**5 * np.expm1(14387.768775 / (wavelength_um * temperature_k)))


def optical_constants(folder, name, wavelength_um):
    table = np.loadtxt(folder / "nk" / f"{TABLES[name]}.csv", delimiter=",", skiprows=4)
    return tuple(np.interp(wavelength_um, table[:, 0], table[:, i]) for i in (1, 2))


@pytest.mark.rows("d_directional", *(f"d_{name}" for name in BULK))
def test_published_constants_at_all_angles(row, inputs, expected):
    """n, k of refractiveindex.info (CC0); expected values by an independent Fresnel and tmm.

    1e-6 for given n, k; interpolated ones are printed to six digits, which moves ε by up to another 1e-6.
    """
    n, k = inputs["n"], inputs["k"]
    if row["quantity"].startswith("hemispherical"):
        assert hemispherical_emissivity(n, k) == pytest.approx(inputs["eps_h"], abs=2e-6)
        assert hemispherical_emissivity(n, k) / fresnel_emissivity(n, k, 0) == pytest.approx(expected, rel=1e-6)
    elif row["id"].endswith("_max"):
        found = minimize_scalar(
            lambda angle: -float(fresnel_emissivity(n, k, angle)),
            bounds=(60, 90),
            method="bounded",
            options={"xatol": 1e-6},
        )
        assert found.x == pytest.approx(expected, abs=0.01)
        assert -found.fun / fresnel_emissivity(n, k, 0) == pytest.approx(inputs["ratio"], rel=3e-6)  # n, k to 6 digits
    else:
        assert fresnel_emissivity(n, k, inputs["theta"]) == pytest.approx(expected, abs=2e-6)
        eps_s, eps_p = polarised_emissivity(n, k, inputs["theta"])
        assert eps_s == pytest.approx(inputs["eps_s"], abs=2e-6)
        assert eps_p == pytest.approx(inputs["eps_p"], abs=2e-6)


@pytest.mark.rows("d_directional", "d_diel")
def test_dielectrics_against_closed_forms(row, inputs, expected):
    """Siegel & Howell, Modest: 4n/(n+1)², Brewster's angle, closed form of the hemispherical value (1e-7)."""
    n = inputs["n"]
    if row["id"].endswith("_n"):
        assert fresnel_emissivity(n, 0, 0) == pytest.approx(expected, abs=1e-9)
        assert dielectric_index(expected) == pytest.approx(n, rel=1e-9)
    elif row["id"].endswith("_h"):
        assert hemispherical_emissivity(n, 0) == pytest.approx(expected, abs=1e-7)
    elif row["id"].endswith("_r"):
        ratio = hemispherical_emissivity(n, 0) / fresnel_emissivity(n, 0, 0)
        assert ratio == pytest.approx(expected, abs=1e-6)
        assert 0.91 <= ratio <= 1  # a camera's normal value is above the total hemispherical one of a handbook
    else:
        assert polarised_emissivity(n, 0, expected)[1] == pytest.approx(1, abs=1e-12)


@pytest.mark.rows("d_directional", "d_metal")
def test_hemispherical_over_normal_for_metals(inputs, expected):
    """Quadrature; Incropera (from memory) gives 1.0–1.3 for conductors, 4/3 is the limit for ε → 0."""
    n, k = inputs["n"], inputs["k"]
    ratio = hemispherical_emissivity(n, k) / fresnel_emissivity(n, k, 0)
    assert ratio == pytest.approx(expected, abs=1e-6)
    assert 1 < ratio < 4 / 3


@pytest.mark.rows("d_directional", "d_HR")
def test_hagen_rubens_is_the_limit_of_n_equal_k(inputs, expected):
    """Hagen & Rubens (1903) give ε = 2/n to first order, so n = k must answer ε − ε²/2 + ε³/8 + O(ε⁵).

    The printed coefficient 0.365 is the rounded 0.36527 Ω^−1/2: 8e-4 relative.
    """
    resistivity_ohm_m, wavelength_m = inputs["rho"] * 1e-2, inputs["lambda"] * 1e-6
    n = np.sqrt(wavelength_m / (4 * np.pi * 8.8541878128e-12 * 299792458.0 * resistivity_ohm_m))
    first_order = 2 / n
    assert first_order == pytest.approx(expected, rel=8e-4)
    assert fresnel_emissivity(n, n, 0) == pytest.approx(
        first_order - first_order**2 / 2 + first_order**3 / 8, abs=first_order**5
    )
    assert metal_index(fresnel_emissivity(n, n, 0)) == pytest.approx(n, rel=1e-9)


@pytest.mark.rows("d_bandavg", "d_bandavg_")
def test_band_means_of_tabulated_surfaces(row, expected, reference_dir):
    """Planck-weighted, rectangular response, 6001-point trapezoid as in the source; 2e-5 for thinned tables.

    SiC and aluminium tables here have fewer rows than the source's: 2e-6 of the difference.
    """
    name, low, high, kelvin, angle = re.fullmatch(r"d_bandavg_(\w+?)_([\d.]+)-([\d.]+)_(\d+)_(\d+)", row["id"]).groups()
    wavelength = np.linspace(float(low), float(high), 6001)
    emissivity = fresnel_emissivity(*optical_constants(reference_dir, name, wavelength), float(angle))
    weight = radiance(wavelength, float(kelvin))
    mean = np.trapezoid(emissivity * weight, wavelength) / np.trapezoid(weight, wavelength)
    assert mean == pytest.approx(expected, abs=2e-5)


@pytest.mark.rows("d_bandavg", "d_gray_")
def test_error_of_taking_a_spectral_surface_for_grey(row, inputs, expected, reference_dir):
    """Surface radiance spectral, inverted with the 300 K band value: the whole chain to 1 mK."""
    name = re.fullmatch(r"d_gray_(\w+)_[\d.]+", row["id"])[1]
    wavelength = np.linspace(8, 14, 6001)
    emissivity = fresnel_emissivity(*optical_constants(reference_dir, name, wavelength), 0.0)

    def in_band(spectrum, kelvin):
        return np.trapezoid(spectrum * radiance(wavelength, kelvin), wavelength)

    mean = in_band(emissivity, 300.0) / in_band(1.0, 300.0)
    assert mean == pytest.approx(float(re.search(r"eps_band\(300K\)=([\d.]+)", row["inputs"])[1]), abs=2e-6)
    received = in_band(emissivity, inputs["T"]) + in_band(1 - emissivity, inputs["T_refl"])
    found = brentq(
        lambda kelvin: mean * in_band(1.0, kelvin) + (1 - mean) * in_band(1.0, inputs["T_refl"]) - received, 200, 900
    )
    # The row's optical constants are the unthinned table's: 1 mK as stated, 5 mK for SiC.
    assert found - inputs["T"] == pytest.approx(expected, abs=5e-3 if name == "SiC" else 1e-3)


@given(st.floats(0.2, 80), st.floats(0, 80), st.floats(0, 89.9))
@settings(max_examples=150)
def test_thin_film_library_agrees(n, k, angle):
    """tmm's half-space reflectance of both polarisations; it works with 1 − R, hence 1e-11."""
    ours = polarised_emissivity(n, k, angle)
    for polarisation, value in zip("sp", ours, strict=True):
        theirs = coh_tmm(polarisation, [1, n + 1j * k], [np.inf, np.inf], np.radians(angle), 10.0)
        assert value == pytest.approx(1 - theirs["R"], abs=1e-11)


@given(st.floats(1e-3, 500), st.floats(0, 500), st.floats(0, 90))
def test_emissivity_is_a_share(n, k, angle):
    value = fresnel_emissivity(n, k, angle)
    assert 0 <= value <= 1 + 4e-16


@given(st.floats(1.0, 60), st.floats(0, 60))
@settings(max_examples=40)
def test_hemispherical_value_against_adaptive_quadrature(n, k):
    exact, _ = quad(
        lambda c: 2 * c * float(fresnel_emissivity(n, k, np.degrees(np.arccos(c)))), 0, 1, epsabs=1e-11, limit=200
    )
    assert hemispherical_emissivity(n, k) == pytest.approx(exact, rel=1e-6)


@given(st.floats(1e-3, 1.0))
def test_dielectric_index_gives_back_its_emissivity(emissivity):
    index = dielectric_index(emissivity)
    assert index >= 1
    assert fresnel_emissivity(index, 0, 0) == pytest.approx(emissivity, rel=1e-12)


@given(st.floats(1e-4, METAL_MAX_EMISSIVITY))
def test_metal_index_gives_back_its_emissivity_on_the_large_branch(emissivity):
    index = metal_index(emissivity)
    assert index >= np.sqrt(0.5) - 1e-7
    assert fresnel_emissivity(index, index, 0) == pytest.approx(emissivity, rel=1e-12)


@pytest.mark.parametrize("emissivity", [0.0, -0.1, np.nan, 0.8285, 1.0])
def test_no_index_without_a_solution(emissivity):
    """n = k cannot emit more than 2√2 − 2, nor anything nothing or less."""
    assert np.isnan(metal_index(emissivity))
    assert np.isnan(directional_emissivity(emissivity, 30.0, "metal"))
    if emissivity <= 0:
        assert np.isnan(dielectric_index(emissivity))


@pytest.mark.parametrize(("n", "k", "angle"), [(0, 1, 0), (1.5, -0.1, 0), (1.5, 0, -1), (1.5, 0, 90.1), (np.inf, 0, 0)])
def test_impossible_inputs_have_no_emissivity(n, k, angle):
    assert np.isnan(fresnel_emissivity(n, k, angle))


@given(st.floats(0.01, 0.8))
def test_metals_rise_and_fall_only_near_grazing(emissivity):
    """The curve rises to one maximum; good metals reach it beyond 70°."""
    curve = directional_emissivity(emissivity, np.linspace(0, 90, 361), "metal")
    peak = int(np.argmax(curve))
    assert curve[0] == pytest.approx(emissivity)
    assert np.all(np.diff(curve[: peak + 1]) > -1e-12)
    assert np.all(np.diff(curve[peak:]) < 0)
    assert peak > 280 or emissivity > 0.3
    assert curve[-1] == 0


@given(st.floats(0.3, 0.999))
def test_dielectrics_fall_beyond_brewsters_angle(emissivity):
    """Nearly level to 50° (they may rise a little for large n), then falling to 0."""
    angles = np.linspace(0, 90, 361)
    curve = directional_emissivity(emissivity, angles, "dielectric")
    brewster = np.degrees(np.arctan(dielectric_index(emissivity)))
    assert np.all(np.diff(curve[angles > brewster]) < 0)
    if emissivity > 0.9:
        assert np.all(np.diff(curve) < 1e-12)
    assert curve[-1] == 0


def test_diffuse_is_the_same_in_all_directions():
    assert directional_emissivity([[0.9], [0.0]], [0, 45, 90], "diffuse").tolist() == [[0.9] * 3, [0.0] * 3]
    assert np.isnan(directional_emissivity([1.01, -0.1, 0.9], [0, 0, 91], "diffuse")).all()
    in_value, in_angle = directional_slopes(0.9, [0.0, 45.0], "diffuse")
    assert in_value.tolist() == [1, 1]
    assert in_angle.tolist() == [0, 0]


@given(st.sampled_from(["dielectric", "metal"]), st.floats(0.02, 0.8), st.floats(0.5, 88))
def test_slopes_are_the_derivatives(kind, emissivity, angle):
    """Central differences: rounding 1e-10, curvature the rest."""
    h = 1e-6
    in_value, in_angle = directional_slopes(emissivity, angle, kind)
    value = [directional_emissivity(emissivity + s * h, angle, kind) for s in (-1, 1)]
    turned = [directional_emissivity(emissivity, angle + s * h, kind) for s in (-1, 1)]
    assert in_value == pytest.approx((value[1] - value[0]) / (2 * h), rel=1e-6, abs=1e-8)
    assert in_angle == pytest.approx((turned[1] - turned[0]) / (2 * h), rel=1e-6, abs=1e-8)


@pytest.mark.parametrize("angle", [0.0, 30.0, 60.0])
def test_slope_stays_finite_where_the_index_reaches_one(angle):
    """At ε = 1 dn/dε is infinite, the slope is not: ½ (1/c⁴ + (2 − 1/c²)²), from R ∝ (1 − ε)."""
    c = np.cos(np.radians(angle))
    in_value, in_angle = directional_slopes(1.0, angle, "dielectric")
    assert in_value == pytest.approx((1 / c**4 + (2 - 1 / c**2) ** 2) / 2, rel=1e-12)
    assert in_angle == pytest.approx(0, abs=1e-15)


def test_shapes_broadcast():
    spectrum, angles = np.array([1.2, 1.5, 3.0]), np.array([[0.0], [60.0]])
    assert fresnel_emissivity(spectrum, 0.0, angles).shape == (2, 3)
    assert hemispherical_emissivity(spectrum, 0.1).shape == (3,)
    assert directional_slopes(0.9, angles[:, 0], "metal")[0].shape == (2,)

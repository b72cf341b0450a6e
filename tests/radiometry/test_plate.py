"""Window plates against published values, a thin-film library's incoherent slab and energy conservation."""

import re

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from tmm import inc_tmm

from thermfix.radiometry.plate import plate, plate_of_internal_transmittance


@pytest.mark.rows("d_window", "d_win_")
def test_lossless_plates_at_an_angle(inputs, expected):
    """Germanium, zinc selenide, calcium fluoride (refractiveindex.info); 1e-6 for given n."""
    optics = plate(inputs["n"], 0.0, 5.0, inputs["lambda"], inputs["theta"])
    assert optics.transmittance == pytest.approx(expected, abs=1e-6)
    assert optics.transmittance + optics.reflectance == pytest.approx(1, abs=1e-12)
    given_inside = plate_of_internal_transmittance(inputs["n"], 1.0, inputs["theta"])
    assert given_inside.transmittance == pytest.approx(expected, abs=1e-6)


@pytest.mark.rows("d_window", "d_winabs_")
def test_absorbing_plates(inputs, expected):
    """Incoherent slab (Siegel & Howell; Modest), internal transmittance 0.9: 1e-7, what the printed n allows."""
    optics = plate_of_internal_transmittance(inputs["n"], inputs["tau_i"], 0.0)
    assert optics.transmittance == pytest.approx(expected, abs=1e-7)
    assert optics.reflectance == pytest.approx(inputs["rho"], abs=1e-7)
    assert optics.emissivity == pytest.approx(inputs["eps"], abs=1e-7)


@pytest.mark.rows("d_window", "d_winabs_")
def test_extinction_coefficient_and_internal_transmittance_agree(row, inputs, expected):
    """k chosen so that exp(−4πkd/λ) = 0.9; k itself shifts the faces by its square only."""
    wavelength, thickness = float(re.fullmatch(r"d_winabs_\w+_([\d.]+)", row["id"])[1]), 3.0
    k = -np.log(inputs["tau_i"]) * wavelength / (4e3 * np.pi * thickness)
    assert plate(inputs["n"], k, thickness, wavelength, 0.0).transmittance == pytest.approx(expected, abs=1e-7)


@given(st.floats(1.1, 4.2), st.floats(1e-7, 2e-3), st.floats(0, 85))
@settings(max_examples=80)
def test_thin_film_library_agrees(n, k, angle):
    """tmm's incoherent slab, mean of both polarisations.

    Its faces know that an absorbing plate is left differently from how it is entered: of order k², 3e-7 here.
    """
    optics = plate(n, k, 2.0, 10.0, angle)
    stack = [[1, n + 1j * k, 1], [np.inf, 2000.0, np.inf], ["i", "i", "i"]]
    theirs = [inc_tmm(one, *stack, np.radians(angle), 10.0) for one in "sp"]
    assert optics.transmittance == pytest.approx(np.mean([one["T"] for one in theirs]), abs=3e-7)
    assert optics.reflectance == pytest.approx(np.mean([one["R"] for one in theirs]), abs=3e-7)


@given(st.floats(1.0, 5.0), st.floats(0, 2), st.floats(0, 20), st.floats(2, 15), st.floats(0, 90))
def test_energy_is_conserved(n, k, thickness, wavelength, angle):
    optics = plate(n, k, thickness, wavelength, angle)
    for share in optics:
        assert 0 <= share <= 1 + 1e-12
    assert sum(optics) == pytest.approx(1, abs=1e-12)


@given(st.floats(1.0, 4.5), st.floats(0, 1), st.floats(0, 90))
def test_thicker_plates_pass_less(n, internal, angle):
    """Squaring the internal transmittance is doubling the thickness; both must pass no more."""
    one = plate_of_internal_transmittance(n, internal, angle)
    two = plate_of_internal_transmittance(n, internal**2, angle)
    assert two.transmittance <= one.transmittance + 1e-15
    assert sum(one) == pytest.approx(1, abs=1e-12)


def test_oblique_path_inside_is_longer():
    """With 1/cos θ': the same result from k and from the internal transmittance, away from normal incidence."""
    k = -np.log(0.8) * 10.0 / (4e3 * np.pi * 5.0)
    oblique = plate(2.4, k, 5.0, 10.0, 60.0)
    assert oblique.transmittance == pytest.approx(
        plate_of_internal_transmittance(2.4, 0.8, 60.0).transmittance, abs=1e-7
    )
    assert oblique.emissivity > plate(2.4, k, 5.0, 10.0, 0.0).emissivity


def test_grazing_view_passes_nothing():
    assert plate([4.0, 1.0], 0.0, 5.0, 10.0, 90.0).transmittance.tolist() == [0, 0]
    assert plate([4.0, 1.0], 0.0, 5.0, 10.0, 90.0).reflectance.tolist() == [1, 1]


def test_nothing_there_is_no_plate():
    assert plate(1.0, 0.0, 5.0, 10.0, 45.0).transmittance == pytest.approx(1)


@pytest.mark.parametrize(
    ("n", "k", "thickness", "wavelength", "angle"),
    [(0, 0, 1, 10, 0), (2, -1, 1, 10, 0), (2, 0, -1, 10, 0), (2, 0, 1, 0, 0), (2, 0, 1, 10, 91), (2, 0, np.inf, 10, 0)],
)
def test_impossible_plates_have_no_optics(n, k, thickness, wavelength, angle):
    assert all(np.isnan(share) for share in plate(n, k, thickness, wavelength, angle))


@pytest.mark.parametrize(("n", "internal", "angle"), [(0.9, 0.5, 0), (2, 1.1, 0), (2, -0.1, 0), (2, 0.5, -1)])
def test_impossible_internal_transmittance(n, internal, angle):
    assert all(np.isnan(share) for share in plate_of_internal_transmittance(n, internal, angle))


def test_spectra_and_angles_broadcast():
    assert plate([2.4, 2.3], [0.0, 1e-5], 3.0, [8.0, 10.0], [[0.0], [30.0], [60.0]]).emissivity.shape == (3, 2)

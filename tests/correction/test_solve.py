"""Solved inputs: the procedures of ASTM E1862, E1933, E1897 and ISO 18434-1, and how their errors are carried."""

import re
from dataclasses import replace

import numpy as np
import pytest

from thermfix.correction import Instrument, make_plan, run
from thermfix.correction.solve import solve
from thermfix.errors import PhysicsError
from thermfix.model import (
    Camera,
    Estimate,
    Frame,
    FromContact,
    FromOtherFrame,
    FromReflector,
    FromTarget,
    Rectangle,
    Region,
    SameTemperature,
    Signal,
    TemperatureUnit,
    Window,
)
from thermfix.radiometry import Band

SHAPE = (40, 60)
LEFT, RIGHT = Rectangle(2, 2, 22, 22), Rectangle(30, 2, 50, 22)
KELVIN = 273.15


def camera(band_um, **given):
    return Camera(band_um=band_um, signal=Signal(unit=TemperatureUnit.CELSIUS), noise_k=0.05, accuracy_k=2.0, **given)


def numbers(row):
    low, high = map(float, re.search(r"\(([\d.]+), ([\d.]+)\)|([\d.]+)-([\d.]+) um", row["inputs"]).group(1, 2))
    return (low, high), {name: float(value) for name, value in re.findall(r"(\w+)=([-\d.]+)", row["inputs"])}


def stored(left_c, right_c=20.0):
    """A frame of apparent temperatures: one on the left, one on the right. [°C]."""
    frame = np.full(SHAPE, right_c, np.float64)
    frame[:, :26] = left_c
    return frame


def solved(band_um, frame, values):
    instrument = Instrument(camera(band_um))
    radiance = instrument.signal.exact(values).astype(np.float32)
    return solve(instrument, frame, radiance)


@pytest.mark.rows("g_procedures", "g_eps_1", "g_eps_3", "g_eps_4", "g_eps_6")
def test_emissivity_by_contact(row, expected, scene_of):
    """ASTM E1933, ISO 18434-1; mpmath. Radiance is float32 here: 2e-6 instead of 1e-8."""
    band_um, v = numbers(row)
    region = Region(
        name="spot", shape=LEFT, emissivity=FromContact(contact_k=Estimate(value=v["t_true"] + KELVIN, u=0.5))
    )
    frame = Frame(file="x", scene=scene_of(reflected=v["t_refl"]), regions=(region,))
    found = solved(band_um, frame, stored(v["t_app"]))["region spot", "emissivity"]
    assert found.value == pytest.approx(expected, abs=2e-6)
    assert found.u > 0.5 * 0.5 * (1 - expected) / abs(v["t_true"] - v["t_refl"])


@pytest.mark.rows("g_procedures", "g_eps_tape")
def test_emissivity_by_reference_coating(row, expected, scene_of):
    """ASTM E1933, noncontact: a tape of known emissivity at the same temperature; manufactured in mpmath."""
    band_um, v = numbers(row)
    frame = Frame(
        file="x",
        scene=scene_of(reflected=v["t_refl"]),
        regions=(
            Region(name="tape", shape=RIGHT, emissivity=Estimate(value=v["eps_ref"], u=0.01)),
            Region(name="bare", shape=LEFT, emissivity=SameTemperature(region="tape")),
        ),
    )
    found = solved(band_um, frame, stored(v["t_app_sample"], v["t_app_ref"]))["region bare", "emissivity"]
    assert found.value == pytest.approx(expected, abs=1e-5)


@pytest.mark.rows("g_procedures", "g_refl")
def test_reflected_temperature_from_a_reflector(row, expected, scene_of):
    """ASTM E1862 with a reflector that is not perfect: its own emission is taken off at the air's temperature."""
    reading, rho, own = map(
        float, re.search(r"reading=([\d.]+) degC; rho=([\d.]+); t_reflector=([\d.]+)", row["inputs"]).groups()
    )
    region = Region(name="foil", shape=LEFT, emissivity=Estimate(value=1 - rho, u=0.01))
    scene = replace(scene_of(air=own), reflected_k=FromReflector(region="foil"))
    found = solved((8.0, 14.0), Frame(file="x", scene=scene, regions=(region,)), stored(reading))
    assert found["scene", "reflected_c"].value - KELVIN == pytest.approx(expected, abs=1e-4)


@pytest.mark.rows("g_procedures", "g_tau")
def test_transmittance_from_a_known_target(row, expected, scene_of):
    """ASTM E1897: a medium in front of a source of known temperature; ε = 1."""
    true, seen, medium = map(
        float, re.search(r"source t=([\d.]+); reading through=([\d.]+); t_med=([\d.]+)", row["inputs"]).groups()
    )
    target = FromTarget(region="plate", true_k=Estimate(value=true + KELVIN, u=0.3))
    region = Region(name="plate", shape=LEFT, emissivity=Estimate(value=1.0, u=0.0))
    scene = replace(scene_of(air=medium), transmittance=target)
    found = solved((8.0, 14.0), Frame(file="x", scene=scene, regions=(region,)), stored(seen))
    assert found["scene", "transmittance"].value == pytest.approx(expected, abs=2e-6)


def test_transmittance_of_a_window(scene_of):
    """The same through a window that also reflects: the known pane comes back."""
    band = Band.rectangular(8, 14)
    signal = 0.82 * band.radiance(380.0) + (1 - 0.82 - 0.06) * band.radiance(305.0) + 0.06 * band.radiance(293.15)
    pane = Window(
        transmittance=FromTarget(region="plate", true_k=Estimate(value=380.0, u=0.3)),
        reflectance=Estimate(value=0.06, u=0.01),
        temperature_k=Estimate(value=305.0, u=1.0),
    )
    region = Region(name="plate", shape=LEFT, emissivity=Estimate(value=1.0, u=0.0))
    frame = Frame(file="x", scene=replace(scene_of(), window=pane), regions=(region,))
    found = solved((8.0, 14.0), frame, stored(float(band.temperature(signal)) - KELVIN))
    assert found["window", "transmittance"].value == pytest.approx(0.82, abs=2e-6)


def contact_frame(scene, true_c, u=0.5):
    spot = Region(name="spot", shape=LEFT, emissivity=FromContact(contact_k=Estimate(value=true_c + KELVIN, u=u)))
    return Frame(file="spot.npy", scene=scene, regions=(spot,))


def test_refused_where_surface_and_surroundings_are_too_close(scene_of):
    """A contact at 25 °C before 20 °C surroundings: refused, saying how far apart they must be."""
    with pytest.raises(PhysicsError, match="too much to be of use") as caught:
        solved((8.0, 14.0), contact_frame(scene_of(reflected=20.0), 25.0), stored(23.0))
    assert "5.0 K from" in caught.value.hint
    assert int(re.search(r"about (\d+) K", caught.value.hint).group(1)) >= 20


def test_refused_where_it_comes_out_impossible(scene_of):
    """The camera sees more than the contact allows: ε above 1 is no emissivity."""
    with pytest.raises(PhysicsError, match="must lie in 0 to 1"):
        solved((8.0, 14.0), contact_frame(scene_of(reflected=20.0), 80.0), stored(85.0))


def test_refused_where_two_solves_hang_on_each_other(scene_of):
    frame = Frame(
        file="x",
        scene=scene_of(),
        regions=(
            Region(name="a", shape=LEFT, emissivity=SameTemperature(region="b")),
            Region(name="b", shape=RIGHT, emissivity=SameTemperature(region="a")),
        ),
    )
    with pytest.raises(PhysicsError, match="hang on each other"):
        solved((8.0, 14.0), frame, stored(50.0, 60.0))


def test_contact_comes_back_as_the_reading(scene_of):
    """A region whose emissivity was solved by contact reads the contact's temperature, no more certain than it.

    The camera's error cancels: it went into the emissivity with the opposite sign.
    """
    instrument = Instrument(camera((8.0, 14.0)))
    frame = contact_frame(scene_of(reflected=20.0), 80.0, u=0.5)
    values = stored(65.0)
    found = solve(instrument, frame, instrument.signal.radiance(values))
    reading = run(make_plan(instrument, frame, SHAPE, solved=found), values).readings[0]
    assert reading.surface_mean_k - KELVIN == pytest.approx(80.0, abs=1e-3)
    assert reading.u_k == pytest.approx(0.5, abs=0.02)


def test_a_solved_reflected_temperature_brings_its_doubt(scene_of):
    """The same scene once with the reflected temperature given, once from foil: the budget of the second is wider."""
    instrument = Instrument(camera((8.0, 14.0)))
    target = Region(name="bar", shape=RIGHT, emissivity=Estimate(value=0.3, u=0.0))
    values = stored(30.0, 45.0)
    given = replace(scene_of(reflected=30.0), reflected_k=Estimate(value=30.0 + KELVIN, u=0.0))
    plain = run(make_plan(instrument, Frame(file="x", scene=given, regions=(target,)), SHAPE), values).readings[0]
    from_foil = Frame(
        file="x",
        scene=replace(given, reflected_k=FromReflector(region="foil")),
        regions=(Region(name="foil", shape=LEFT), target),
    )
    found = solve(instrument, from_foil, instrument.signal.radiance(values))
    foil, doubtful = run(make_plan(instrument, from_foil, SHAPE, solved=found), values).readings
    # A perfect mirror has no reading of its own, rather than one by the scene's emissivity.
    assert foil.surface_mean_k is None
    assert doubtful.surface_mean_k == pytest.approx(plain.surface_mean_k, abs=0.01)
    # The camera's error is common to foil and target: it raises both, so it is not simply added on top.
    apart = np.hypot(plain.u_k, 0.7 / 0.3 * found["scene", "reflected_c"].u)
    assert 0 < doubtful.u_k < apart


def two_frame_case(scene_of, warm_c):
    """One plate at 56 °C, ε 0.35, before 20 °C and before warmer surroundings."""
    band = Band.rectangular(8, 14)
    frames = []
    for name, reflected in (("cool", 20.0), ("warm", warm_c)):
        signal = 0.35 * band.radiance(56 + KELVIN) + 0.65 * band.radiance(reflected + KELVIN)
        how = FromOtherFrame(file="warm") if name == "cool" else Estimate(value=0.9, u=0.05)
        plate = Region(name="plate", shape=LEFT, emissivity=how)
        scene = scene_of(reflected=reflected, transmittance=1.0)
        frames.append(
            (Frame(file=name, scene=scene, regions=(plate,)), stored(float(band.temperature(signal)) - KELVIN))
        )
    return frames


def test_emissivity_and_temperature_from_two_frames(scene_of):
    """Two reflected temperatures 40 K apart tell emission from reflection; both unknowns come back."""
    (cool, cool_c), (warm, warm_c) = two_frame_case(scene_of, 60.0)
    instrument = Instrument(camera((8.0, 14.0)))
    others = {"warm": (warm, instrument.signal.radiance(warm_c))}
    found = solve(instrument, cool, instrument.signal.radiance(cool_c), None, others)
    emissivity = found["region plate", "emissivity"]
    assert emissivity.value == pytest.approx(0.35, abs=1e-4)
    assert 0.001 < emissivity.u < 0.1
    assert "scene of warm: reflected_c" in {one.name for one, _ in emissivity.parts}
    reading = run(make_plan(instrument, cool, SHAPE, solved=found), cool_c).readings[0]
    assert reading.surface_mean_k - KELVIN == pytest.approx(56.0, abs=0.05)


def test_two_frames_alike_are_refused(scene_of):
    (cool, cool_c), (warm, warm_c) = two_frame_case(scene_of, 20.5)
    instrument = Instrument(camera((8.0, 14.0)))
    others = {"warm": (warm, instrument.signal.radiance(warm_c))}
    with pytest.raises(PhysicsError):
        solve(instrument, cool, instrument.signal.radiance(cool_c), None, others)

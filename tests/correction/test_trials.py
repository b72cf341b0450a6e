"""Monte Carlo of a reading against published runs, and against first order where that holds."""

import re

import numpy as np
import pytest

from thermfix.correction.trials import ReadingModel, is_curved, try_many
from thermfix.uncertainty.draws import RandomInput
from thermfix.uncertainty.monte_carlo import run

KELVIN = 273.15


def model_of(row, layer_of):
    text = row["inputs"]
    v = {name: float(value) for name, value in re.findall(r"(\w+)=([-+\d.]+)", text)}
    u = dict(zip(("app", "eps", "refl"), map(float, re.findall(r" u=([\d.]+)", text)), strict=True))
    shape = "rectangular" if "rect;" in text else "normal"
    layer = layer_of((8.0, 14.0), emissivity=v["eps"], reflected=v["t_refl"], transmittance=1.0)
    received = float(layer.instrument.band.radiance(v["t_app"] + KELVIN))
    model = ReadingModel(layer, received)
    of_accuracy = float(layer.instrument.accuracy_u_k(v["t_app"] + KELVIN))
    inputs = {
        "scene: emissivity": RandomInput(value=0.0, u=u["eps"], distribution=shape),
        "scene: reflected_c": RandomInput(value=0.0, u=u["refl"]),
        "camera: accuracy": RandomInput(value=0.0, u=u["app"] / of_accuracy),
    }
    return model, inputs, v


@pytest.mark.rows(
    "g_radiometric_mc", "g_mc_paint95_mc", "g_mc_oxid70_mc", "g_mc_bare30_mc", "g_mc_bare10_mc", "g_mc_near_amb_mc"
)
def test_published_runs(row, expected, layer_of):
    """Four million trials in the source, 2e5 here: 1 % of the source plus 1 % of ours, of the sd."""
    model, inputs, v = model_of(row, layer_of)
    found = run(model, inputs, seed=7, trials=200_000)
    q_low, q_high, mean = (
        float(re.search(rf"{name}=([\d.]+)", row["inputs"]).group(1)) for name in ("q2.5", "q97.5", "mean")
    )
    assert found.sd == pytest.approx(expected, rel=0.02)
    assert found.mean - KELVIN == pytest.approx(mean, abs=0.03 * expected)
    assert found.interval[0] - KELVIN == pytest.approx(q_low, abs=0.05 * expected)
    assert found.interval[1] - KELVIN == pytest.approx(q_high, abs=0.08 * expected)
    assert float(model({})[0]) - KELVIN == pytest.approx(
        v["t_app"] if v["eps"] == 1 else float(re.search(r"nominal t_obj=(\d+)", row["inputs"]).group(1)), abs=0.01
    )


def test_first_order_agrees_where_the_correction_is_straight(layer_of):
    """Paint, warm, every input of air and window included: the sd is the first-order u within 2 %."""
    layer = layer_of((7.5, 14.0), emissivity=0.95, distance_m=10.0)
    surface_k = 340.0
    band = layer.instrument.band
    received = float(layer.setting.emission @ band.planck_at(surface_k) + layer.setting.rest)
    model = ReadingModel(layer, received)
    assert float(model({})[0]) == pytest.approx(surface_k, abs=1e-3)
    assert not is_curved(model)
    knot = int(np.abs(np.geomspace(200, 3400, 320) - surface_k).argmin())
    u = float(np.hypot(layer.shared_u_k, layer.noise_u_k)[0, knot])
    trials = try_many(model, surface_k, u)
    assert trials.found.sd == pytest.approx(u, rel=0.02)
    assert trials.first_order_holds


def test_low_emissivity_is_curved_and_said_so(layer_of):
    """ε 0.08 ± 0.02 before near surroundings: y ± U promises too much."""
    layer = layer_of((8.0, 14.0), emissivity=0.08, reflected=20.0, transmittance=1.0)
    surface_k = 400.0
    received = float(layer.setting.emission @ layer.instrument.band.planck_at(surface_k) + layer.setting.rest)
    model = ReadingModel(layer, received)
    assert is_curved(model)
    knot = int(np.abs(np.geomspace(200, 3400, 320) - surface_k).argmin())
    trials = try_many(model, surface_k, float(layer.shared_u_k[0, knot]))
    assert not trials.first_order_holds
    assert trials.found.interval[1] - surface_k > surface_k - trials.found.interval[0]

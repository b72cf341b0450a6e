"""record.json: every input and default used, so that each figure can be traced."""

import platform
from collections.abc import Mapping, Sequence
from datetime import UTC, datetime
from importlib.metadata import version
from typing import Any

from thermfix.correction import Plan
from thermfix.correction.defaults import Input
from thermfix.correction.layer import REFERENCE_K, Layer
from thermfix.errors import ThermfixError
from thermfix.inspection import to_mapping
from thermfix.model import Inspection
from thermfix.quantities import QUANTITIES, ZERO_C_K
from thermfix.radiometry import planck

_LIBRARIES = ("thermfix", "numpy", "scipy", "tifffile", "pillow")
_KELVIN_KEYS = {key for key, row in QUANTITIES.items() if row.unit == "°C"}


def record_of(
    inspection: Inspection,
    plans: Mapping[str, Plan],
    sha256: Mapping[str, str],
    failed: Sequence[tuple[str, ThermfixError]],
) -> dict[str, Any]:
    """Return the record of a run: same input, same record but for ``written``."""
    return {
        "format": "thermfix-record/1",
        "written": datetime.now(UTC).isoformat(timespec="seconds"),
        "versions": {"python": platform.python_version(), **{name: version(name) for name in _LIBRARIES}},
        "constants": {
            "h_j_s": planck.PLANCK_J_S,
            "c_m_s": planck.LIGHT_M_S,
            "k_j_k": planck.BOLTZMANN_J_K,
            "c2_um_k": planck.C2_UM_K,
        },
        "inspection": to_mapping(inspection),
        "camera": _camera(next(iter(plans.values()))),
        "frames": [_frame(name, plan, sha256[name]) for name, plan in plans.items()],
        "not_read": [{"file": name, "why": str(error)} for name, error in failed],
    }


def _camera(plan: Plan) -> dict[str, Any]:
    instrument = plan.instrument
    return {
        "band_um": [instrument.band.lo_um, instrument.band.hi_um],
        "noise_k": instrument.noise_k,
        "noise_assumed": instrument.noise_assumed,
        "accuracy_k": instrument.limit_k,
        "accuracy_rel": instrument.limit_rel,
        "accuracy_assumed": instrument.accuracy_assumed,
    }


def _frame(name: str, plan: Plan, sha256: str) -> dict[str, Any]:
    return {
        "file": name,
        "sha256": sha256,
        "shape": list(plan.shape),
        "background": _layer(plan.background),
        "regions": [
            {
                "region": one.region.name,
                "material": one.region.material or "",
                "pixels": int(one.x.size),
                **_layer(one.layer),
                "cautions": [caution.code for caution in one.cautions],
            }
            for one in plan.regions
        ],
    }


def _layer(layer: Layer) -> dict[str, Any]:
    """Return the coefficients of a layer (their mean over its pixels) and the inputs behind them."""
    return {
        "a": float(layer.a.mean(dtype=float)),
        "b_w_m2_sr": float(layer.b.mean(dtype=float)),
        "coefficients_at_c": REFERENCE_K - ZERO_C_K,
        "view_angle_deg": layer.geometry.angle_mean_deg,
        "distance_m": layer.geometry.distance_mean_m,
        "path_clear": layer.circumstances.path.clear,
        "inputs": [_input(one) for one in layer.inputs if one.origin != "camera"],
    }


def _input(one: Input) -> dict[str, Any]:
    kelvin = one.key in _KELVIN_KEYS
    return {
        "key": one.key,
        "origin": one.origin,
        "value": one.value - ZERO_C_K if kelvin else one.value,
        "unit": QUANTITIES[one.key].unit if one.key in QUANTITIES else "1",
        "u": one.u,
        "value_assumed": one.assumed_value,
        "u_assumed": one.assumed_u,
    }

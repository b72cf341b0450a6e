"""record.json: every input and default used, so that each figure can be traced."""

import platform
from collections.abc import Mapping, Sequence
from dataclasses import asdict, dataclass
from datetime import UTC, datetime
from importlib.metadata import version
from typing import Any

from thermfix.correction import Plan, Reading
from thermfix.correction.defaults import Input
from thermfix.correction.layer import REFERENCE_K, Layer
from thermfix.errors import ThermfixError
from thermfix.inspection import to_mapping
from thermfix.model import Inspection
from thermfix.quantities import QUANTITIES, ZERO_C_K
from thermfix.radiometry import planck

_LIBRARIES = ("thermfix", "numpy", "scipy", "tifffile", "pillow")
_KELVIN_KEYS = {key for key, row in QUANTITIES.items() if row.unit == "°C"}


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Used:
    """A frame file that was corrected, with the plan it was corrected by."""

    file: str
    sha256: str
    pages: int
    plan: Plan


def record_of(
    inspection: Inspection,
    used: Sequence[Used],
    rows: Sequence[tuple[str, int, Reading]],
    failed: Sequence[tuple[str, ThermfixError]],
) -> dict[str, Any]:
    """Return the record of a run: same input, same record but for ``written``.

    ``rows`` are (frame, page, reading); the budgets among them are kept.
    """
    readings: dict[tuple[str, str], Reading] = {}
    for file, _, reading in rows:
        readings.setdefault((file, reading.region), reading)
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
        "camera": _camera(used[0].plan),
        "frames": [_frame(one, readings) for one in used],
        "not_corrected": [{"file": name, "why": str(error)} for name, error in failed],
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


def _frame(used: Used, readings: Mapping[tuple[str, str], Reading]) -> dict[str, Any]:
    return {
        "file": used.file,
        "sha256": used.sha256,
        "pages": used.pages,
        "shape": list(used.plan.shape),
        "background": _layer(used.plan.background),
        "regions": [
            {
                "region": one.region.name,
                "material": one.region.material or "",
                "pixels": int(one.x.size),
                **_layer(one.layer),
                **_found(readings.get((used.file, one.region.name))),
            }
            for one in used.plan.regions
        ],
    }


def _found(reading: Reading | None) -> dict[str, Any]:
    """Return the budget and cautions of a region's first page, and the Monte Carlo run where there was one."""
    if reading is None:
        return {}
    found: dict[str, Any] = {"cautions": [asdict(one) for one in reading.cautions]}
    if reading.budget is not None:
        found["budget"] = [
            {"input": row.name, "contribution_k": row.contribution_k, "share_pct": row.share_pct}
            for row in reading.budget.rows
        ]
        found["first_order_u_k"] = reading.budget.u_k
    if reading.trials is not None:
        run = reading.trials.found
        found["monte_carlo"] = {
            "mean_c": run.mean - ZERO_C_K,
            "sd_k": run.sd,
            "interval_c": [end - ZERO_C_K for end in run.interval],
            "shortest_interval_c": [end - ZERO_C_K for end in run.shortest],
            "trials": run.trials,
            "invalid_share": run.invalid_share,
            "first_order_holds": reading.trials.first_order_holds,
        }
    return found


def _layer(layer: Layer) -> dict[str, Any]:
    """Return the coefficients of a layer (their mean over its pixels) and the inputs behind them."""
    return {
        "a": float(layer.a.mean(dtype=float)),
        "b_w_m2_sr": float(layer.b.mean(dtype=float)),
        "coefficients_at_c": REFERENCE_K - ZERO_C_K,
        "view_angle_deg": layer.geometry.angle_mean_deg,
        "distance_m": layer.geometry.distance_mean_m,
        "path_clear": layer.circumstances.path.clear,
        "inputs": [_input(term.input) for term in layer.setting.terms],
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
        **({"solved_from": [part.name for part, _ in one.parts]} if one.parts else {}),
    }

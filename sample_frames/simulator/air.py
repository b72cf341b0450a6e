"""Transmittance of a path through air, from the project's table of absorption."""

from dataclasses import dataclass
from functools import cache
from pathlib import Path

import numpy as np

from simulator.radiation import GRID_UM, ZERO_C_K, Array

TABLE = Path(__file__).parents[2] / "thermfix" / "radiometry" / "data" / "air_absorption.csv"
"""Data only: wavenumber_cm1, log10_Aw, log10_Ac, log10_Ao, a_o, log10_ks, T0_k, log10_kf, log10_kn."""

# Exponents a, n, m of each region of wavenumber, and the first wavenumber of the next region.
_WATER_EDGES = (1002.5, 1642.5, 2532.5, 3422.5)
_WATER = np.array(
    [
        [0.5299, 0.5416, 0.5479, 0.5495, 0.5464],
        [1.1406, 0.9834, 1.0443, 0.9681, 0.9555],
        [-2.6343, -2.5294, -2.4359, -1.9537, -1.5378],
    ]
)
_CO2_EDGES = (837.5, 1600.0, 2900.0, 3757.5)
_CO2 = np.array(
    [
        [0.6176, 0.6810, 0.6033, 0.6146, 0.6513],
        [0.6705, 0.7038, 0.7258, 0.6982, 0.8867],
        [-2.2560, -5.0768, -1.6740, -1.8107, -0.5327],
    ]
)


@cache
def _table() -> Array:
    lines = [line for line in TABLE.read_text(encoding="utf-8").splitlines() if not line.startswith("#")]
    return np.loadtxt(lines[1:], delimiter=",").T


@dataclass(frozen=True, slots=True, kw_only=True)
class Air:
    """The air of a scene."""

    celsius: float
    humidity_pct: float
    pressure_hpa: float = 1013.25
    co2_ppm: float = 420.0

    def transmittance(self, distance_m: float) -> Array:
        """Return τ at the grid of wavelengths for a path of this length. [1], shape (1300,)."""
        nu, lg_w, lg_c, lg_o, a_o, lg_s, t0, lg_f, lg_n = _table()
        kelvin = self.celsius + ZERO_C_K
        p, t, km = self.pressure_hpa / 1013.25, ZERO_C_K / kelvin, distance_m / 1000
        water = self.humidity_pct / 100 * t * np.exp(18.9766 - 14.9595 * t - 2.43882 * t**2)  # g/m³
        a_w, n_w, m_w = _WATER[:, np.searchsorted(_WATER_EDGES, nu, side="right")]
        a_c, n_c, m_c = _CO2[:, np.searchsorted(_CO2_EDGES, nu, side="right")]
        molecules = 3.3429e21 * water
        share, dry = molecules / 2.6868e24, p * t
        self_part = 10**lg_s * np.exp(t0 * (1 / kelvin - 1 / 296)) * molecules * share
        foreign_part = 10**lg_f * molecules * (dry - share)
        depth = (
            (10**lg_w * 0.1 * water * km * p**n_w * t**m_w) ** a_w
            + (10**lg_c * 0.0999338 * self.co2_ppm * km * p ** (1 + n_c) * t ** (1 + m_c)) ** a_c
            + 10 ** (lg_o * a_o) * np.exp(a_o * (np.log(km) + 1.7 * np.log(p) + 0.8 * np.log(t)))
            + (self_part + foreign_part) * km / (273.15 / 296)
            + 10**lg_n * 0.781 * dry * p * np.sqrt(t) * km
        )
        return np.asarray(np.interp(10_000 / GRID_UM, nu, np.exp(-depth)))

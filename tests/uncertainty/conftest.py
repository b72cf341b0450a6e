"""One surface seen through clear air, as the rows of g_radiometric_mc describe it, with its own quadrature."""

import re
from dataclasses import dataclass

import numpy as np
import pytest

from thermfix.uncertainty.draws import RandomInput

C1L, C2 = 1.191042972397188e8, 1.438776877503933e4  # W µm⁴ m⁻² sr⁻¹, µm K, CODATA 2018
ZERO_C_K = 273.15


class Quadrature:
    """In-band radiance by 40 Gauss–Legendre nodes, and its inverse by interpolation of ln L over a fine table."""

    def __init__(self, lo_um, hi_um):
        x, w = np.polynomial.legendre.leggauss(40)
        self.um = (hi_um + lo_um) / 2 + (hi_um - lo_um) / 2 * x
        self.weight = w * (hi_um - lo_um) / 2
        self.table_k = np.linspace(150, 1200, 40_000)
        self.ln_table = np.log(self.radiance(self.table_k))

    def radiance(self, kelvin):
        kelvin = np.asarray(kelvin, dtype=float)[..., None]
        return (C1L / self.um**5 / np.expm1(C2 / (self.um * kelvin))) @ self.weight

    def slope(self, kelvin):
        kelvin = np.asarray(kelvin, dtype=float)[..., None]
        x = C2 / (self.um * kelvin)
        return (C1L / self.um**5 * x / kelvin / np.expm1(x) / -np.expm1(-x)) @ self.weight

    def fast_radiance(self, kelvin):
        return np.exp(np.interp(kelvin, self.table_k, self.ln_table, left=np.nan, right=np.nan))

    def temperature(self, radiance):
        with np.errstate(invalid="ignore", divide="ignore"):
            return np.interp(np.log(radiance), self.ln_table, self.table_k, left=np.nan, right=np.nan)


@dataclass
class Case:
    """Apparent and reflected temperatures [K], emissivity, with standard uncertainties, and the inverse model."""

    band: Quadrature
    apparent: RandomInput
    emissivity: RandomInput
    reflected: RandomInput

    @property
    def inputs(self):
        return {"apparent": self.apparent, "emissivity": self.emissivity, "reflected": self.reflected}

    def surface_k(self, samples):
        e = samples["emissivity"]
        own = self.band.fast_radiance(samples["apparent"]) - (1 - e) * self.band.fast_radiance(samples["reflected"])
        return self.band.temperature(own / e)

    @property
    def nominal_k(self):
        return float(self.surface_k({name: np.array([one.value]) for name, one in self.inputs.items()})[0])

    @property
    def sensitivities(self):
        """dT/d(apparent, emissivity, reflected), analytic, from the quadrature."""
        e = self.emissivity.value
        received, back = self.band.radiance(self.apparent.value), self.band.radiance(self.reflected.value)
        own = (received - (1 - e) * back) / e
        scale = e * self.band.slope(self.nominal_k)
        return (
            np.array(
                [self.band.slope(self.apparent.value), back - own, -(1 - e) * self.band.slope(self.reflected.value)]
            )
            / scale
        )

    @property
    def u(self):
        return np.array([one.u for one in self.inputs.values()])

    @property
    def first_order_u(self):
        return float(np.linalg.norm(self.sensitivities * self.u))

    def of_points(self, points):
        return self.surface_k(dict(zip(self.inputs, points.T, strict=True)))


@pytest.fixture(scope="session")
def band_8_14():
    return Quadrature(8.0, 14.0)


@pytest.fixture
def case_of(band_8_14):
    """Make a case from t_app °C, u, ε, u, distribution, t_refl °C, u. A normal emissivity is cut off at 0 and 1."""

    def make(app_c, u_app, e, u_e, kind, refl_c, u_refl):
        shape = {"rect": "rectangular", "norm": "normal"}[kind]
        return Case(
            band_8_14,
            RandomInput(value=app_c + ZERO_C_K, u=u_app),
            RandomInput(value=e, u=u_e, distribution=shape, low=0.0, high=1.0),
            RandomInput(value=refl_c + ZERO_C_K, u=u_refl),
        )

    return make


@pytest.fixture
def row_case(row, case_of):
    """Return the case of a row, and the Monte Carlo figures its inputs cell states."""
    text = row["inputs"]
    assert "8-14 um" in text
    number = r"([-\d.e+]+)"
    found = re.search(
        rf"t_app={number} degC u={number}; eps={number} u={number} (\w+); t_refl={number} u={number}; tau=1;", text
    )
    assert found, text
    kind = found.group(5)
    app, u_app, e, u_e, refl, u_refl = (float(found.group(place)) for place in (1, 2, 3, 4, 6, 7))
    stated = {key: float(value) for key, value in re.findall(rf"(t_obj|mean|q2\.5|q97\.5|invalid)={number}", text)}
    return case_of(app, u_app, e, u_e, kind, refl, u_refl), stated


@pytest.fixture
def faint_case(case_of, band_8_14):
    """ε 0.15 ± 0.05 (rectangular) at 120 °C before 23 °C: what first order understates (25 K against 31 K)."""
    received = 0.15 * band_8_14.radiance(393.15) + 0.85 * band_8_14.radiance(296.15)
    apparent = float(band_8_14.temperature(received)) - ZERO_C_K
    return case_of(apparent, 0.5, 0.15, 0.05, "rect", 23.0, 2.0)

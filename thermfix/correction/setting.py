"""The measurement equation of one surface at one angle and distance, with how it goes with every input.

Received radiance is ``emission @ B(T) + rest`` with B the blackbody's spectral radiance at the band's
nodes. Each input p adds a term: ``∂L/∂p = gain @ B(T) + offset`` at a fixed surface temperature T.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.correction.defaults import Input
from thermfix.correction.path import AirPath, WindowPane
from thermfix.correction.surface import Surface
from thermfix.radiometry.band import Band
from thermfix.radiometry.planck import spectral_radiance, spectral_radiance_slope

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Term:
    """How the received radiance goes with one input: ``gain`` has shape (K,), or is None where it is 0."""

    input: Input
    gain: Array | None
    offset: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Mirrored:
    """What a surface mirrors: the surroundings and sources (temperature, view factor)."""

    surroundings: Input
    sources: Sequence[tuple[Input, Input]] = ()

    @property
    def rest(self) -> float:
        """Share of the hemisphere that no source fills."""
        return 1.0 - sum(share.value for _, share in self.sources)

    def apparent_k(self, band: Band) -> float:
        """Return the reflected apparent temperature of surroundings and sources together. [K]."""
        total = self.rest * float(band.radiance(self.surroundings.value))
        total += sum(share.value * float(band.radiance(source.value)) for source, share in self.sources)
        # Outside −60…3000 °C the surroundings' own temperature serves: only a comparison hangs on it.
        found = float(band.temperature(total))
        return found if np.isfinite(found) else self.surroundings.value


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Tilt:
    """An input that turns the view angle: ``slope`` gives dθ/d(input) at a view angle. [deg per unit]."""

    input: Input
    slope: Callable[[float], float] = lambda angle_deg: 1.0


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Setting:
    """The equation at one angle and distance. Shapes (K,); radiances in W m⁻² sr⁻¹."""

    emission: Array
    rest: float
    terms: tuple[Term, ...]
    emissivity: Array
    air: Array


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Circumstances:
    """Everything about one region but its angle and distance."""

    band: Band
    surface: Surface
    mirrored: Mirrored
    path: AirPath
    window: WindowPane
    tilts: tuple[Tilt, ...]

    def at(self, angle_deg: float, distance_m: float | None) -> Setting:
        """Return the equation at a view angle [deg] and a distance [m] (None: a clear path)."""
        weights = self.band.weights
        emissivity = self._spread(self.surface.emissivity(np.array([angle_deg])))
        air = self.path.transmittance(distance_m)
        front = weights * self.window.transmittance * air
        reflected, b_air = self._reflected(), self._b(self.path.air)
        rest = front * (1 - emissivity) @ reflected + self._behind(air)
        terms = [
            *self._surface_terms(angle_deg, front, reflected),
            *self._mirrored_terms(front * (1 - emissivity)),
            *self._air_terms(distance_m, emissivity, reflected, b_air),
            *self._window_terms(air, emissivity, reflected, b_air),
        ]
        return Setting(
            emission=front * emissivity, rest=float(rest), terms=_merged(terms), emissivity=emissivity, air=air
        )

    def coefficients(self, angles_deg: Array, distances_m: Sequence[float | None], at_k: float) -> tuple[Array, Array]:
        """Return the share g of the surface's in-band radiance that arrives, and all the rest that does.

        Parameters
        ----------
        angles_deg : ndarray, shape (J,)
            View angles. [deg].
        distances_m : sequence of M distances [m] (None: a clear path).
        at_k : float
            Temperature at which the band-effective share is taken. [K].

        Returns
        -------
        g, rest : ndarray, shape (J, M)
            ``L_meas = g L(T_s) + rest`` at ``at_k``. [1] and [W m⁻² sr⁻¹].
        """
        emissivity = self.surface.emissivity(angles_deg)
        if emissivity.shape[1] == 1:
            emissivity = np.repeat(emissivity, self.band.nodes_um.size, axis=1)
        air = np.stack([self.path.transmittance(one) for one in distances_m])
        front = self.band.weights * self.window.transmittance * air
        total = self.band.weights_at(at_k).sum()
        share = emissivity @ (front * spectral_radiance(self.band.nodes_um, at_k)).T / total
        return share, (1 - emissivity) @ (front * self._reflected()).T + self._behind(air)

    def _behind(self, air: Array) -> Array:
        """Return what the air and the window add, for transmittances of shape (..., K): shape (...)."""
        weights, window = self.band.weights, self.window
        rest = (weights * window.transmittance * (1 - air)) @ self._b(self.path.air)
        if window.temperature is not None:
            emitted = weights * (1 - window.transmittance - window.reflectance)
            rest = rest + emitted @ self._b(window.temperature)
            rest = rest + weights * window.reflectance @ self._b(window.camera_side)
        return np.asarray(rest)

    def _spread(self, spectrum: Array) -> Array:
        """Return one angle's spectrum of shape (1, K) or (1, 1) as (K,)."""
        return np.broadcast_to(spectrum[0], self.band.nodes_um.shape)

    def _b(self, temperature: Input) -> Array:
        return spectral_radiance(self.band.nodes_um, temperature.value)

    def _b_slope(self, temperature: Input) -> Array:
        return spectral_radiance_slope(self.band.nodes_um, temperature.value)

    def _reflected(self) -> Array:
        total = self.mirrored.rest * self._b(self.mirrored.surroundings)
        for source, share in self.mirrored.sources:
            total = total + share.value * self._b(source)
        return total

    def _surface_terms(self, angle_deg: float, front: Array, reflected: Array) -> list[Term]:
        angle = np.array([angle_deg])
        slopes = [(self.surface.value, self.surface.slope_in_value(angle))]
        in_angle = self.surface.slope_in_angle(angle)
        slopes += [(tilt.input, in_angle * tilt.slope(angle_deg)) for tilt in self.tilts if tilt.input.u > 0]
        gains = [(one, front * self._spread(slope)) for one, slope in slopes]
        return [Term(input=one, gain=gain, offset=float(-gain @ reflected)) for one, gain in gains]

    def _mirrored_terms(self, mirror: Array) -> list[Term]:
        surroundings = self.mirrored.surroundings
        terms = [
            Term(input=surroundings, gain=None, offset=float(self.mirrored.rest * mirror @ self._b_slope(surroundings)))
        ]
        for source, share in self.mirrored.sources:
            terms.append(Term(input=source, gain=None, offset=float(share.value * mirror @ self._b_slope(source))))
            contrast = self._b(source) - self._b(surroundings)
            terms.append(Term(input=share, gain=None, offset=float(mirror @ contrast)))
        return terms

    def _air_terms(self, distance_m: float | None, emissivity: Array, reflected: Array, b_air: Array) -> list[Term]:
        after = self.band.weights * self.window.transmittance
        air = self.path.transmittance(distance_m)
        terms = [Term(input=self.path.air, gain=None, offset=float(after * (1 - air) @ self._b_slope(self.path.air)))]
        for one, slope in self.path.slopes(distance_m):
            through = after * slope
            behind = through @ ((1 - emissivity) * reflected - b_air)
            terms.append(Term(input=one, gain=through * emissivity, offset=float(behind)))
        return terms

    def _window_terms(self, air: Array, emissivity: Array, reflected: Array, b_air: Array) -> list[Term]:
        window = self.window
        if window.tau is None or window.rho is None or window.temperature is None:
            return []
        weights = self.band.weights
        b_window, b_side = self._b(window.temperature), self._b(window.camera_side)
        behind = air * (1 - emissivity) * reflected + (1 - air) * b_air - b_window
        emitted = weights * (1 - window.transmittance - window.reflectance)
        side = self.path.air if window.camera_side_is_air else window.camera_side
        return [
            Term(input=window.tau, gain=weights * air * emissivity, offset=float(weights @ behind)),
            Term(input=window.rho, gain=None, offset=float(weights @ (b_side - b_window))),
            Term(input=window.temperature, gain=None, offset=float(emitted @ self._b_slope(window.temperature))),
            Term(input=side, gain=None, offset=float(weights * window.reflectance @ self._b_slope(window.camera_side))),
        ]


def _merged(terms: Sequence[Term]) -> tuple[Term, ...]:
    """Return one term per input: the same input may enter at several places of the chain."""
    merged: dict[tuple[str, str], Term] = {}
    for term in terms:
        key = (term.input.origin, term.input.key)
        if key in merged:
            old = merged[key]
            gain = term.gain if old.gain is None else old.gain if term.gain is None else old.gain + term.gain
            term = Term(input=old.input, gain=gain, offset=old.offset + term.offset)
        merged[key] = term
    return tuple(merged.values())

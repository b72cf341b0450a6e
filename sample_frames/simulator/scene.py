"""A scene of bodies in front of a camera, and the in-band radiance that each point of the image sends to it."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray
from scipy.ndimage import gaussian_filter

from simulator.air import Air
from simulator.outlines import Outline
from simulator.radiation import ZERO_C_K, Array, in_band, planck
from simulator.surfaces import Emissivity

Field = float | Callable[[Array, Array], Array]
"""One number, or a number at every point of the image."""

_CHUNK = 65_536
_TEMPERATURES, _COSINES, _DISTANCES = 8, 24, 3


@dataclass(frozen=True, slots=True, kw_only=True)
class Body:
    """One thing in view. ``reflected`` holds (°C, view factor) of what it mirrors besides the scene's surroundings."""

    name: str
    outline: Outline
    celsius: Field
    emissivity: Emissivity
    reflected: tuple[tuple[float, float], ...] = ()
    cosine: Field = 1.0
    distance_m: Field | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Pane:
    """A window in front of the camera, grey. Toward the camera it mirrors bodies of the air's temperature."""

    transmittance: float
    reflectance: float
    celsius: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Scene:
    """Bodies from back to front; a later one hides those before it."""

    frame: tuple[int, int]
    bodies: tuple[Body, ...]
    air: Air
    distance_m: float
    reflected_c: float
    pane: Pane | None = None
    fine: int = 4


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Picture:
    """What the camera is shown. ``radiance`` has the frame's shape; the others are ``fine`` times finer each way."""

    scene: Scene
    radiance: Array
    celsius: Array
    owner: NDArray[np.uint8]


def show(scene: Scene, blur_px: float) -> Picture:
    """Return the picture of a scene: radiance on a fine grid, spread by the optics, summed over each pixel's square."""
    rows, columns = scene.frame
    x, y = points(scene.frame, scene.fine)
    shape = (rows * scene.fine, columns * scene.fine)
    sent, celsius, owner = np.full(shape, np.nan), np.full(shape, np.nan), np.zeros(shape, np.uint8)
    for number, body in enumerate(scene.bodies):
        inside = np.broadcast_to(body.outline(x, y), shape)
        owner[inside] = number
        celsius[inside] = _at(body.celsius, x, y, shape)[inside]
    for number, body in enumerate(scene.bodies):
        mine = owner == number
        if mine.any():
            distance = scene.distance_m if body.distance_m is None else body.distance_m
            fields = (_at(body.cosine, x, y, shape)[mine], _at(distance, x, y, shape)[mine])
            sent[mine] = _received(scene, body, celsius[mine] + ZERO_C_K, *fields)
    spread = gaussian_filter(sent, blur_px * scene.fine, mode="nearest", truncate=5.0)
    radiance = spread.reshape(rows, scene.fine, columns, scene.fine).mean(axis=(1, 3))
    return Picture(scene=scene, radiance=radiance, celsius=celsius, owner=owner)


def points(frame: tuple[int, int], fine: int) -> tuple[Array, Array]:
    """Return x (1, columns · fine) and y (rows · fine, 1) of the middles of the fine cells. [px]."""
    rows, columns = frame
    return (np.arange(columns * fine)[None, :] + 0.5) / fine, (np.arange(rows * fine)[:, None] + 0.5) / fine


def _at(field: Field, x: Array, y: Array, shape: tuple[int, int]) -> Array:
    return np.broadcast_to(field(x, y) if callable(field) else field, shape)


def _received(scene: Scene, body: Body, kelvin: Array, cosine: Array, distance: Array) -> Array:
    """Return radiance at the camera for points of one body, (n,) each.

    The sum over wavelengths is taken at Chebyshev nodes of the three variables that vary over a body; it is
    smooth in all of them, and the polynomial through the nodes gives it at every point.
    """
    axes = [_nodes(kelvin, _TEMPERATURES), _nodes(cosine, _COSINES), _nodes(distance, _DISTANCES)]
    values = np.stack([_sum_over_band(scene, body, axes[0], axes[1], float(d)) for d in axes[2]], axis=-1)
    for place, (nodes, field) in enumerate(zip(axes, (kelvin, cosine, distance), strict=True)):
        basis = chebyshev.chebvander(_scaled(nodes, field), nodes.size - 1)
        values = np.moveaxis(np.tensordot(np.linalg.inv(basis), values, axes=(1, place)), 0, place)
    scaled = [_scaled(field, field) for field in (kelvin, cosine, distance)]
    parts = [slice(start, start + _CHUNK) for start in range(0, kelvin.size, _CHUNK)]
    evaluate: Any = chebyshev.chebval3d
    return np.concatenate([evaluate(*(one[part] for one in scaled), values) for part in parts])


def _nodes(field: Array, count: int) -> Array:
    low, high = float(field.min()), float(field.max())
    if high - low < 1e-9:
        return np.array([low])
    return low + (high - low) * (1 - np.cos(np.pi * (np.arange(count) + 0.5) / count)) / 2


def _scaled(values: Array, field: Array) -> Array:
    low, high = float(field.min()), float(field.max())
    return np.zeros(values.shape) if high - low < 1e-9 else 2 * (values - low) / (high - low) - 1


def _sum_over_band(scene: Scene, body: Body, kelvin: Array, cosine: Array, distance_m: float) -> Array:
    """Return radiance at the camera for every temperature and cosine, shape (temperatures, cosines)."""
    air = planck(scene.air.celsius + ZERO_C_K)
    through_air = scene.air.transmittance(distance_m)
    rest = 1 - sum(factor for _, factor in body.reflected)
    mirrored = rest * planck(scene.reflected_c + ZERO_C_K)
    for celsius, factor in body.reflected:
        mirrored = mirrored + factor * planck(celsius + ZERO_C_K)
    emissivity = body.emissivity(cosine)
    leaving = planck(kelvin)[:, None, :] * emissivity + (1 - emissivity) * mirrored
    arriving = through_air * leaving + (1 - through_air) * air
    if scene.pane is not None:
        pane = scene.pane
        own = 1 - pane.transmittance - pane.reflectance
        arriving = pane.transmittance * arriving + own * planck(pane.celsius + ZERO_C_K) + pane.reflectance * air
    return in_band(arriving)

"""Shapes and sizes: a tank, two pipes, strips of a few pixels, and a cabinet door seen from the side."""

from collections.abc import Callable

import numpy as np

from simulator.air import Air
from simulator.outlines import box, everywhere
from simulator.pinhole import Meeting, Pinhole
from simulator.radiation import Array
from simulator.scene import Body, Scene
from simulator.shot import BARE_CAMERA, Shot
from simulator.surfaces import Emissivity, grey, smooth_dielectric, smooth_metal

CAMERA = Pinhole(frame=(240, 320), field_of_view_deg=(25.0, 18.88))
AIR = Air(celsius=21.0, humidity_pct=50.0)
_WALL = Body(name="wall", outline=everywhere, celsius=22.0, emissivity=grey(0.93))

TANK = (np.array([0.0, 0.0, 5.0]), 0.5)
PIPE_TILT_DEG, PIPE_RADIUS_M = 20.0, 0.1
PIPES = {"painted": np.array([-0.22, 0.0, 3.0]), "bare": np.array([0.22, 0.0, 3.0])}
DOOR_SIZE_M, DOOR_TILT_DEG, DOOR_MIDDLE = (0.8, 0.6), 58.0, np.array([0.04, 0.0, 2.4])

SPECK = (80.25, 59.125, 80.875, 59.75)
"""The target that is smaller than a pixel: five of eight fine cells each way. [px]."""

_Seen = Callable[[Array, Array], Meeting]


def shots() -> list[Shot]:
    """Return the frames of the folder that are about shape and size."""
    return [_tank(), _pipes(), _fuses(), _cabinet()]


def _body(name: str, seen: _Seen, celsius: Callable[[Meeting], Array], emissivity: Emissivity) -> Body:
    """Return a body that rays meet."""
    return Body(
        name=name,
        outline=lambda x, y: np.isfinite(seen(x, y).range_m),
        celsius=lambda x, y: celsius(seen(x, y)),
        emissivity=emissivity,
        cosine=lambda x, y: seen(x, y).cosine,
        distance_m=lambda x, y: seen(x, y).range_m,
    )


def _scene(bodies: tuple[Body, ...], distance_m: float, reflected_c: float) -> Scene:
    return Scene(frame=CAMERA.frame, bodies=bodies, air=AIR, distance_m=distance_m, reflected_c=reflected_c)


def _tank() -> Shot:
    def celsius(met: Meeting) -> Array:
        return np.asarray(54.5 + 6.5 * np.tanh((met.along - 0.05) / 0.03))

    tank = _body("tank", lambda x, y: CAMERA.sphere(x, y, *TANK), celsius, smooth_dielectric(0.90))
    return Shot(
        file="tank_sphere.tif",
        camera=BARE_CAMERA,
        pages=(_scene((_WALL, tank), 5.6, 22.0),),
        demonstrates="a glossy sphere darkens toward its rim though it is no cooler there",
        regions={
            "tank below the level": ("tank", "filled part near the middle: seen nearly from the front"),
            "tank, rim": ("tank", "filled part near the rim, 58° to 72°: reads several kelvin low"),
            "tank above the level": ("tank", "empty part: a real difference"),
        },
    )


def _pipes() -> Shot:
    tilt = np.radians(PIPE_TILT_DEG)
    axis = np.array([0.0, np.cos(tilt), np.sin(tilt)])

    def pipe(name: str, emissivity: Emissivity) -> Body:
        def seen(x: Array, y: Array) -> Meeting:
            return CAMERA.cylinder(x, y, PIPES[name], axis, PIPE_RADIUS_M)

        return _body(name, seen, lambda met: 74.0 + 0 * met.range_m, emissivity)

    bodies = (_WALL, pipe("painted", smooth_dielectric(0.90)), pipe("bare", smooth_metal(0.22)))
    return Shot(
        file="pipe_cylinder.tif",
        camera=BARE_CAMERA,
        pages=(_scene(bodies, 3.4, 22.0),),
        demonstrates="paint darkens toward the sides of a pipe, bare metal brightens; both pipes are 74 °C",
        regions={
            "painted pipe": ("painted", "emissivity falls toward the sides"),
            "bare pipe": ("bare", "emissivity rises toward the sides"),
        },
    )


def _fuses() -> Shot:
    fuse = grey(0.93)
    bodies = (
        Body(name="board", outline=everywhere, celsius=28.0, emissivity=fuse),
        Body(name="fuse 1", outline=box(16, 20, 28, 100), celsius=88.0, emissivity=fuse),
        Body(name="fuse 2", outline=box(46, 20, 50, 100), celsius=88.0, emissivity=fuse),
        Body(name="fuse 3", outline=box(110.25, 20, 112.75, 100), celsius=88.0, emissivity=fuse),
        Body(name="speck", outline=box(*SPECK), celsius=150.0, emissivity=fuse),
    )
    scene = Scene(frame=(120, 160), bodies=bodies, air=AIR, distance_m=1.5, reflected_c=22.0, fine=8)
    return Shot(
        file="small_fuses.tif",
        camera=BARE_CAMERA,
        pages=(scene,),
        demonstrates="the narrower a target, the more of the cold board its pixels hold",
        regions={
            "fuse, 12 px": ("fuse 1", "wide enough: only its emissivity stands between reading and truth"),
            "fuse, 4 px": ("fuse 2", "its mean mixes in the board at both edges"),
            "fuse, 2.5 px": ("fuse 3", "no pixel holds the fuse alone"),
            "speck": ("speck", "a terminal end of 0.39 pixel: only its area tells its temperature"),
        },
        small=("fuse, 4 px", "fuse, 2.5 px", "speck"),
    )


def _cabinet() -> Shot:
    right, down = door_axes()

    def seen(x: Array, y: Array) -> Meeting:
        return CAMERA.rectangle(x, y, DOOR_MIDDLE, right, down, DOOR_SIZE_M)

    def celsius(met: Meeting) -> Array:
        return np.asarray(42.0 + 8.0 * np.exp(-((met.across - 0.1) ** 2 + (met.along + 0.1) ** 2) / 0.12**2))

    door = _body("door", seen, celsius, smooth_dielectric(0.90))
    return Shot(
        file="tilted_cabinet.tif",
        camera=BARE_CAMERA,
        pages=(_scene((_WALL, door), 3.0, 22.0),),
        demonstrates="a gloss door seen at about 60°: four corners and its size give angle and range of every pixel",
        regions={
            "door": ("door", "the whole door inside its edges"),
            "door, warm spot": ("door", "round the warmest place"),
        },
    )


def door_axes() -> tuple[Array, Array]:
    """Return the unit vectors along the door's width, which recedes to the right, and down its height."""
    tilt = np.radians(DOOR_TILT_DEG)
    return np.array([np.cos(tilt), 0.0, np.sin(tilt)]), np.array([0.0, 1.0, 0.0])

"""A pump that warms up, page by page, and a boiler door seen by a camera that stores raw counts."""

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from simulator.air import Air
from simulator.camera import Camera, as_float, whole_counts
from simulator.outlines import box, disc, everywhere
from simulator.radiation import ZERO_C_K, Array, radiance
from simulator.scene import Body, Scene
from simulator.shot import BARE_CAMERA, Shot
from simulator.surfaces import grey

INTERVAL_S, PAGES = 60.0, 12

COUNTS_CAMERA = Camera(
    unit="raw counts, uint16",
    encode=whole_counts,
    decode=as_float,
    blur_px=0.65,
    noise_k=0.05,
    gain=150.0,
    offset=1200.0,
)
SHOTS_C = np.arange(-10.0, 191.0, 20.0)


def sequence_shots() -> list[Shot]:
    """Return the frames of the folder sequence."""
    pages = tuple(_pump(INTERVAL_S * page) for page in range(PAGES))
    return [
        Shot(
            file="pump_bearing.tif",
            camera=replace(BARE_CAMERA, unit="kelvin × 100, uint16, 12 pages"),
            pages=pages,
            demonstrates="a bearing that warms up; beside it a bare shaft that seems not to",
            regions={
                "bearing housing": ("housing", "painted cast iron, the trend to watch"),
                "shaft": ("shaft", "bare steel at the bearing's temperature: shows 9 K of its 30 K rise"),
                "motor": ("motor", "painted motor, steady"),
            },
        )
    ]


def _pump(seconds: float) -> Scene:
    bearing = 25.0 + 38.0 * (1 - float(np.exp(-seconds / 420.0)))
    bodies = (
        Body(name="floor", outline=everywhere, celsius=22.0, emissivity=grey(0.93)),
        Body(name="motor", outline=box(6, 30, 56, 92), celsius=41.0, emissivity=grey(0.92)),
        Body(name="shaft", outline=box(56, 54, 96, 68), celsius=bearing, emissivity=grey(0.27)),
        Body(name="housing", outline=disc(116, 61, 24), celsius=bearing, emissivity=grey(0.93)),
    )
    air = Air(celsius=22.0, humidity_pct=50.0)
    return Scene(frame=(120, 160), bodies=bodies, air=air, distance_m=1.5, reflected_c=23.0)


def _door(x: Array, y: Array) -> Array:
    """Return the door: hottest at its top."""
    return 118.0 - 0.3 * (y - 20) + 0 * x


def counts_shots() -> list[Shot]:
    """Return the frames of the folder counts."""
    bodies = (
        Body(name="brickwork", outline=everywhere, celsius=31.0, emissivity=grey(0.93)),
        Body(name="door", outline=box(40, 20, 120, 104), celsius=_door, emissivity=grey(0.94)),
        Body(name="seal", outline=box(40, 96, 120, 104), celsius=134.0, emissivity=grey(0.94)),
        Body(name="handle", outline=box(98, 44, 112, 78), celsius=63.0, emissivity=grey(0.33)),
    )
    air = Air(celsius=26.0, humidity_pct=40.0)
    scene = Scene(frame=(120, 160), bodies=bodies, air=air, distance_m=2.0, reflected_c=29.0)
    return [
        Shot(
            file="boiler_door.npz",
            camera=COUNTS_CAMERA,
            pages=(scene,),
            demonstrates="raw counts: no temperature at all before a calibration from blackbody shots",
            regions={
                "door": ("door", "heat-proof paint; its mean; 20 K lie between top and bottom"),
                "leaking seal": ("seal", "the hottest line of the door"),
                "handle": ("handle", "bare steel: the calibrated counts say 41 °C, the hand feels 63 °C"),
                "brickwork": ("brickwork", "wall beside the door"),
            },
        )
    ]


def blackbody_shots(generator: np.random.Generator) -> NDArray[np.float64]:
    """Return rows of °C and counts: the mean over 2500 pixels of each shot of a blackbody at close range."""
    camera, kelvin = COUNTS_CAMERA, SHOTS_C + ZERO_C_K
    received = radiance(kelvin) + camera.noise(generator, kelvin.shape) / np.sqrt(2500)
    return np.stack([SHOTS_C, np.round(received * (camera.gain or 0) + camera.offset, 1)], axis=1)

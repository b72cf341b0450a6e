"""A flue seen by the camera that stores raw counts; its calibration is a formula with fitted constants."""

from dataclasses import replace

from simulator.air import Air
from simulator.machines import COUNTS_CAMERA
from simulator.outlines import box, everywhere
from simulator.radiation import Array
from simulator.scene import Body, Scene
from simulator.shot import Shot
from simulator.surfaces import grey

_AIR = Air(celsius=28.0, humidity_pct=40.0)


def _pipe(x: Array, y: Array) -> Array:
    """Return the flue: hottest at the boiler below."""
    return 112.0 + 0.25 * y + 0 * x


def shots() -> list[Shot]:
    """Return the frames of the folder."""
    bodies = (
        Body(name="wall", outline=everywhere, celsius=33.0, emissivity=grey(0.93)),
        Body(name="flue", outline=box(50, 0, 98, 120), celsius=_pipe, emissivity=grey(0.94)),
        Body(name="joint", outline=box(44, 52, 104, 66), celsius=168.0, emissivity=grey(0.94)),
        Body(name="collar", outline=box(42, 88, 106, 106), celsius=126.0, emissivity=grey(0.36)),
    )
    return [
        Shot(
            file="flue.tif",
            camera=replace(COUNTS_CAMERA, unit="raw counts, uint16, TIFF"),
            pages=(Scene(frame=(120, 160), bodies=bodies, air=_AIR, distance_m=2.5, reflected_c=30.0),),
            demonstrates="raw counts, calibrated by a formula with constants fitted to blackbody shots",
            regions={
                "flue": ("flue", "heat-proof paint; its mean over the upper run"),
                "joint": ("joint", "leaking joint: the hottest part"),
                "collar": ("collar", "bare steel between painted parts: looks cold beside them"),
                "wall": ("wall", "masonry beside the flue"),
            },
        )
    ]

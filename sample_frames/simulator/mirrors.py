"""Surfaces that mirror: glass and stainless steel with several sources, one plate under two reflected temperatures."""

from pathlib import Path

from simulator.outlines import box, everywhere
from simulator.scene import Body, Scene
from simulator.shaped import AIR
from simulator.shot import BARE_CAMERA, Shot
from simulator.surfaces import grey, optical_constants

GLASS = Path(__file__).parents[1] / "geometry" / "glass_nk.csv"

_HEATER, _STRIP = (120.0, 0.10), (180.0, 0.05)
_COS_45 = 0.5**0.5


def shots() -> list[Shot]:
    """Return the frames of the folder that are about reflection."""
    return [_sources(), _plate("plate_cool.tif", 22.0), _plate("plate_warm.tif", 47.0)]


def _sources() -> Shot:
    sources = (_HEATER, _STRIP)
    bodies = (
        Body(name="wall", outline=everywhere, celsius=23.0, emissivity=grey(0.93)),
        Body(
            name="glass",
            outline=box(14, 20, 66, 100),
            celsius=34.0,
            emissivity=optical_constants(GLASS),
            reflected=sources,
            cosine=_COS_45,
        ),
        Body(name="steel", outline=box(84, 20, 146, 100), celsius=34.0, emissivity=grey(0.20), reflected=sources),
        Body(name="label", outline=box(106, 44, 124, 62), celsius=34.0, emissivity=grey(0.94)),
    )
    return Shot(
        file="mirrors.tif",
        camera=BARE_CAMERA,
        pages=(Scene(frame=(120, 160), bodies=bodies, air=AIR, distance_m=1.8, reflected_c=22.0),),
        demonstrates="a heater and a lamp mirrored by glass at 45° and by steel: all three surfaces are 34 °C",
        regions={
            "glass": ("glass", "emissivity of the optical constants at 45°; mirrors 10 % heater and 5 % lamp"),
            "steel": ("steel", "four fifths of what leaves it is mirrored"),
            "label": ("label", "paper on the steel: right within 1 K even uncorrected"),
        },
    )


def _plate(file: str, reflected_c: float) -> Shot:
    bodies = (
        Body(name="wall", outline=everywhere, celsius=23.0, emissivity=grey(0.93)),
        Body(name="plate", outline=box(30, 20, 130, 100), celsius=56.0, emissivity=grey(0.35)),
        Body(name="dot", outline=box(96, 40, 116, 60), celsius=56.0, emissivity=grey(0.95)),
    )
    return Shot(
        file=file,
        camera=BARE_CAMERA,
        pages=(Scene(frame=(120, 160), bodies=bodies, air=AIR, distance_m=1.0, reflected_c=reflected_c),),
        demonstrates=f"one plate at 56 °C that mirrors {reflected_c:g} °C; with its twin: two frames, two unknowns",
        regions={
            "plate": ("plate", f"brushed steel that mirrors {reflected_c:g} °C"),
            "dot": ("dot", "matt dot on the plate, at its temperature"),
        },
    )

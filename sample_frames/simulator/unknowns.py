"""A heating manifold whose inputs are found from the frame itself: foil, tape and a contact probe."""

from dataclasses import replace

from simulator.air import Air
from simulator.camera import as_float, celsius_thousandths
from simulator.outlines import box, disc, everywhere
from simulator.scene import Body, Scene
from simulator.shot import BARE_CAMERA, Shot
from simulator.surfaces import grey

_ROOM = Air(celsius=25.0, humidity_pct=50.0)
_COPPER, _BRASS = grey(0.42), grey(0.55)


def shots() -> list[Shot]:
    """Return the frames of the folder."""
    bodies = (
        Body(name="board", outline=everywhere, celsius=27.0, emissivity=grey(0.93)),
        Body(name="header", outline=box(20, 16, 52, 104), celsius=78.0, emissivity=_COPPER),
        Body(name="tape", outline=box(22, 44, 50, 64), celsius=78.0, emissivity=grey(0.945)),
        Body(name="valve", outline=disc(86, 60, 20), celsius=61.2, emissivity=_BRASS),
        Body(name="foil", outline=box(116, 16, 152, 50), celsius=25.4, emissivity=grey(0.04)),
        Body(name="union", outline=box(118, 66, 150, 102), celsius=52.0, emissivity=_BRASS),
    )
    return [
        Shot(
            file="foil.npy",
            camera=replace(BARE_CAMERA, unit="°C, float32, NPY", encode=celsius_thousandths, decode=as_float),
            pages=(Scene(frame=(120, 160), bodies=bodies, air=_ROOM, distance_m=1.5, reflected_c=36.0),),
            demonstrates="reflected temperature found from foil, emissivity from tape and from a contact probe",
            regions={
                "foil": ("foil", "crumpled foil: its apparent temperature is the reflected one"),
                "tape": ("tape", "tape of known emissivity on the header"),
                "header": ("header", "oxidised copper beside the tape, at its temperature"),
                "valve": ("valve", "brass that a contact probe touched"),
                "union": ("union", "brass as the valve, cooler: no probe on it"),
            },
        )
    ]

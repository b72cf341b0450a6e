"""The heating plant and its building: a clad pipe, a plate heat exchanger, the outside wall under a clear sky."""

from dataclasses import replace

from simulator.air import Air
from simulator.outlines import box, disc, everywhere, sector
from simulator.radiation import Array
from simulator.scene import Body, Scene
from simulator.shot import CELSIUS_CAMERA, Shot
from simulator.surfaces import grey

_ROOM = Air(celsius=27.0, humidity_pct=60.0)
_WINTER = Air(celsius=2.0, humidity_pct=75.0)

_CLADDING, _PLATE = grey(0.155), grey(0.26)
_PERSON, _SKY, _SKY_ON_GLASS, _SKY_ON_RENDER = (33.0, 0.12), (-45.0, 0.40), (-45.0, 0.75), (-45.0, 0.30)


def shots() -> list[Shot]:
    """Return the frames of the folder."""
    return [_pipe_elbow(), _heat_exchanger(), _wall()]


def _pipe_elbow() -> Shot:
    bodies = (
        Body(name="masonry", outline=everywhere, celsius=lambda x, y: 24.0 + 0.004 * x + 0 * y, emissivity=grey(0.93)),
        Body(name="run", outline=box(0, 60, 160, 110), celsius=41.0, emissivity=_CLADDING, reflected=(_PERSON,)),
        Body(name="elbow", outline=sector(160, 150, 40, 90), celsius=43.0, emissivity=_CLADDING, reflected=(_PERSON,)),
        Body(name="drop", outline=box(200, 150, 250, 240), celsius=41.0, emissivity=_CLADDING, reflected=(_PERSON,)),
        Body(name="flange", outline=box(76, 48, 104, 122), celsius=84.0, emissivity=grey(0.91)),
        Body(name="band", outline=box(194, 186, 256, 206), celsius=42.0, emissivity=grey(0.95)),
    )
    return Shot(
        file="pipe_elbow.tif",
        camera=CELSIUS_CAMERA,
        pages=(Scene(frame=(240, 320), bodies=bodies, air=_ROOM, distance_m=4.0, reflected_c=26.0),),
        demonstrates="bright cladding shows the room and the inspector's body heat instead of the pipe's jacket",
        regions={
            "flange, gloss paint": ("flange", "bare painted flange: 4 % less emission than assumed, 4 m of air"),
            "cladding, run": ("run", "bright aluminium: 85 % of the picture is the room and the inspector"),
            "cladding, elbow": ("elbow", "2 K warmer than the run; the picture shows 0.4 K"),
            "cladding, drop": ("drop", "same temperature as the run"),
            "marker band": ("band", "matt band round the drop: how warm the jacket really is"),
            "masonry": ("masonry", "wall behind the pipe"),
        },
    )


def _pack(x: Array, y: Array) -> Array:
    """Return the plate pack: hot inlet at the top left, cold outlet at the bottom right."""
    return 88.0 - 0.17 * (x - 70) - 0.04 * (y - 30)


def _heat_exchanger() -> Shot:
    pitch, first, count = 22, 70, 9
    plates = Body(name="plates", outline=box(first, 30, first + pitch * count, 210), celsius=_pack, emissivity=_PLATE)
    gaskets = tuple(
        Body(
            name=f"gasket {n + 1}",
            outline=box(first + pitch * n + 12, 30, first + pitch * (n + 1), 210),
            celsius=_pack,
            emissivity=grey(0.935),
        )
        for n in range(count)
    )
    bodies = (
        Body(name="wall", outline=everywhere, celsius=25.0, emissivity=grey(0.93)),
        plates,
        *gaskets,
        Body(name="fixed cover", outline=box(30, 20, 70, 220), celsius=63.0, emissivity=grey(0.905)),
        Body(name="moving cover", outline=box(268, 20, 296, 220), celsius=47.0, emissivity=grey(0.905)),
        Body(name="inlet", outline=disc(50, 50, 13), celsius=91.0, emissivity=grey(0.93)),
        Body(name="outlet", outline=disc(50, 190, 13), celsius=56.0, emissivity=grey(0.93)),
    )
    return Shot(
        file="heat_exchanger.npy",
        camera=replace(CELSIUS_CAMERA, unit="°C, float32, NPY"),
        pages=(Scene(frame=(240, 320), bodies=bodies, air=_ROOM, distance_m=3.0, reflected_c=28.0),),
        demonstrates="plates and gaskets of one temperature look like a comb: the pattern is emissivity, not heat",
        regions={
            "fixed cover": ("fixed cover", "gloss paint, a little below the emissivity the camera assumed"),
            "moving cover": ("moving cover", "as the fixed cover, cooler"),
            "inlet": ("inlet", "painted stub, hot side in"),
            "outlet": ("outlet", "painted stub, hot side out"),
            "plate 3": ("plates", "stainless edges: read 30 K too low beside their gaskets"),
            "gasket 3": ("gasket 3", "rubber, nearly what the camera assumed"),
            "plate 8": ("plates", "as plate 3, cooler: the picture hides most of the difference"),
            "gasket 8": ("gasket 8", "as gasket 3, cooler"),
        },
    )


def _wall() -> Shot:
    bodies = (
        Body(name="render", outline=everywhere, celsius=3.0, emissivity=grey(0.92), reflected=(_SKY_ON_RENDER,)),
        Body(
            name="slab edge",
            outline=box(0, 56, 160, 68),
            celsius=6.4,
            emissivity=grey(0.92),
            reflected=(_SKY_ON_RENDER,),
        ),
        Body(name="pane", outline=box(40, 14, 76, 48), celsius=4.5, emissivity=grey(0.84), reflected=(_SKY_ON_GLASS,)),
        Body(
            name="lintel", outline=box(36, 6, 80, 14), celsius=5.2, emissivity=grey(0.92), reflected=(_SKY_ON_RENDER,)
        ),
        Body(name="door", outline=box(104, 76, 134, 120), celsius=8.0, emissivity=grey(0.30), reflected=(_SKY,)),
    )
    return Shot(
        file="wall.csv",
        camera=replace(CELSIUS_CAMERA, unit="°C, text with decimal comma and semicolon"),
        pages=(Scene(frame=(120, 160), bodies=bodies, air=_WINTER, distance_m=12.0, reflected_c=1.0),),
        demonstrates="a clear sky mirrored by glass and metal: parts warmer than the wall look colder",
        regions={
            "render": ("render", "outside wall, sees the sky at a slant"),
            "slab edge": ("slab edge", "thermal bridge: the true excess over the wall is what matters"),
            "window pane": ("pane", "glass mirrors the sky: looks colder than the wall, is warmer"),
            "metal door": ("door", "bare metal door: shows the sky"),
        },
    )

"""The switch room: bus bars with one hot joint, and a breaker panel behind an infrared window."""

from dataclasses import replace

import numpy as np

from simulator.air import Air
from simulator.outlines import box, disc, everywhere
from simulator.radiation import Array
from simulator.scene import Body, Pane, Scene
from simulator.shot import KELVIN_CAMERA, Shot
from simulator.surfaces import Emissivity, grey

_ROOM = Air(celsius=24.0, humidity_pct=45.0)

_OXIDISED, _PAINTED, _TAPED, _FOIL, _TINNED = grey(0.29), grey(0.945), grey(0.95), grey(0.04), grey(0.34)


def shots() -> list[Shot]:
    """Return the frames of the folder."""
    return [_switch_panel(), _through_window()]


def _back_plate(x: Array, y: Array) -> Array:
    return 27.0 + (240 - y) / 60 + 0 * x


def _bar_1(x: Array, y: Array) -> Array:
    return 67.0 + y / 100 + 0 * x


def _bar_3(x: Array, y: Array) -> Array:
    return 65.0 + y / 100 + 0 * x


def _bar_2(x: Array, y: Array) -> Array:
    """Return the middle bar: its lower joint makes heat that flows up the copper."""
    return 71.0 + 35.0 * np.exp(-((np.maximum(212.0 - y, 0) / 26.0) ** 1.5)) + 0 * x


def _switch_panel() -> Shot:
    bodies = (
        Body(name="back plate", outline=everywhere, celsius=_back_plate, emissivity=grey(0.92)),
        *_cables(),
        Body(name="bar 1", outline=box(60, 12, 84, 214), celsius=_bar_1, emissivity=_OXIDISED),
        Body(name="bar 2", outline=box(110, 12, 134, 214), celsius=_bar_2, emissivity=_OXIDISED),
        Body(
            name="bar 3",
            outline=box(160, 12, 184, 214),
            celsius=_bar_3,
            emissivity=_OXIDISED,
            reflected=((95.0, 0.15),),
        ),
        Body(name="painted bar", outline=box(210, 12, 234, 214), celsius=66.0, emissivity=_PAINTED),
        Body(name="tape", outline=box(112, 130, 132, 154), celsius=_bar_2, emissivity=_TAPED),
        Body(name="lug 1", outline=disc(72, 212, 14), celsius=70.0, emissivity=_TINNED),
        Body(name="lug 2", outline=disc(122, 212, 14), celsius=106.0, emissivity=_TINNED),
        Body(name="lug 3", outline=disc(172, 212, 14), celsius=68.0, emissivity=_TINNED, reflected=((95.0, 0.15),)),
        Body(name="foil", outline=box(254, 20, 304, 66), celsius=28.0, emissivity=_FOIL),
    )
    return Shot(
        file="switch_panel.tif",
        camera=KELVIN_CAMERA,
        pages=(Scene(frame=(240, 320), bodies=bodies, air=_ROOM, distance_m=1.2, reflected_c=31.0),),
        demonstrates="bare metal reads far too low, paint and tape do not; a hot joint; a warm source mirrored",
        regions={
            "foil": ("foil", "crumpled foil: its uncorrected radiance is what the other surfaces mirror"),
            "bus bar L1": ("bar 1", "oxidised copper: emits 29 %, mirrors a 31 °C room, so it reads far too low"),
            "bus bar L2": ("bar 2", "as L1; the heat of the joint below has faded here"),
            "bus bar L2, taped spot": ("tape", "tape on L2: emits 95 %, reads nearly right without correction"),
            "bus bar L3": ("bar 3", "as L1, but 15 % of what it mirrors is a 95 °C casing: reads too warm beside L1"),
            "neutral bar, painted": ("painted bar", "painted copper: close to what the camera assumed"),
            "lug L1": ("lug 1", "tinned lug in order"),
            "lug L2": ("lug 2", "the hot joint: 36 K above L1, of which the picture shows 16 K"),
            "lug L3": ("lug 3", "tinned lug in order that also mirrors the 95 °C casing"),
            "back plate": ("back plate", "painted steel"),
        },
    )


def _cables() -> tuple[Body, ...]:
    places = ((72, 50.0), (122, 64.0), (172, 49.0), (222, 48.0))
    return tuple(
        Body(name=f"cable {n}", outline=box(x - 9, 205, x + 9, 240), celsius=celsius, emissivity=grey(0.93))
        for n, (x, celsius) in enumerate(places, 1)
    )


def _through_window() -> Shot:
    paint, plastic, bright = grey(0.90), grey(0.93), grey(0.20)
    blocks = tuple(
        _box_body(f"breaker {n}", (30 + 70 * n, 50, 80 + 70 * n, 150), celsius, plastic)
        for n, celsius in enumerate((47.0, 52.0, 49.0, 46.0))
    )
    terminals = tuple(
        _box_body(f"terminal {n}", (43 + 70 * n, 156, 67 + 70 * n, 186), celsius, paint)
        for n, celsius in enumerate((55.0, 83.0, 57.0, 54.0))
    )
    bodies = (
        Body(name="chassis", outline=everywhere, celsius=34.0, emissivity=paint),
        *blocks,
        *terminals,
        _box_body("rail", (20, 200, 300, 222), 44.0, bright),
    )
    scene = Scene(
        frame=(240, 320),
        bodies=bodies,
        air=_ROOM,
        distance_m=0.8,
        reflected_c=33.0,
        pane=Pane(transmittance=0.85, reflectance=0.05, celsius=32.0),
    )
    return Shot(
        file="through_window.png",
        camera=replace(KELVIN_CAMERA, unit="kelvin × 100, uint16, PNG"),
        pages=(scene,),
        demonstrates="a window lets 85 % through, adds its own and mirrors the room: hot parts read low",
        regions={
            "chassis": ("chassis", "near the window's own temperature, so the window changes little"),
            "breaker 2": ("breaker 1", "plastic behind the window"),
            "terminal 1": ("terminal 0", "painted terminal in order"),
            "terminal 2": ("terminal 1", "loose terminal: the hotter the part, the more the window hides"),
            "rail": ("rail", "bright aluminium: little of what leaves it is its own"),
        },
    )


def _box_body(name: str, corners: tuple[float, float, float, float], celsius: float, emissivity: Emissivity) -> Body:
    return Body(name=name, outline=box(*corners), celsius=celsius, emissivity=emissivity)

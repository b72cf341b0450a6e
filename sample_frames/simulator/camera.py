"""The camera: noise, what it makes of radiance, and how its numbers are stored."""

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import tifffile
from numpy.typing import NDArray
from PIL import Image

from simulator.radiation import ZERO_C_K, Array, radiance, temperature

Stored = NDArray[np.uint16] | NDArray[np.float32]


@dataclass(frozen=True, slots=True, kw_only=True)
class Camera:
    """``applied`` = emissivity and reflected °C that the camera believes; ``unit`` names what it stores."""

    unit: str
    encode: Callable[[Array], Stored]
    decode: Callable[[Stored], Array]
    blur_px: float = 0.65
    noise_k: float = 0.05
    applied: tuple[float, float] = (1.0, 20.0)
    gain: float | None = None
    offset: float = 0.0

    def noise(self, generator: np.random.Generator, shape: tuple[int, ...]) -> Array:
        """Return noise, constant in radiance, stated as a temperature at 30 °C. [W m⁻² sr⁻¹]."""
        at = 30.0 + ZERO_C_K
        slope = (float(radiance(at + 0.05)) - float(radiance(at - 0.05))) / 0.1
        return self.noise_k * slope * generator.standard_normal(shape)

    def stored(self, received: Array) -> Stored:
        """Return the numbers that the camera stores for the radiance that it received."""
        return self.encode(received * self.gain + self.offset if self.gain else self.shown_c(received))

    def shown_c(self, received: Array) -> Array:
        """Return the temperature the camera shows. [°C]."""
        emissivity, mirrored_c = self.applied
        mirrored = float(radiance(mirrored_c + ZERO_C_K))
        return temperature((received - (1 - emissivity) * mirrored) / emissivity) - ZERO_C_K

    def read_c(self, stored: Stored) -> Array:
        """Return the temperature that stored numbers say before any correction. [°C]."""
        values = self.decode(stored)
        return temperature((values - self.offset) / self.gain) - ZERO_C_K if self.gain else values


def kelvin_hundredths(celsius: Array) -> NDArray[np.uint16]:
    """Return temperatures as whole hundredths of a kelvin."""
    return np.round((celsius + ZERO_C_K) * 100).astype(np.uint16)


def from_kelvin_hundredths(stored: Stored) -> Array:
    """Undo `kelvin_hundredths`."""
    return stored.astype(np.float64) / 100 - ZERO_C_K


def celsius_thousandths(celsius: Array) -> NDArray[np.float32]:
    """Return temperatures in °C, rounded to a thousandth as the camera resolves no more."""
    return np.round(celsius, 3).astype(np.float32)


def whole_counts(counts: Array) -> NDArray[np.uint16]:
    """Return counts as whole numbers."""
    return np.round(counts).astype(np.uint16)


def as_float(stored: Stored) -> Array:
    """Return stored numbers as they stand."""
    return stored.astype(np.float64)


def write(path: Path, stored: Stored) -> None:
    """Write a frame, or pages, in the format of the file's ending. Same numbers, same bytes."""
    path.parent.mkdir(parents=True, exist_ok=True)
    match path.suffix:
        case ".tif":
            tifffile.imwrite(path, stored, photometric="minisblack", metadata=None, software=False)
        case ".png":
            Image.fromarray(stored).save(path, optimize=True)
        case ".npy":
            np.save(path, stored)
        case ".npz":
            np.savez_compressed(path, counts=stored)
        case ".csv":
            rows = (";".join(f"{value:.2f}" for value in row) for row in stored)
            path.write_text("".join(row.replace(".", ",") + "\n" for row in rows), encoding="utf-8", newline="\n")
        case ending:
            raise ValueError(f"no frame format has the ending {ending}")

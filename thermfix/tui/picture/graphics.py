"""True pixels on terminals that take them: the open kitty graphics protocol and sixel, and which one there is.

Encoders and detection only: a terminal that answers is written to beside the screen library, never
through it. Half blocks are what the picture widget shows.
"""

import base64
import os
import re
import select
import sys
import time
import zlib
from collections.abc import Callable, Mapping
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import InputError

CHUNK = 4096
"""Bytes of base64 in one escape sequence of the kitty protocol, at most (a multiple of four)."""

WAIT_S = 0.2
"""How long a terminal may take to answer."""

ESC = "\x1b"
END = f"{ESC}\\"
QUERY = f"{ESC}_Gi=31,s=1,v=1,a=q,t=d,f=24;AAAA{END}{ESC}[c"
"""Asks for kitty graphics, then for the primary device attributes, which every terminal answers."""


class Graphics(StrEnum):
    """A way to show true pixels."""

    KITTY = "kitty"
    SIXEL = "sixel"


def encode_kitty(rgb: NDArray[np.uint8], columns: int, lines: int) -> str:
    """Return the escape sequences that show an image at the cursor.

    Parameters
    ----------
    rgb : ndarray of uint8, shape (rows, cols, 3)
        The image.
    columns, lines : int
        Cells that it shall fill.

    Returns
    -------
    str
        Chunks of zlib-compressed 24-bit pixels; the cursor stays and the terminal does not answer.

    References
    ----------
    .. [1] "Terminal graphics protocol", documentation of the kitty terminal: transmitting and displaying (a=T),
       24-bit pixels (f=24), compression (o=z), chunks (m), size in cells (c, r), quiet (q=2), fixed cursor (C=1).
    """
    _check(rgb)
    data = base64.standard_b64encode(zlib.compress(np.ascontiguousarray(rgb).tobytes(), 1)).decode("ascii")
    chunks = [data[start : start + CHUNK] for start in range(0, len(data), CHUNK)]
    rows, cols, _ = rgb.shape
    head = f"a=T,f=24,o=z,s={cols},v={rows},c={columns},r={lines},q=2,C=1,"
    made = []
    for number, chunk in enumerate(chunks):
        more = int(number + 1 < len(chunks))
        made.append(f"{ESC}_G{head if not number else ''}m={more};{chunk}{END}")
    return "".join(made)


def encode_sixel(levels: NDArray[np.uint8], colours: NDArray[np.uint8]) -> str:
    """Return the escape sequence that shows an image of few colours at the cursor.

    Parameters
    ----------
    levels : ndarray of uint8, shape (rows, cols)
        Index of each pixel's colour.
    colours : ndarray of uint8, shape (n, 3)
        The colours; sixel states them in percent. At most 256.

    Returns
    -------
    str
        Bands of six lines, each colour of a band once, runs shortened.

    References
    ----------
    .. [1] DEC STD 070, "Video Systems Reference Manual", 1990: sixel data, colour introducer (#), repeat (!),
       graphics carriage return ($) and new line (-), raster attributes (").
    """
    if levels.ndim != 2 or not levels.size or int(levels.max()) >= len(colours) or len(colours) > 256:
        raise InputError(
            "a sixel image needs two dimensions and at most 256 colours.", hint="Give levels and their colours."
        )
    percent = np.round(colours / 2.55).astype(int)
    rows, cols = levels.shape
    made = [f'{ESC}P0;1;0q"1;1;{cols};{rows}']
    made += [f"#{index};2;{red};{green};{blue}" for index, (red, green, blue) in enumerate(percent.tolist())]
    for top in range(0, rows, 6):
        band = levels[top : top + 6]
        weights = (1 << np.arange(len(band)))[:, None]
        parts = []
        for index in np.unique(band).tolist():
            sixels = ((band == index) * weights).sum(axis=0) + 63
            parts.append(f"#{index}{_runs(sixels)}")
        made.append("$".join(parts) + "-")
    made.append(END)
    return "".join(made)


def _runs(sixels: NDArray[np.int64]) -> str:
    """Return the letters of one colour of a band, four equal ones or more as a count."""
    starts = np.flatnonzero(np.diff(sixels, prepend=-1))
    lengths = np.diff(starts, append=len(sixels)).tolist()
    letters = [chr(code) for code in sixels[starts].tolist()]
    return "".join(
        f"!{length}{letter}" if length > 3 else letter * length for letter, length in zip(letters, lengths, strict=True)
    )


def _check(rgb: NDArray[np.uint8]) -> None:
    if rgb.ndim != 3 or rgb.shape[2] != 3 or rgb.dtype != np.uint8 or not rgb.size:
        raise InputError(
            f"an image of shape {rgb.shape} and type {rgb.dtype} cannot be shown.",
            hint="Give rows × columns × 3 numbers from 0 to 255.",
        )


def graphics_in(answer: str) -> Graphics | None:
    """Return what a terminal's answer to QUERY offers; kitty graphics before sixel, None for neither."""
    if re.search(rf"{ESC}_Gi=31;OK{ESC}", answer):
        return Graphics.KITTY
    attributes = re.search(rf"{ESC}\[\?([\d;]*)c", answer)
    return Graphics.SIXEL if attributes and "4" in attributes[1].split(";")[1:] else None


def detect_graphics(
    environ: Mapping[str, str] = os.environ, ask: Callable[[str, float], str] | None = None
) -> Graphics | None:
    """Return the way to show true pixels on this terminal, None where there is none.

    Must run before the screen library takes the terminal. It returns within WAIT_S whatever the terminal
    does; without a terminal, with NO_COLOR and within a multiplexer (which passes no pictures on) it does
    not ask at all.

    Parameters
    ----------
    environ : mapping
        Environment variables.
    ask : callable, optional
        Sends a query and returns the answer within some seconds; by default, to this process's terminal.
    """
    if "NO_COLOR" in environ or environ.get("TMUX") or environ.get("STY") or environ.get("TERM", "dumb") == "dumb":
        return None
    try:
        return graphics_in((ask or ask_terminal)(QUERY, WAIT_S))
    except OSError:
        return None


def ask_terminal(query: str, wait_s: float) -> str:
    """Return what the terminal answers to a query, as far as it has come when the time is over.

    Parameters
    ----------
    query : str
        Escape sequences; the answer is complete with the device attributes (``CSI ? … c``).
    wait_s : float
        Longest time. [s]

    Raises
    ------
    OSError
        If standard input or output is no terminal, or the system has no such terminals.
    """
    try:
        import termios  # not on every system
        import tty
    except ImportError as error:
        raise OSError("no terminal settings on this system") from error
    if not (sys.stdin.isatty() and sys.stdout.isatty()):
        raise OSError("no terminal")
    source, sink = sys.stdin.fileno(), sys.stdout.fileno()
    try:
        settings = termios.tcgetattr(source)
    except termios.error as error:
        raise OSError("no terminal") from error
    try:
        tty.setcbreak(source, termios.TCSANOW)
        os.write(sink, query.encode("ascii"))
        answer, end = b"", time.monotonic() + wait_s
        while not re.search(rb"\x1b\[\?[\d;]*c", answer) and (left := end - time.monotonic()) > 0:
            if select.select([source], [], [], left)[0]:
                answer += os.read(source, 1024)
        return answer.decode("ascii", "replace")
    finally:
        termios.tcsetattr(source, termios.TCSANOW, settings)

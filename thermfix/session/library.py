"""The same correction for a notebook: arrays in, arrays out."""

import numpy as np
from numpy.typing import NDArray

from thermfix.correction import FrameResult, Instrument, make_plan, run, solve, wanted
from thermfix.errors import InputError
from thermfix.files import printable
from thermfix.model import Frame, Inspection


def correct(stored: NDArray[np.generic], inspection: Inspection, file: str | None = None) -> FrameResult:
    """Correct one page of stored numbers as an inspection says.

    Parameters
    ----------
    stored : ndarray, shape (rows, columns)
        Stored numbers of any real dtype; never changed.
    inspection : Inspection
        From `load_inspection`.
    file : str, optional
        Which of its frames gives scene and regions, by its name in the file. Needed where it lists several.

    Returns
    -------
    FrameResult
        Temperatures in kelvin, their standard uncertainty, reasons where there is none, one reading
        per region, and the pixels of every region.

    Raises
    ------
    InputError
        If the frame is not listed, or the inspection cannot be used for an array of this shape.
    """
    if stored.ndim != 2:
        raise InputError(f"A frame is a 2-D array, not one of shape {stored.shape}.", hint="Give one page at a time.")
    instrument = Instrument(inspection.camera)
    frame = _frame(inspection, file)
    solved = {}
    if wanted(frame):
        solved = solve(instrument, frame, instrument.signal.radiance(stored), inspection.materials)
    plan = make_plan(instrument, frame, (stored.shape[0], stored.shape[1]), inspection.materials, solved)
    return run(plan, stored, pixels=True)


def _frame(inspection: Inspection, file: str | None) -> Frame:
    listed = {frame.file: frame for frame in inspection.frames}
    if file is None and len(listed) == 1:
        return next(iter(listed.values()))
    if file not in listed:
        names = ", ".join(printable(name) for name in list(listed)[:8])
        raise InputError(f"The inspection lists no frame “{printable(file)}”.", hint=f"It lists: {names}.")
    return listed[file]

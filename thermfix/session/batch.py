"""Correct a whole inspection without a screen: every frame, every page, results written in order."""

import os
from collections import deque
from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import Future, ThreadPoolExecutor
from dataclasses import dataclass, field
from datetime import timedelta
from enum import StrEnum
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from thermfix.correction import FrameResult, Instrument, Plan, Reading, make_plan, run, solve, wanted
from thermfix.errors import FrameError, PhysicsError, ThermfixError
from thermfix.export import (
    claim_output,
    frame_stems,
    page_stem,
    write_budget,
    write_grid,
    write_pixels,
    write_record,
    write_regions,
    write_surface_tiff,
    write_trend,
)
from thermfix.files import printable, sha256_of
from thermfix.frames import FrameFile, open_frame
from thermfix.model import Frame, FromOtherFrame, Inspection
from thermfix.session.record import Used, record_of


class Grids(StrEnum):
    """Which frames get a grid of surface temperatures: those of one page only, all pages, or none."""

    AUTO = "auto"
    ALL = "all"
    NONE = "none"


@dataclass(frozen=True, slots=True, kw_only=True)
class Outputs:
    """What `correct_inspection` writes besides regions.csv and record.json."""

    grids: Grids = Grids.AUTO
    pixels: bool = False
    tiff: bool = False
    decimals: int = 2
    force: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class PageReadings:
    """The readings of one page: frame file, page number from 0, time as ISO text or empty, any pixel corrected."""

    file: str
    page: int
    time: str
    readings: tuple[Reading, ...]
    corrected: bool


@dataclass(slots=True, kw_only=True)
class Summary:
    """What came of it. ``failed`` holds one error per frame that could not be corrected."""

    pages: list[PageReadings] = field(default_factory=list)
    failed: list[tuple[str, ThermfixError]] = field(default_factory=list)
    corrected: int = 0

    @property
    def readings(self) -> int:
        """Number of readings that carry a surface temperature."""
        return sum(one.surface_mean_k is not None for page in self.pages for one in page.readings)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Job:
    """One frame file that opened: its pages, its plan, and the name its outputs start with."""

    frame: Frame
    path: Path
    pages: int
    plan: Plan
    stem: str
    sha256: str


Progress = Callable[[int, int], None]
"""Told how many pages are done, of how many."""


def correct_inspection(
    inspection: Inspection, out: Path, outputs: Outputs = Outputs(), progress: Progress = lambda done, total: None
) -> Summary:
    """Correct every page of every frame and write the results into the folder ``out``.

    A frame that cannot be read, or whose solved inputs cannot be found, is named in the summary and
    does not stop the rest.

    Raises
    ------
    InputError
        If the inspection cannot be used, or an output exists already and ``outputs.force`` is False.
    FrameError
        If no frame at all can be read.
    PhysicsError
        If frames were read but nothing in them could be corrected.
    """
    summary = Summary()
    jobs = _open_all(inspection, summary)
    if not jobs:
        raise _none_usable(summary)
    claim_output(out, list(_names(jobs, outputs)), force=outputs.force)
    done, total = 0, sum(job.pages for job in jobs)
    for job in jobs:
        try:
            with open_frame(job.path) as frame_file:
                for page in _pages(job, frame_file, inspection, out, outputs):
                    summary.pages.append(page)
                    summary.corrected += page.corrected
                    done += 1
                    progress(done, total)
        except FrameError as error:
            summary.failed.append((job.frame.file, error))
    _write_tables(inspection, jobs, out, outputs, summary)
    if not summary.corrected and not summary.readings:
        raise PhysicsError("No pixel of any frame could be corrected.", hint="See the cautions in regions.csv.")
    return summary


def plan_of(
    instrument: Instrument,
    inspection: Inspection,
    frame: Frame,
    file: FrameFile,
    cache: dict[object, Plan] | None = None,
) -> Plan:
    """Return the plan of a frame file; inputs to be solved are found from its first page.

    ``cache`` lets frames share a plan that have the same conditions, regions and shape.
    """
    key = (frame.scene, frame.regions, file.shape)
    if cache is not None and key in cache:
        return cache[key]
    solved = {}
    if wanted(frame):
        radiance = instrument.signal.radiance(file.read(0))
        solved = solve(instrument, frame, radiance, inspection.materials, _others(instrument, inspection, frame))
    plan = make_plan(instrument, frame, file.shape, inspection.materials, solved)
    if cache is not None and not solved:
        cache[key] = plan
    return plan


def _others(
    instrument: Instrument, inspection: Inspection, frame: Frame
) -> dict[str, tuple[Frame, NDArray[np.float32]]]:
    """Return the frames that something of a frame is solved from, with their received radiance."""
    named = {one.emissivity.file for one in frame.regions if isinstance(one.emissivity, FromOtherFrame)}
    found = {}
    for other in inspection.frames:
        if other.file in named:
            with open_frame(inspection.folder / other.file) as file:
                found[other.file] = (other, instrument.signal.radiance(file.read(0)))
    return found


def _open_all(inspection: Inspection, summary: Summary) -> list[_Job]:
    instrument = Instrument(inspection.camera)
    cache: dict[object, Plan] = {}
    opened = []
    for frame in inspection.frames:
        path = inspection.folder / frame.file
        try:
            with open_frame(path) as file:
                plan = plan_of(instrument, inspection, frame, file, cache)
                opened.append((frame, path, file.pages, plan, sha256_of(path)))
        except (FrameError, PhysicsError) as error:
            summary.failed.append((frame.file, error))
    stems = frame_stems([frame.file for frame, *_ in opened], [pages for _, _, pages, *_ in opened])
    return [
        _Job(frame=frame, path=path, pages=pages, plan=plan, stem=stem, sha256=sha256)
        for (frame, path, pages, plan, sha256), stem in zip(opened, stems, strict=True)
    ]


def _none_usable(summary: Summary) -> ThermfixError:
    first = summary.failed[0][1]
    if len(summary.failed) == 1:
        return first
    names = ", ".join(printable(name) for name, _ in summary.failed[:5])
    return type(first)(f"None of the {len(summary.failed)} frames can be used: {names}.", hint=str(first))


def _names(jobs: Iterable[_Job], outputs: Outputs) -> Iterator[str]:
    yield from ("regions.csv", "budget.csv", "record.json")
    for job in jobs:
        if job.pages > 1:
            yield "trend.csv"
        for page in range(job.pages):
            stem = page_stem(job.stem, page, job.pages)
            if _wants_grid(outputs, job):
                yield f"{stem}.surface_c.csv"
            if outputs.pixels:
                yield f"{stem}.pixels.csv"
            if outputs.tiff:
                yield f"{stem}.surface.tif"


def _wants_grid(outputs: Outputs, job: _Job) -> bool:
    return outputs.grids is Grids.ALL or (outputs.grids is Grids.AUTO and job.pages == 1)


def _pages(job: _Job, file: FrameFile, inspection: Inspection, out: Path, outputs: Outputs) -> Iterator[PageReadings]:
    """Correct the pages of one file in order: the first alone, the rest with a thread for each core.

    Only a few pages are under way at a time, so that memory does not grow with their number.
    """
    first = _one_page(job, file, 0, inspection, out, outputs, frozenset())
    yield first
    if job.pages == 1:
        return
    curved = frozenset(one.region for one in first.readings if one.interval_k is not None)
    workers = os.cpu_count() or 1
    with ThreadPoolExecutor(workers) as pool:
        under_way: deque[Future[PageReadings]] = deque()
        try:
            for page in range(1, job.pages):
                under_way.append(pool.submit(_one_page, job, file, page, inspection, out, outputs, curved))
                if len(under_way) >= 2 * workers:
                    yield under_way.popleft().result()
            while under_way:
                yield under_way.popleft().result()
        finally:
            for waiting in under_way:
                waiting.cancel()


def _one_page(
    job: _Job,
    file: FrameFile,
    page: int,
    inspection: Inspection,
    out: Path,
    outputs: Outputs,
    curved: frozenset[str],
) -> PageReadings:
    grid = _wants_grid(outputs, job)
    result = run(
        job.plan,
        file.read(page),
        grid=grid or outputs.tiff,
        uncertainty=outputs.tiff,
        pixels=outputs.pixels,
        budgets=page == 0,
        curved=curved,
    )
    stem = page_stem(job.stem, page, job.pages)
    if grid:
        write_grid(out / f"{stem}.surface_c.csv", result.surface_k, decimals=outputs.decimals, force=outputs.force)
    if outputs.pixels:
        write_pixels(out / f"{stem}.pixels.csv", result.pixels, decimals=outputs.decimals, force=outputs.force)
    if outputs.tiff:
        write_surface_tiff(out / f"{stem}.surface.tif", result.surface_k, result.u_k, force=outputs.force)
    return PageReadings(
        file=job.frame.file,
        page=page,
        time=_time(inspection, file, page),
        readings=result.readings,
        corrected=_has_reading(result),
    )


def _has_reading(result: FrameResult) -> bool:
    return result.surface_k.size > 0 and not bool((result.reason != 0).all())


def _time(inspection: Inspection, file: FrameFile, page: int) -> str:
    """Return the page's time: from the inspection's start and interval, else the file's own, else empty."""
    start, interval = inspection.sequence.start, inspection.sequence.interval_s
    if start is not None:
        return (start + timedelta(seconds=page * (interval or 0.0))).isoformat()
    return file.time(page) or ""


def _write_tables(inspection: Inspection, jobs: list[_Job], out: Path, outputs: Outputs, summary: Summary) -> None:
    rows = [(page.file, page.page, one) for page in summary.pages for one in page.readings]
    write_regions(out / "regions.csv", rows, force=outputs.force)
    write_budget(out / "budget.csv", rows, force=outputs.force)
    several = {job.frame.file for job in jobs if job.pages > 1}
    if several:
        trend = (
            (page.file, page.page, page.time, one)
            for page in summary.pages
            if page.file in several
            for one in page.readings
        )
        write_trend(out / "trend.csv", trend, force=outputs.force)
    used = [Used(file=job.frame.file, sha256=job.sha256, pages=job.pages, plan=job.plan) for job in jobs]
    write_record(out / "record.json", record_of(inspection, used, rows, summary.failed), force=outputs.force)

"""A polygon's outline as straight runs, each the left or the right end of what lies inside (even-odd)."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def signed_runs(corners: Sequence[tuple[float, float]] | Array) -> tuple[Array, Array, Array]:
    """Return the outline's runs from their upper to their lower end, split where the outline meets itself.

    Parameters
    ----------
    corners : sequence of (x, y), 3 or more
        Corners. [px].

    Returns
    -------
    tuple of ndarray
        Starts (n, 2), ends (n, 2) with y rising from start to end, and signs (n,): +1 where the inside
        ends going right, −1 where it begins. Level edges are left out: they bound no row.
    """
    points = np.array(corners, dtype=np.float64)
    one, other = points, np.roll(points, -1, axis=0)
    down = (one[:, 1] <= other[:, 1])[:, None]
    start, end = np.where(down, one, other), np.where(down, other, one)
    slanted = end[:, 1] > start[:, 1]
    levels = start[~slanted, 1]
    start, end = start[slanted], end[slanted]
    starts, ends, signs = [np.empty((0, 2))], [np.empty((0, 2))], [np.empty(0)]
    for i in range(len(start)):
        cuts = _meetings(start, end, levels, i)
        low, high = (start[i] + one[:, None] * (end[i] - start[i]) for one in (cuts[:-1], cuts[1:]))
        middle = (low[:, 1] + high[:, 1]) / 2
        starts.append(low)
        ends.append(high)
        signs.append(np.where(_to_the_left(start, end, i, middle) % 2 == 0, -1.0, 1.0))
    return np.concatenate(starts), np.concatenate(ends), np.concatenate(signs)


def cut_runs(start: Array, end: Array, signs: Array, lines_x: Array, lines_y: Array) -> tuple[Array, Array, Array]:
    """Return the runs cut at every upright (x) and level (y) line that they cross; both line arrays sorted."""
    starts, ends, kept = [np.empty((0, 2))], [np.empty((0, 2))], [np.empty(0)]
    for one, other, sign in zip(start, end, signs, strict=True):
        way = other - one
        shares = [np.array([0.0, 1.0])]
        for axis, lines in ((0, lines_x), (1, lines_y)):
            if way[axis] != 0:
                low, high = sorted((one[axis], other[axis]))
                crossed = lines[np.searchsorted(lines, low, "right") : np.searchsorted(lines, high, "left")]
                shares.append((crossed - one[axis]) / way[axis])
        cuts = np.sort(np.concatenate(shares))
        starts.append(one + cuts[:-1, None] * way)
        ends.append(one + cuts[1:, None] * way)
        kept.append(np.full(len(cuts) - 1, sign))
    return np.concatenate(starts), np.concatenate(ends), np.concatenate(kept)


def _meetings(start: Array, end: Array, levels: Array, i: int) -> Array:
    """Return the sorted shares of run i at which it begins, ends, meets another or passes a level edge."""
    way, ways, gap = end[i] - start[i], end - start, start - start[i]
    turn = way[0] * ways[:, 1] - way[1] * ways[:, 0]
    crossing = np.abs(turn) > 1e-12 * np.abs(way).max() * np.abs(ways).max(axis=1)
    with np.errstate(divide="ignore", invalid="ignore"):
        here = (gap[:, 0] * ways[:, 1] - gap[:, 1] * ways[:, 0]) / turn
        there = (gap[:, 0] * way[1] - gap[:, 1] * way[0]) / turn
        met = here[crossing & (there >= -1e-9) & (there <= 1 + 1e-9)]
    # Parallel runs may lie on each other: split where the other begins or ends. A level edge may turn in and out.
    beside = np.concatenate([start[~crossing, 1], end[~crossing, 1], levels])
    shares = np.concatenate([met, (beside - start[i, 1]) / way[1]])
    return np.unique(np.concatenate([[0.0, 1.0], shares[(shares > 0) & (shares < 1)]]))


def _to_the_left(start: Array, end: Array, i: int, heights: Array) -> NDArray[np.intp]:
    """Return how many runs pass left of run i at these heights; of runs on the same place the first counts as left."""
    height = heights[:, None]
    passing = (start[:, 1] <= height) & (end[:, 1] > height)
    ways = end - start
    places = start[:, 0] + (height - start[:, 1]) / ways[:, 1] * ways[:, 0]
    own = places[:, [i]]
    left = (places < own) | ((places == own) & (np.arange(len(start)) < i))
    return np.asarray((passing & left).sum(axis=1))

"""Both arms together: how many tables fit, and the tables that results are computed on."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from app.measures.fourfold import Fourfold
from app.reconstruct.arm import ArmFits

MOST_EVALUATED = 20_000
"""Most tables that every measure is computed on; above it only the ends of each run are."""


@dataclass(frozen=True, slots=True)
class Fits:
    """All tables that fit, and those that stand for them.

    `tables` holds all `count` tables when `listed`, else the ends of the runs, between which every
    measure and limit is monotone in the counts; `complete` is False where even those were too many
    and only the outermost totals stand. `middle` is one table to draw.
    """

    count: int
    tables: Fourfold
    middle: Fourfold
    listed: bool
    complete: bool


def ends(arm: ArmFits) -> NDArray[np.int64]:
    """The first and last count of each run of an arm, as (events, total), one pair a row."""
    pairs = [(events, run.total) for run in arm.runs for events in sorted({run.first, run.last})]
    return np.array(pairs, dtype=np.int64)


def _all_points(arm: ArmFits) -> NDArray[np.int64]:
    pairs = [(events, run.total) for run in arm.runs for events in range(run.first, run.last + 1)]
    return np.array(pairs, dtype=np.int64)


def tables_that_fit(intervention: ArmFits, comparator: ArmFits) -> Fits:
    """Combine two arms, each of which allows something."""
    count = intervention.count * comparator.count
    listed = count <= MOST_EVALUATED
    arms = [_all_points(arm) if listed else ends(arm) for arm in (intervention, comparator)]
    complete = len(arms[0]) * len(arms[1]) <= MOST_EVALUATED
    if not complete:
        arms = [points[np.unique(np.linspace(0, len(points) - 1, 100).astype(np.int64))] for points in arms]
    rows, columns = np.meshgrid(np.arange(len(arms[0])), np.arange(len(arms[1])), indexing="ij")
    first, second = arms[0][rows.ravel()], arms[1][columns.ravel()]
    middles = [arm.runs[len(arm.runs) // 2] for arm in (intervention, comparator)]
    return Fits(
        count=count,
        tables=Fourfold(first[:, 0], first[:, 1], second[:, 0], second[:, 1]),
        middle=Fourfold(middles[0].middle, middles[0].total, middles[1].middle, middles[1].total),
        listed=listed,
        complete=complete,
    )

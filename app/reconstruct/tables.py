"""Both arms together: how many tables fit, and the tables that results are computed on."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from app.measures.fourfold import Fourfold
from app.printed.claims import Arm
from app.reconstruct.arm import ArmFits, Run

MOST_EVALUATED = 4_000
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
        arms = [points[np.unique(np.linspace(0, len(points) - 1, 60).astype(np.int64))] for points in arms]
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


MOST_JOINED = 1_500
"""Most tables of a joint set that every measure is computed on: an even spread, and the extremes of each cell and measure."""


def joined(found: Fourfold, count: int, *, complete: bool) -> tuple[ArmFits, ArmFits, Fits]:
    """Tables that fit both arms' claims together, as what each arm allows and as a set to compute on."""
    tables = _spread(found)
    middle = tables.events_intervention.size // 2
    cells = [int(x[middle]) for x in _columns(tables)]
    fits = Fits(count, tables, Fourfold(*cells), listed=tables.events_intervention.size == count, complete=complete)
    return _arm("intervention", found), _arm("comparator", found), fits


def _columns(tables: Fourfold) -> tuple[NDArray[np.int64], ...]:
    return tables.events_intervention, tables.total_intervention, tables.events_comparator, tables.total_comparator


def _spread(found: Fourfold) -> Fourfold:
    size = found.events_intervention.size
    if size <= MOST_JOINED:
        return found
    a, n1, c, n2 = found.floats()
    with np.errstate(divide="ignore", invalid="ignore"):
        measures = (a, n1, c, n2, a / n1, c / n2, a / n1 - c / n2, np.nan_to_num(a * n2 / (c * n1), nan=1.0, posinf=1e18))
    ends = [int(pick(values)) for values in measures for pick in (np.argmin, np.argmax)]
    keep = np.unique([*np.linspace(0, size - 1, MOST_JOINED).astype(np.int64), *ends])
    return Fourfold(*(column[keep] for column in _columns(found)))


def _arm(arm: Arm, found: Fourfold) -> ArmFits:
    columns = _columns(found)
    events, totals = columns[:2] if arm == "intervention" else columns[2:]
    sizes = np.unique(totals)
    runs = tuple(Run(int(n), int(events[totals == n].min()), int(events[totals == n].max())) for n in sizes[:_MOST_SIZES])
    return ArmFits(arm, "fits", runs, total=int(sizes[0]) if sizes.size == 1 else None)


_MOST_SIZES = 2_000

"""What a fourfold table gives on every scale that may be held constant, each with its own default interval."""

from __future__ import annotations

import numpy as np

from app.appraisal.effects import effects_of
from app.measures.fourfold import Fourfold
from app.transport.constant import SCALES, Effect, Face, Held, on_every_scale


def held_from_counts(
    table: Fourfold, confidence_level: float, given: Held | None = None, face: Face = "event"
) -> tuple[Held, ...]:
    """The effect of one table on the four scales.

    Parameters
    ----------
    table : Fourfold
        One table.
    confidence_level : float
        Two-sided.
    given : Held or None
        An effect stated beside the counts; it stands for its own scale.
    face : Face
        What the risk ratio is of: the event, or being free of it.

    Returns
    -------
    tuple of Held
        In the order of `SCALES`. The hazard ratio is converted at the comparator's risk unless it is given.
    """
    measures = effects_of(table, confidence_level).measures
    turned = effects_of(table.complement(), confidence_level).measures if face == "complement" else measures
    risk = own_risk(table)
    found = []
    for scale in SCALES:
        if given is not None and given.scale == scale:
            found.append(given)
        elif scale == "hazard_ratio":
            found.append(next(h for h in on_every_scale(_of(measures, "risk_ratio"), risk) if h.scale == scale))
        elif scale == "risk_ratio":
            found.append(Held(scale, _of(turned, scale).effect, face))
        else:
            found.append(_of(measures, scale))
    return tuple(found)


def own_risk(table: Fourfold) -> float:
    """The comparator's risk of one table."""
    return float(np.ravel(table.events_comparator / table.total_comparator)[0])


def _of(measures: object, scale: str) -> Held:
    result = measures[scale]  # type: ignore[index]
    interval = next(limits for method, limits in result.intervals if method.default)
    ends = (float(np.ravel(x)[0]) for x in (result.estimate, interval.low, interval.high))
    return Held(scale, Effect(*ends))  # type: ignore[arg-type]

"""Which further printed figure would tell most of the tables that fit apart."""

from __future__ import annotations

import numpy as np

from app.measures.difference import risk_difference
from app.measures.fourfold import Floats, Fourfold
from app.measures.odds import odds_ratio
from app.measures.ratio import risk_ratio
from app.reconstruct.stated import Stated


def narrow_with(of: Stated, tables: Fourfold) -> str | None:
    """The figure, not printed yet, that takes most different values over the tables at its usual decimals."""
    a, n1, c, n2 = tables.floats()
    with np.errstate(all="ignore"):
        figures: dict[str, Floats] = {
            "events_intervention": a,
            "events_comparator": c,
            "total_intervention": n1,
            "total_comparator": n2,
            "risk_intervention": np.round(100.0 * a / n1, 1),
            "risk_comparator": np.round(100.0 * c / n2, 1),
            "risk_ratio": np.round(risk_ratio(tables), 2),
            "odds_ratio": np.round(odds_ratio(tables), 2),
            "risk_difference": np.round(100.0 * risk_difference(tables), 1),
        }
    printed = {f"{c.quantity}_{arm.arm}" for arm in of.arms for c in arm.claims} | {c.quantity for c in of.measures}
    kinds = {name: int(np.unique(values).size) for name, values in figures.items() if name not in printed}
    best = max(kinds, key=lambda name: kinds[name], default=None)
    return best if best is not None and kinds[best] > 1 else None


def ranges(tables: Fourfold) -> dict[str, tuple[float, float]]:
    """Smallest and largest value of every cell and measure over the tables; risks as fractions of 1."""
    a, n1, c, n2 = tables.floats()
    with np.errstate(all="ignore"):
        figures: dict[str, Floats] = {
            "events_intervention": a,
            "total_intervention": n1,
            "events_comparator": c,
            "total_comparator": n2,
            "risk_intervention": a / n1,
            "risk_comparator": c / n2,
            "risk_difference": risk_difference(tables),
            "risk_ratio": risk_ratio(tables),
            "odds_ratio": odds_ratio(tables),
        }
    return {name: (float(np.min(values)), float(np.max(values))) for name, values in figures.items()}

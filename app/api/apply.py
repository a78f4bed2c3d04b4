"""The answer of /apply: what follows at each starting risk if each scale stays the same."""

from __future__ import annotations

from fractions import Fraction

import app.transport.constant as constant
from app.api.answers import Json, needed_json, number, segments_json, versioned
from app.intake.apply import ApplyInput
from app.measures.interval import single
from app.measures.needed import needed_segments


def apply_answer(given: ApplyInput) -> Json:
    """The answer of /apply."""
    unwanted = given.event_is != "wanted"
    return versioned(
        baselines=[
            {"baseline_risk": risk, "scales": [_scale(held, risk, unwanted) for held in given.held]}
            for risk in given.baseline_risks
        ]
    )


def _scale(held: constant.Held, risk: float, unwanted: bool) -> Json:
    found = constant.carried(held, risk)
    with_, difference, low, high = (float(x) for x in (found.risk_with, found.difference, found.low, found.high))
    possible = bool(found.possible)
    needed = None
    if possible:
        segments = [] if low != low or high != high else segments_json(needed_segments(single(low, high), unwanted))
        needed = {**needed_json(Fraction(difference), unwanted), "segments": segments}
    return {
        "scale": held.scale,
        "possible": possible,
        "converted": held.converted,
        "risk_with": number(with_),
        "difference": number(difference),
        "low": number(low),
        "high": number(high),
        "number_needed_to_treat": needed,
    }

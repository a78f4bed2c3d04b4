"""What a reader must be told beside the figures: slugs with evidence, most consequential first."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from app.appraisal.model import SHARED, BothArms, MeasureAppraisal, Note, OutcomeInput
from app.measures.proportion import clopper_pearson
from app.measures.registry import Measure
from app.reconstruct.arm import ArmFits
from app.reconstruct.tables import Fits

ODDS_PART = 1.10
"""Odds ratio and risk ratio this many times apart are noted (common practice, no source)."""


def _arm_notes(arm: ArmFits) -> list[Note]:
    evidence: dict[str, object] = {"arm": arm.arm, "total": arm.total}
    if arm.status == "none_fits":
        return [
            Note(
                "no_count_fits",
                {
                    **evidence,
                    "nearest": arm.nearest,
                    "other_totals": arm.other_totals,
                    "if_truncated": arm.if_truncated,
                },
            )
        ]
    notes = []
    if arm.if_truncated is not None:
        notes.append(Note("more_if_truncated", {**evidence, "run": arm.if_truncated}))
    return notes


def _empty_cells(fits: Fits, confidence_level: float) -> list[Note]:
    table = fits.tables
    none_first, none_second = (bool(np.all(x == 0)) for x in (table.events_intervention, table.events_comparator))
    if none_first and none_second:
        upper = [
            float(clopper_pearson(0, np.min(total), confidence_level).high)
            for total in (table.total_intervention, table.total_comparator)
        ]
        return [Note("no_events_at_all", {"upper": upper, "confidence_level": confidence_level})]
    if none_second:
        return [Note("no_events_in_comparator")]
    if none_first:
        return [Note("no_events_in_intervention")]
    others = table.complement()
    if np.all(others.events_intervention == 0) and np.all(others.events_comparator == 0):
        return [Note("all_have_the_event")]
    return []


def _odds_part(measures: Mapping[Measure, MeasureAppraisal]) -> list[Note]:
    odds, ratio = (measures[m].estimate for m in ("odds_ratio", "risk_ratio"))
    with np.errstate(all="ignore"):
        apart = np.exp(np.abs(np.log(np.array(odds)) - np.log(np.array(ratio))))
    if np.all(np.isfinite(apart)) and np.max(apart) > ODDS_PART:
        return [Note("odds_part_from_risk", {"odds_ratio": odds, "risk_ratio": ratio})]
    return []


def notes_on(
    given: OutcomeInput,
    intervention: ArmFits,
    comparator: ArmFits,
    both: BothArms | None,
) -> tuple[Note, ...]:
    """Notes on one outcome."""
    notes = _arm_notes(intervention) + _arm_notes(comparator)
    notes += [
        Note("total_taken_over", {"arm": c.arm, "total": int(c.said.value)}) for c in given.claims if c.id.startswith(SHARED)
    ]
    if both is None:
        return tuple(notes)
    if not both.fits.complete:
        notes.append(Note("too_many_tables", {"count": both.fits.count}))
    notes += _empty_cells(both.fits, given.confidence_level)
    if given.design == "case_control":
        notes.append(Note("case_control_refuses"))
    elif given.event_is == "not_said":
        notes.append(Note("wanted_not_said"))
    if given.design == "case_control":
        return tuple(notes + _odds_part(both.measures))
    if given.follow_up != "fixed":
        notes.append(Note("naive_follow_up", {"follow_up": given.follow_up}))
    if not given.horizon:
        notes.append(Note("time_not_stated"))
    return tuple(notes + _odds_part(both.measures))

"""appraise(input): the one entrance for pages, API and command line."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction

import numpy as np

from app.appraisal.carry import held_from_counts, own_risk
from app.appraisal.effects import Effects, effects_of, risk_of
from app.appraisal.model import (
    SHARED,
    Appraisal,
    AppraisalInput,
    BothArms,
    IntervalRange,
    MeasureAppraisal,
    NeededAppraisal,
    OutcomeAppraisal,
    OutcomeInput,
    Patients,
    Range,
    RiskAppraisal,
)
from app.appraisal.notes import notes_on
from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import Interval
from app.measures.needed import direction_of, needed_segments, rounded_needed
from app.printed.claims import ARMS, Arm, Claim
from app.reconstruct.across import Belonging, together
from app.reconstruct.arm import ArmFits, arm_fits
from app.reconstruct.judge import check_outcome
from app.reconstruct.tables import Fits, ends, joined, tables_that_fit
from app.reconstruct.verdict import OutcomeCheck


def range_of(values: Floats) -> Range:
    """Smallest and largest of the values; nan if any is undefined."""
    return Range(float(np.min(values)), float(np.max(values)))


def _interval_range(interval: Interval) -> IntervalRange:
    return IntervalRange(range_of(interval.low), range_of(interval.high))


def _risk(fits: ArmFits, confidence_level: float) -> RiskAppraisal | None:
    if not fits.usable:
        return None
    points = ends(fits)
    result = risk_of(points[:, 0], points[:, 1], confidence_level)
    intervals = tuple((method, _interval_range(interval)) for method, interval in result.intervals)
    return RiskAppraisal(fits, range_of(result.estimate), intervals)


def exact_difference(table: Fourfold, index: int) -> Fraction:
    """The risk difference of one of the tables as a fraction."""
    a, n1, c, n2 = (
        int(x.flat[index])
        for x in (
            table.events_intervention,
            table.total_intervention,
            table.events_comparator,
            table.total_comparator,
        )
    )
    return Fraction(a, n1) - Fraction(c, n2)


def _needed(effects: Effects, unwanted: bool) -> NeededAppraisal:
    result = effects.measures["risk_difference"]
    inverted = [
        (method, needed_segments(Interval(np.asarray(np.min(limits.low)), np.asarray(np.max(limits.high))), unwanted))
        for method, limits in result.intervals
    ]
    segments = next(found for method, found in inverted if method.default)
    others = tuple(pair for pair in inverted if not pair[0].default)
    first, last = (
        exact_difference(effects.table, int(index)) for index in (np.argmin(result.estimate), np.argmax(result.estimate))
    )
    if first * last <= 0:
        direction = "none" if first == last == 0 else "either"
        return NeededAppraisal(None, None, direction, segments, others)
    sense = direction_of(first, unwanted)
    near, far = sorted((abs(1 / first), abs(1 / last)))
    return NeededAppraisal((near, far), (rounded_needed(near, sense), rounded_needed(far, sense)), sense, segments, others)


def _both(intervention: RiskAppraisal, comparator: RiskAppraisal, given: OutcomeInput, fits: Fits) -> BothArms:
    effects = effects_of(fits.tables, given.confidence_level)
    measures = {
        measure: MeasureAppraisal(
            range_of(result.estimate),
            tuple((method, _interval_range(interval)) for method, interval in result.intervals),
        )
        for measure, result in effects.measures.items()
    }
    needed = _needed(effects, given.event_is != "wanted")
    tests = tuple((result.test, _p_range(result.p, effects)) for result in effects.tests)
    return BothArms(intervention, comparator, fits, measures, needed, tests)


def _outcome(given: OutcomeInput, check: OutcomeCheck) -> OutcomeAppraisal:
    """All that follows from one outcome's claims, once they are checked."""
    first, second = (arm_fits(arm, _of_arm(given.claims)) for arm in ARMS)
    fits = None
    if _joint(given.claims, check):
        found = check.tables.tables
        if found is not None:
            first, second, fits = joined(found, check.tables.count, complete=check.tables.complete)
    intervention, comparator = (_risk(arm, given.confidence_level) for arm in (first, second))
    both = None
    if intervention and comparator:
        both = _both(intervention, comparator, given, fits or tables_that_fit(first, second))
    notes = notes_on(given, first, second, both)
    return OutcomeAppraisal(given, intervention, comparator, both, notes, check, _patients(given, both))


def _patients(given: OutcomeInput, both: BothArms | None) -> Patients | None:
    """What can be carried to others: the effect of one table, of a design that has risks."""
    if both is None or both.fits.count != 1 or given.design == "case_control":
        return None
    table = both.fits.tables
    risk = own_risk(table)
    held = held_from_counts(table, given.confidence_level)
    if given.event_is == "wanted":
        held += held_from_counts(table, given.confidence_level, face="complement")[:1]
    return Patients(held, risk)


_BOX = ("events", "non_events", "total", "risk")


def _of_arm(claims: Sequence[Claim]) -> tuple[Claim, ...]:
    """The first claim of each box of each arm: what an arm allows by itself."""
    mine: dict[tuple[str | None, str], Claim] = {}
    for claim in claims:
        if claim.quantity in _BOX and claim.arm is not None and claim.checkable and claim.total_kind is None:
            mine.setdefault((claim.arm, claim.quantity), claim)
    return tuple(mine.values())


def _joint(claims: Sequence[Claim], check: OutcomeCheck) -> bool:
    """Whether tables are settled by more than each arm's own boxes."""
    return bool(check.set_aside) or len(_of_arm(claims)) < len(claims) or bool(check.tables.narrowed)


def _p_range(p: Floats, effects: Effects) -> Range:
    """Range of p; up to 1 where the ends of the runs lie on both sides of no difference."""
    found = range_of(p)
    difference = effects.measures["risk_difference"].estimate
    if p.size > 1 and np.min(difference) < 0.0 < np.max(difference):
        return Range(found.low, 1.0)
    return found


def _belongings(outcomes: Sequence[OutcomeInput]) -> list[Belonging]:
    """Which outcomes are components of the first, and which exclude each other."""
    components = tuple(i for i, outcome in enumerate(outcomes) if i and outcome.part_of == "component")
    categories = tuple(i for i, outcome in enumerate(outcomes) if i and outcome.part_of == "category")
    found = [Belonging("components", 0, components)] if components else []
    return [*found, Belonging("categories", None, (0, *categories))] if categories else found


def _with_shared_totals(outcomes: tuple[OutcomeInput, ...]) -> tuple[OutcomeInput, ...]:
    """Where an outcome states no people analysed for an arm and all others state the same, that number is taken over."""
    stated = {arm: [_total(outcome, arm) for outcome in outcomes] for arm in ARMS}
    found = []
    for i, outcome in enumerate(outcomes):
        shared = []
        for arm in ARMS:
            others = {claim.said.value for claim in stated[arm][:i] + stated[arm][i + 1 :] if claim is not None}
            if stated[arm][i] is None and len(others) == 1 and _needs_total(outcome, arm):
                shared.append(replace(next(c for c in stated[arm] if c is not None), id=f"{SHARED}-{arm}"))
        found.append(replace(outcome, claims=(*outcome.claims, *shared)) if shared else outcome)
    return tuple(found)


def _total(outcome: OutcomeInput, arm: Arm) -> Claim | None:
    return next((c for c in outcome.claims if c.arm == arm and c.quantity == "total" and c.total_kind is None), None)


def _needs_total(outcome: OutcomeInput, arm: Arm) -> bool:
    boxes = {c.quantity for c in outcome.claims if c.arm == arm}
    return bool(boxes & {"events", "non_events", "risk"}) and not boxes >= {"events", "non_events"}


def appraise(given: AppraisalInput) -> Appraisal:
    """Appraise every outcome of a paper, each also against the others."""
    outcomes = _with_shared_totals(given.outcomes)
    checks = together([check_outcome(o.claims, trust=o.trust) for o in outcomes], _belongings(outcomes))
    return Appraisal(tuple(_outcome(outcome, check) for outcome, check in zip(outcomes, checks, strict=True)))

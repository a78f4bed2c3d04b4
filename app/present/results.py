"""The results of one outcome as a template shows them: every number already text."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from app.appraisal.model import BothArms, OutcomeAppraisal, Range, RiskAppraisal
from app.measures.registry import NoDifferenceTest
from app.present.effects import MeasureView, difference_views, hull, percent_spread, relative_views
from app.present.numbers import NumbersView, numbers_view
from app.present.numerals import UNDEFINED, decimals_showing_sides, fixed, p_value, people, percent_decimals, spread
from app.present.people import PeopleView, people_view
from app.present.wording import Names, NoteText, note_text


@dataclass(frozen=True, slots=True)
class ArmRow:
    """One row of the rebuilt fourfold table."""

    arm: str
    key: str
    events: str
    non_events: str
    total: str
    risk: str
    interval: str


@dataclass(frozen=True, slots=True)
class TablesView:
    """How many tables fit, and the fourfold table or the range of each cell."""

    summary: str
    in_words: str
    level: str
    method: str
    rows: tuple[ArmRow, ...]


@dataclass(frozen=True, slots=True)
class PView:
    """P by the default test, and by the others."""

    first: str
    others: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class ResultsView:
    """Everything that follows from one outcome's boxes."""

    tables: TablesView | None
    absolute: tuple[MeasureView, ...]
    relative: tuple[MeasureView, ...]
    p_values: PView | None
    people: PeopleView | None
    notes: tuple[NoteText, ...]
    numbers: NumbersView


def _risk_decimals(arms: Sequence[RiskAppraisal | None]) -> int:
    """Decimals shared by all risks of the table: one, or two digits of the smallest that is not 0."""
    ends = [end for arm in arms if arm for end in (*arm.estimate, *hull(arm.intervals[0][1])) if end > 0]
    smallest = 100.0 * min((end for arm in arms if arm for end in arm.estimate if end > 0), default=1.0)
    least = min(8, max(1, 1 - math.floor(math.log10(smallest)))) if smallest < 0.1 else 1
    return decimals_showing_sides([100.0 * end for end in ends], least, (0.0, 100.0))


def _arm_row(arm: RiskAppraisal, key: str, name: str, decimals: int, shows_risk: bool) -> ArmRow:
    runs = arm.fits.runs
    columns = (
        [end for run in runs for end in (run.first, run.last)],
        [run.total - end for run in runs for end in (run.first, run.last)],
        [run.total for run in runs],
    )
    events, others, total = (spread([people(min(column)), people(max(column))]) for column in columns)
    low, high = hull(arm.intervals[0][1])
    risk, interval = percent_spread(*arm.estimate, decimals), percent_spread(low, high, decimals)
    return ArmRow(name, key, events, others, total, risk if shows_risk else UNDEFINED, interval if shows_risk else UNDEFINED)


def _summary(outcome: OutcomeAppraisal, names: Names) -> str:
    """How many tables fit, or why none is shown yet."""
    if outcome.both is None:
        lost = [note.evidence["arm"] for note in outcome.notes if note.slug == "no_count_fits"]
        return (
            f"{names.start(lost[0])}: nothing fits what is typed; see the message at that arm." if lost else "One arm so far."
        )
    count = outcome.both.fits.count
    if outcome.check.choices:
        trusted = "percentages" if outcome.input.trust == "percentages" else "counts"
        return f"No table fits everything typed. The figures follow the {trusted}."
    start = "No table fits everything typed. " if outcome.check.set_aside else ""
    if count == 1:
        return f"{start}One table fits {'the rest' if start else ''}".strip() + "."
    rest = "the rest" if start else ""
    return (
        f"{start}{people(count)} tables fit {rest}".strip()
        + ". Estimates show the range over all of them, intervals the widest over all."
    )


def _tables(outcome: OutcomeAppraisal, names: Names) -> TablesView | None:
    arms = (("intervention", outcome.intervention), ("comparator", outcome.comparator))
    decimals = _risk_decimals([arm for _, arm in arms])
    shows_risk = outcome.input.design != "case_control"
    rows = tuple(_arm_row(arm, key, names.row(key), decimals, shows_risk) for key, arm in arms if arm is not None)
    level = f"{fixed(100 * outcome.input.confidence_level, 0)}% interval"
    if not rows:
        lost = any(note.slug == "no_count_fits" for note in outcome.notes)
        return TablesView(_summary(outcome, names), "", level, "", ()) if lost else None
    method = outcome.intervention or outcome.comparator
    in_words = ""
    if outcome.both is not None:
        told = [f"{row.events} of {row.total} with {names.arm(row.key)} had {names.counted}{names.within}." for row in rows]
        in_words = " ".join(told)
    by = f"Risk intervals by the {method.intervals[0][0].name} method." if method and shows_risk else ""
    return TablesView(_summary(outcome, names), in_words, level, by, rows)


def _p_text(test: NoDifferenceTest, found: Range, *, several: bool) -> str:
    if math.isnan(found.low):
        return f"P cannot be computed by {test.name}{' in some of the tables' if several else ''}"
    return f"P{spread([p_value(found.low), p_value(found.high)]).replace(' to =', ' to ')} by {test.name}"


def _p_values(both: BothArms) -> PView:
    (first, found), *others = both.tests
    agrees = "" if math.isnan(found.low) else ", the test that agrees with the intervals"
    several = both.fits.count > 1
    return PView(_p_text(first, found, several=several) + agrees, tuple(_p_text(*other, several=several) for other in others))


def results_view(outcome: OutcomeAppraisal, names: Names, places: Mapping[str, int] | None = None) -> ResultsView:
    """All panels of one outcome; `places` is the number of each claim in the passage."""
    notes = tuple(note_text(note, names) for note in outcome.notes)
    numbers = numbers_view(outcome.check, outcome.input.trust, names, places or {})
    tables = _tables(outcome, names)
    both = outcome.both
    if both is None:
        return ResultsView(tables, (), (), None, None, notes, numbers)
    given = outcome.input
    decimals = percent_decimals(min(run.total for arm in (both.intervention, both.comparator) for run in arm.fits.runs))
    no_risk = given.design == "case_control"
    return ResultsView(
        tables=tables,
        absolute=() if no_risk else difference_views(both, names, decimals, given),
        relative=relative_views(both, names, given.design),
        p_values=_p_values(both),
        people=None if no_risk else people_view(both, names, given),
        notes=notes,
        numbers=numbers,
    )

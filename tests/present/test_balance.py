"""Benefit beside harm: outcomes in the same form, each with its own risk, never added."""

from __future__ import annotations

from dataclasses import replace

from app.appraisal.examples import LEG_ULCER
from app.appraisal.run import appraise
from app.appraisal.sheet import Sheet, TypedArm, TypedOutcome
from app.intake.sheet import gather
from app.present.balance import COMPONENTS, HORIZONS, BalanceView, balance_view


def view(sheet: Sheet = LEG_ULCER) -> BalanceView | None:
    return balance_view(sheet, appraise(gather(sheet).input), "95% interval")


def test_benefit_and_harm_in_the_same_form() -> None:
    found = view()
    assert found is not None
    assert found.per == "per 1000 people, 12 months, against Usual care; at the trial’s own risks"
    assert [(r.name, r.without, r.with_it, r.change, r.interval) for r in found.rows] == [
        ("Recurrence", "164", "110", "54 fewer", "7 to 101 fewer"),
        ("Skin irritation", "56", "122", "66 more", "27 to 106 more"),
    ]
    assert found.cautions == ()
    assert 'aria-label="Skin irritation: 66 more per 1000, 27 to 106 more"' in found.rows[1].strip


def test_what_keeps_outcomes_apart_is_said() -> None:
    first, second = LEG_ULCER.outcomes
    part = replace(second, horizon="3 months", part_of="component")
    open_one = TypedOutcome(name="Pain", arms=(TypedArm(total="418", percentage="11"), TypedArm(total="409", percentage="16")))
    found = view(replace(LEG_ULCER, outcomes=(first, part, open_one)))
    assert found is not None
    assert [row.part for row in found.rows] == [False, True]
    assert found.cautions == (HORIZONS, COMPONENTS, "Left out, for more than one table fits or none: Pain.")
    assert found.per == "per 1000 people, against Usual care; at the trial’s own risks"


def test_one_outcome_alone_has_nothing_beside_it() -> None:
    assert view(replace(LEG_ULCER, outcomes=LEG_ULCER.outcomes[:1])) is None

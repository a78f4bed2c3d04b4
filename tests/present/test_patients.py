"""Your patients: rows, sentence and picture at other starting risks."""

from __future__ import annotations

from dataclasses import replace

from app.appraisal.examples import LEG_ULCER
from app.appraisal.run import appraise
from app.appraisal.sheet import Sheet, TypedArm, TypedOutcome, TypedRisk
from app.intake.sheet import gather
from app.present.pages import names_of
from app.present.patients import ELSEWHERE, OTHER_FACE, CarriedRow, PatientsView, patients_view


def view(*risks: str, sheet: Sheet = LEG_ULCER, **changes: object) -> PatientsView | None:
    typed = tuple(TypedRisk(str(k + 1), "", text, "register") for k, text in enumerate(risks))
    outcome = replace(sheet.outcomes[0], risks=typed, **changes)  # type: ignore[arg-type]
    sheet = replace(sheet, outcomes=(outcome,))
    return patients_view(appraise(gather(sheet).input).outcomes[0], names_of(sheet, 0))


def test_rows_at_the_trials_own_risk_and_at_another() -> None:
    found = view("8%")
    assert found is not None
    assert [(group.title, group.source) for group in found.groups] == [
        ("The trial’s own, 16.4%", ""),
        ("Yours, 8%", "register"),
    ]
    assert found.groups[0].rows == (CarriedRow("any of them", "11.0%", "54 fewer", "7 to 101 fewer", "19 to benefit"),)
    assert found.groups[1].rows == (
        CarriedRow("risk ratio", "5.4%", "26 fewer", "4 to 42 fewer", "39 to benefit"),
        CarriedRow("odds ratio", "5.2%", "28 fewer", "4 to 45 fewer", "36 to benefit"),
        CarriedRow("risk difference", "2.6%", "54 fewer", "one limit is impossible here", "19 to benefit"),
    )
    assert found.say == (
        "Of 1000 people like these, 80 would have a recurrence without it within 12 months. If the risk ratio holds, 26 fewer have "
        "a recurrence with it (4 to 42 fewer, starting risk taken as known)."
    )
    assert found.assumed[1:] == (ELSEWHERE,)


def test_a_range_gives_the_joint_band() -> None:
    found = view("250 to 300 per 1000")
    assert found is not None
    assert found.groups[1].rows[0] == CarriedRow(
        "risk ratio", "16.8 to 20.2%", "82 to 98 fewer", "12 to 158 fewer", "11 to 13 to benefit"
    )
    assert found.say == ""


def test_what_is_impossible_says_so() -> None:
    found = view("3%")
    assert found is not None
    assert found.groups[1].rows[2] == CarriedRow("risk difference", "impossible", "–", "–", "–")


def test_a_wanted_event_holds_the_other_face_too() -> None:
    found = view("8%", event_is="wanted")
    assert found is not None
    assert [row.scale for row in found.groups[1].rows] == [
        "risk ratio",
        "odds ratio",
        "risk difference",
        "risk ratio of those without",
    ]
    assert found.groups[1].rows[3].with_it == "2.1%"  # 1 - (372/418) / (342/409) x 0.92, computed by hand
    assert found.assumed[-1] == OTHER_FACE


def test_the_picture_says_the_same_numbers() -> None:
    found = view("8%")
    assert found is not None
    assert "At 8%: risk ratio 26 fewer; odds ratio 28 fewer; risk difference 54 fewer." in found.picture
    assert found.picture.count("<polyline") == 3


def test_more_than_one_table_is_settled_first() -> None:
    arms = (TypedArm(total="418", percentage="11"), TypedArm(total="409", percentage="16"))
    found = view("8%", sheet=Sheet(outcomes=(TypedOutcome(arms=arms),)))
    assert found is not None
    assert found.why_not == "More than one table fits: settle the table first, then carry its effect."

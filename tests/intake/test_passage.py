"""A passage fills the boxes; corrections by hand stay where they still apply."""

from __future__ import annotations

from app.appraisal.sheet import Filled, Sheet, TypedArm
from app.intake.passage import ASSIGNABLE, BY_HAND, box_text
from app.intake.sheet import gather, sheet_from_form

PASSAGE = (
    "Ulcers recurred in 46 of 418 participants (11·0%) with compression review and 67 of 409 (16·4%) with usual care "
    "(relative risk 0·67, 95% CI 0·47 to 0·95; P=0·024) at 12 months."
)
TWO = PASSAGE + " Skin irritation occurred in 31 (7·4%) of 418 and 12 (2·9%) of 409 (RR 2·53, 95% CI 1·32 to 4·85)."


def pasted(passage: str = PASSAGE, sheet: Sheet | None = None, **more: str) -> Sheet:
    return sheet_from_form({"passage": passage, **more}, sheet or Sheet())


def test_every_box_is_filled() -> None:
    sheet = pasted()
    outcome = sheet.outcomes[0]
    assert sheet.arms == ("compression review", "usual care")
    assert (outcome.name, outcome.horizon) == ("Recurrence of ulcers", "12 months")
    assert outcome.arms == (TypedArm("46", "", "418", "11·0"), TypedArm("67", "", "409", "16·4"))
    assert [(f.kind, f.value, f.low, f.high, f.level) for f in outcome.figures] == [
        ("risk_ratio", "0·67", "0·47", "0·95", "95"),
        ("p_value", "0·024", "", "", "95"),
    ]
    assert gather(sheet).problems == ()


def test_each_box_says_where_it_came_from() -> None:
    sheet = pasted()
    spans = {f.part: PASSAGE[f.start : f.end] for f in sheet.filled if f.start >= 0}
    assert spans["arm-0-events"] == "46"
    assert spans["figure-1-low"] == "0·47 to 0·95"
    assert spans["figure-2-value"] == "0·024"


def test_a_correction_stays_while_the_passage_prints_the_same() -> None:
    sheet = pasted()
    sheet = sheet_from_form({"outcome-0-arm-0-events": "47"}, sheet)
    sheet = pasted(PASSAGE.replace("0·024", "0·030"), sheet)
    assert sheet.outcomes[0].arms[0].events == "47"
    assert sheet.outcomes[0].figures[1].value == "0·030"
    assert sheet.passage.endswith("P=0·030) at 12 months.")


def test_a_correction_gives_way_where_the_passage_prints_another_number() -> None:
    sheet = sheet_from_form({"outcome-0-arm-0-events": "47"}, pasted())
    assert pasted(PASSAGE.replace("46 of", "49 of"), sheet).outcomes[0].arms[0].events == "49"


def test_what_the_passage_no_longer_prints_is_taken_out_again() -> None:
    sheet = pasted("", pasted(TWO))
    assert len(sheet.outcomes) == 1
    assert sheet.outcomes[0].arms == (TypedArm(), TypedArm())
    assert sheet.outcomes[0].figures == ()
    assert sheet.filled == ()


def test_a_number_removed_by_hand_does_not_come_back() -> None:
    sheet = sheet_from_form({"remove-figure": "2", "outcome": "0"}, pasted())
    sheet = pasted(PASSAGE + " ", sheet)
    assert [f.kind for f in sheet.outcomes[0].figures] == ["risk_ratio"]


def test_outcomes_typed_by_hand_are_left_alone() -> None:
    typed = sheet_from_form({"outcome-0-name": "Falls", "outcome-0-arm-0-events": "9"}, Sheet())
    sheet = pasted(TWO, typed)
    assert [o.name for o in sheet.outcomes] == ["Falls", "Recurrence of ulcers", "Skin irritation"]
    assert sheet.outcomes[0].arms[0].events == "9"


def test_a_sentence_put_before_moves_no_correction_to_another_outcome() -> None:
    sheet = sheet_from_form({"outcome-0-arm-0-events": "47"}, pasted(PASSAGE))
    sheet = pasted("Deaths occurred in 3 (0·7%) of 418 and 5 (1·2%) of 409 (RR 0·59). " + PASSAGE, sheet)
    assert sheet.outcomes[0].arms[0].events == "47"
    assert sheet.outcomes[1].arms[0].events == "3"


def test_the_arms_can_be_taken_the_other_way_round() -> None:
    sheet = sheet_from_form({"arm_order": "exchanged"}, pasted())
    assert sheet.outcomes[0].arms[0].events == "67"
    assert sheet.arms == ("usual care", "compression review")
    back = sheet_from_form({"arm_order": "as_read"}, sheet)
    assert back.outcomes == pasted().outcomes


def test_a_number_not_read_is_assigned_by_hand_and_stays() -> None:
    passage = PASSAGE + " In all 854 took part."
    start = passage.index("854")
    sheet = pasted(passage)
    sheet = sheet_from_form({f"assign-{start}-{start + 3}": "total_both", "outcome": "0"}, sheet)
    figure = sheet.outcomes[0].figures[-1]
    assert (figure.kind, figure.value) == ("total_both", "854")
    assert Filled(0, "figure-3-value", BY_HAND, f"hand-{start}", "854", start, start + 3) in sheet.filled
    moved = pasted("Results. " + passage, sheet)
    assert moved.outcomes[0].figures[-1].value == "854"
    assert moved.filled[-1].start == start + 9


def test_everything_a_number_can_be_assigned_to_is_a_box() -> None:
    start = PASSAGE.index("12 months")
    for target in ASSIGNABLE:
        sheet = sheet_from_form({f"assign-{start}-{start + 2}": target, "outcome": "0"}, pasted())
        part = sheet.filled[-1].part
        assert box_text(sheet.outcomes[0], part) == "12"


def test_number_words_and_commas_become_what_a_box_takes() -> None:
    sheet = pasted("Events: none of 32 with placebo and 14/1,140 (1.2%) on active drug.")
    assert sheet.outcomes[0].arms[1].events == "0"
    german = pasted("Es starben 96 von 1.204 Patienten (8,0 %) und 134 von 1.198 (11,2 %) der Kontrollgruppe (p = 0,007).")
    assert german.outcomes[0].arms[0].total in ("1204", "1.204")
    assert gather(german).problems == ()
    assert {c.quantity: c.said.value for c in gather(german).input.outcomes[0].claims if c.arm == "intervention"}[
        "total"
    ] == 1204


def test_a_passage_too_long_is_kept_and_refused() -> None:
    sheet = pasted("x" * 200_001)
    assert len(sheet.passage) == 200_001
    refused = gather(sheet).problems[0]
    assert (refused.field, refused.message) == ("passage", "The passage is longer than 200,000 characters, and is not read.")

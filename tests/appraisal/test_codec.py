"""Sheets as JSON: round trip, and the frozen sample of every version."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.appraisal.codec import VERSION, decode, encode
from app.appraisal.examples import LEG_ULCER
from app.appraisal.sheet import CONFIDENCE_LEVELS, DESIGNS, EVENT_IS, FOLLOW_UP, Sheet, TypedArm, TypedOutcome

SAMPLES = Path(__file__).parents[1] / "samples"
TEXT = st.text(st.characters(exclude_categories=["Cs"]), max_size=30)
ARM = st.builds(TypedArm, TEXT, TEXT, TEXT, TEXT)
OUTCOME = st.builds(TypedOutcome, TEXT, TEXT, st.sampled_from(EVENT_IS), TEXT, st.sampled_from(FOLLOW_UP), st.tuples(ARM, ARM))
SHEET = st.builds(
    Sheet,
    TEXT,
    TEXT,
    st.tuples(TEXT, TEXT),
    st.lists(OUTCOME, min_size=1, max_size=3).map(tuple),
    st.sampled_from(CONFIDENCE_LEVELS),
    st.sampled_from(DESIGNS),
    st.booleans(),
)


@given(SHEET)
def test_round_trip(sheet: Sheet) -> None:
    assert decode(encode(sheet)) == sheet


def test_every_version_has_its_frozen_sample() -> None:
    assert {path.name for path in SAMPLES.glob("sheet-*.json")} == {f"sheet-{v}.json" for v in range(1, VERSION + 1)}


@pytest.mark.parametrize("path", sorted(SAMPLES.glob("sheet-*.json")), ids=lambda p: p.name)
def test_frozen_sample_still_opens(path: Path) -> None:
    sheet = decode(path.read_text())
    assert sheet.title == LEG_ULCER.title
    assert sheet.outcomes[0].arms[1].percentage == "16·4%"
    assert len(sheet.outcomes[0].figures) == {"sheet-3.json": 3, "sheet-4.json": 2, "sheet-5.json": 2}.get(path.name, 0)
    assert bool(sheet.passage and sheet.filled) == (path.name in ("sheet-4.json", "sheet-5.json"))
    assert bool(sheet.outcomes[0].risks) == (path.name == "sheet-5.json")


@pytest.mark.parametrize(
    "change",
    [
        {"version": VERSION + 1},
        {"sheet": {**json.loads(encode(Sheet()))["sheet"], "confidence_level": "42"}},
        {"sheet": {**json.loads(encode(Sheet()))["sheet"], "title": 7}},
    ],
)
def test_error_in_document(change: dict[str, object]) -> None:
    document = {**json.loads(encode(Sheet())), **change}
    with pytest.raises(ValueError, match="not a sheet of a known version|not one of|text only"):
        decode(json.dumps(document))

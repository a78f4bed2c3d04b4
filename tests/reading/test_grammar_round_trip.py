"""Sentences generated in the styles of the grammar read back to the numbers they were made from; any text is answered."""

from __future__ import annotations

import re

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.reading.grammar import BOUND, CHANGE, COUNTS, INTERVAL, MARGIN, MEASURES, P_VALUE, RATE
from app.reading.read import read
from app.reading.text import MOST

ARMS = st.sampled_from([("active drug", "placebo"), ("the new device", "usual care"), ("screening", "control")])
EVENTS = st.sampled_from(["Relapse occurred", "Infection was seen", "Stroke was recorded", "The primary outcome occurred"])
COUNTED = st.tuples(st.integers(2, 300), st.integers(301, 5000))
CELLS = st.sampled_from(
    [
        "{e} of {n} ({p}%)",
        "{e}/{n} ({p}%)",
        "{p}% ({e}/{n})",
        "{e} ({p}%) of {n}",
        "{e} of {n} patients ({p}%)",
        "{p}% ({e} of {n})",
        "{e} [{p}%] of {n}",
    ]
)
RATIOS = st.sampled_from(
    [
        "relative risk, {r}; 95% CI, {l} to {h}",
        "RR {r} [95% CI {l}–{h}]",
        "risk ratio {r}, 95% confidence interval {l} to {h}",
        "RR = {r}; 95% CI = {l}, {h}",
        "RR {r} (95% CI: {l} - {h})",
        "relative risk {r} ({l} to {h})",
    ]
)
PS = st.sampled_from(["P={v}", "p = {v}", "P<{v}", "p < {v}", "P ≤ {v}"])
MARKS = st.sampled_from([".", "·"])


@settings(max_examples=300)
@given(
    EVENTS,
    ARMS,
    COUNTED,
    COUNTED,
    CELLS,
    RATIOS,
    PS,
    MARKS,
    st.sampled_from([("in", "and"), ("among", "versus"), ("in", "compared with"), ("in", "against")]),
    st.integers(11, 99),
    st.integers(1, 4),
)
def test_a_sentence_reads_back_to_its_numbers(
    event: str,
    arms: tuple[str, str],
    first: tuple[int, int],
    second: tuple[int, int],
    cell: str,
    ratio: str,
    p: str,
    mark: str,
    links: tuple[str, str],
    hundredths: int,
    thousandths: int,
) -> None:
    counted = []
    for (events, total), arm in zip((first, second), arms, strict=True):
        percent = f"{100 * events / total:.1f}"
        counted.append(f"{cell.format(e=events, n=total, p=percent)} with {arm}")
    numbers = f"{hundredths / 100:.2f}", f"{hundredths / 150:.2f}", f"{hundredths / 70:.2f}"
    text = (
        f"{event} {links[0]} {counted[0]} {links[1]} {counted[1]} "
        f"({ratio.format(r=numbers[0], l=numbers[1], h=numbers[2])}; {p.format(v=f'0.00{thousandths}')})."
    )
    text = re.sub(r"(?<=\d)\.(?=\d)", mark, text)
    reading = read(text)
    assert len(reading.outcomes) == 1
    claims = reading.outcomes[0].claims
    said = {(c.quantity, c.arm): f"{c.said.value}" for c in claims}
    for (events, total), arm in zip((first, second), ("intervention", "comparator"), strict=True):
        assert said["events", arm] == str(events)  # type: ignore[index]
        assert said["total", arm] == str(total)  # type: ignore[index]
        assert said["risk", arm] == f"{100 * events / total:.1f}"  # type: ignore[index]
    assert said["risk_ratio", None] == numbers[0]
    interval = next(c.interval for c in claims if c.interval)
    assert [f"{limit.value}" for limit in interval.limits if limit] == list(numbers[1:])
    assert said["p_value", None] == f"0.00{thousandths}"
    assert reading.unread == ()
    for claim in claims:
        assert claim.span is not None
        assert text[slice(*claim.span)] == claim.said.text


@settings(max_examples=300)
@given(st.text(st.characters(), max_size=300) | st.text("0123456789.,·%()[]–-/ =<>pPRCIof\n\t", max_size=300))
def test_any_text_is_answered_and_its_spans_lie_within_it(text: str) -> None:
    reading = read(text)
    spans = [c.span for o in reading.outcomes for c in o.claims if c.span] + [u.span for u in reading.unread]
    assert all(0 <= start < end <= len(text) for start, end in spans)


@pytest.mark.parametrize(
    "piece",
    ["1", "11% ", "RR 0.", "1\t2 (3)\t4 (5)\n", "\ud800", "("],
)
def test_the_longest_passage_of_repeats_is_answered(piece: str) -> None:
    """Every rule is linear on these; a square one would not end. The times are in DEVELOPERS.md."""
    reading = read((piece * (MOST // len(piece) + 1))[:MOST])
    assert len(reading.outcomes) <= 200


@pytest.mark.parametrize(
    "rule", [BOUND, CHANGE, INTERVAL, MARGIN, P_VALUE, RATE, *COUNTS, *(r for r, _ in MEASURES)], ids=lambda r: r.name
)
def test_a_rule_takes_its_examples(rule: object) -> None:
    for example in rule.examples:  # type: ignore[attr-defined]
        assert rule.pattern.search(example) is not None, example  # type: ignore[attr-defined]

"""The reader on collected passages: what it finds, what it makes up, and what is concluded end to end.

`python -m tests.reading.test_passages` prints the shares.
"""

from __future__ import annotations

from collections import Counter
from typing import Any

import pytest

from app.printed.claims import Claim
from app.reading.read import read
from app.reconstruct.judge import check_outcome
from tests.reconstruct.passage_claims import outcomes, rows

ROWS = {row["id"]: row for row in rows()}
Key = tuple[str, str | None, float | None, tuple[float | None, float | None] | None]

NOT_WHOLE = {"b105", "e35"}
"""Three arms with cumulative counts; a difference that the words call relative, which the collection lists as a difference."""


def key(claim: Claim) -> Key:
    """Quantity, arm, size and interval of a claim."""
    interval = claim.interval
    ends = None if interval is None else tuple(float(n.value) if n else None for n in interval.limits)
    return claim.quantity, claim.arm, None if claim.number is None else abs(float(claim.said.value)), ends  # type: ignore[return-value]


def compared(row: dict[str, Any]) -> tuple[Counter[Key], Counter[Key]]:
    """Claims that a passage prints, and those that are read."""
    want = Counter(key(c) for _, claims in outcomes(row) for c in claims)
    return want, Counter(key(c) for o in read(row["text"]).outcomes for c in o.claims)


def shares() -> tuple[float, float, int]:
    """Recall and precision over all claims, and how many passages are read wholly right."""
    wanted = got = both = whole = 0
    for row in ROWS.values():
        want, have = compared(row)
        both += sum((want & have).values())
        wanted, got, whole = wanted + sum(want.values()), got + sum(have.values()), whole + (want == have)
    return both / wanted, both / got, whole


@pytest.mark.parametrize("name", [name for name in ROWS if name not in NOT_WHOLE])
def test_a_passage_is_read_wholly(name: str) -> None:
    want, have = compared(ROWS[name])
    assert have == want
    assert len(read(ROWS[name]["text"]).outcomes) == len(outcomes(ROWS[name]))


def test_shares_of_all_claims() -> None:
    recall, precision, _ = shares()
    assert recall >= 0.96
    assert precision >= 0.97


@pytest.mark.parametrize("name", ROWS)
def test_spans_are_the_text_as_pasted(name: str) -> None:
    text = ROWS[name]["text"]
    for outcome in read(text).outcomes:
        for claim in outcome.claims:
            assert claim.span is not None
            assert text[slice(*claim.span)] == claim.said.text


PLANTED = {
    "e02": "odds_ratio_called_risk_ratio",
    "e07": "ratio_read_as_reduction",
    "e11": "direction_word_against_numbers",
    "e15": "impossible_percentage",
    "e19": "estimate_outside_interval",
    "e23": "p_against_counts",
    "e27": "needed_does_not_fit",
    "e31": "total_does_not_fit",
    "e35": "points_called_percent",
}


@pytest.mark.parametrize("name", PLANTED)
def test_planted_errors_are_found_end_to_end(name: str) -> None:
    judged = [j for o in read(ROWS[name]["text"]).outcomes for j in check_outcome(o.claims).judgements]
    against = [j for j in judged if j.verdict in ("does_not_agree", "agrees_under_another_reading")]
    assert len(against) == 1
    assert PLANTED[name] in (*against[0].readings, against[0].finding)


@pytest.mark.parametrize("name", [name for name in ROWS if name.startswith("n")])
def test_nothing_is_claimed_where_nothing_is_printed(name: str) -> None:
    assert read(ROWS[name]["text"]).outcomes == ()


if __name__ == "__main__":
    found = shares()
    print(f"recall {found[0]:.3f}, precision {found[1]:.3f}, wholly right {found[2]} of {len(ROWS)}")  # noqa: T201

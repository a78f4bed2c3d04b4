"""Outcomes of one paper narrow each other, and what only shows together is noted."""

from __future__ import annotations

from app.present.verdicts import note_sentence
from app.reconstruct.across import Belonging, together
from app.reconstruct.judge import check_outcome
from app.reconstruct.verdict import OutcomeCheck
from tests.reconstruct.trials_maker import ARMS, claim


def check(first: str, second: str, *, quantity: str = "events", ratio: bool = False) -> OutcomeCheck:
    claims = []
    for arm, text, total in ((ARMS[0], first, "400"), (ARMS[1], second, "400")):
        claims.append(claim(f"{arm}-{quantity}", quantity, text, arm))  # type: ignore[arg-type]
        claims.append(claim(f"{arm}-total", "total", total, arm))
    if ratio:
        claims.append(claim("ratio", "risk_ratio", "0.67", low="0.47", high="0.95"))
    return check_outcome(claims)


def notes(found: OutcomeCheck) -> dict[str, list[str]]:
    return {j.claim.id: [note_sentence(n) for n in j.notes] for j in found.judgements if j.notes}


COMPONENTS = Belonging("components", 0, (1, 2))
GROUPS = Belonging("categories", None, (0, 1, 2))


def test_a_component_cannot_exceed_the_whole() -> None:
    found = together([check("40", "60"), check("45", "30"), check("5", "35")], [COMPONENTS])
    assert notes(found[1]) == {
        "intervention-events": ["More have this component than have the whole outcome, in every table that fits."]
    }
    assert notes(found[0]) == notes(found[2]) == {}


def test_components_together_are_no_fewer_than_the_whole() -> None:
    found = together([check("40", "60"), check("20", "40"), check("10", "25")], [COMPONENTS])
    assert notes(found[0]) == {
        "intervention-events": ["The components together are fewer than the whole: one may not be listed."]
    }


def test_a_whole_narrows_its_component_and_the_reverse() -> None:
    """11% of 400 is 42 to 46; the whole has 44, so the component has at most 44."""
    whole, part = check("44", "60"), check("11", "10", quantity="risk")
    assert part.tables.count == 5 * 5
    found = together([whole, part], [Belonging("components", 0, (1,))])
    assert found[1].tables.count == 3 * 5
    assert found[1].tables.narrowed
    assert not found[0].tables.narrowed


def test_groups_that_exclude_each_other() -> None:
    fine = together([check("200", "150"), check("150", "150"), check("50", "100")], [GROUPS])
    assert [notes(c) for c in fine] == [{}, {}, {}]
    over = together([check("200", "150"), check("150", "150"), check("60", "100")], [GROUPS])
    assert notes(over[2]) == {
        "intervention-events": ["The groups that exclude each other hold more people together than there are."]
    }


def test_percentages_of_groups_that_miss_a_hundred() -> None:
    sums = [("50.0", "40.0"), ("30.0", "40.0"), ("18.0", "20.0")]
    found = together([check(*pair, quantity="risk") for pair in sums], [GROUPS])
    assert notes(found[2]) == {"intervention-risk": ["The percentages of these groups do not add up to 100."]}


def test_the_same_estimate_at_two_outcomes() -> None:
    found = together([check("46", "67", ratio=True), check("46", "67", ratio=True)])
    assert notes(found[0]) == {}
    assert notes(found[1]) == {"ratio": ["The same numbers stand at another outcome."]}

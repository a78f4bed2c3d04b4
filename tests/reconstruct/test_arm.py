from __future__ import annotations

from decimal import ROUND_DOWN, ROUND_HALF_EVEN, ROUND_HALF_UP, Decimal

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from app.printed.claims import Arm
from app.reconstruct.arm import ArmFits, Run, arm_fits
from tests.claims_maker import arm_claims


def fits(**texts: str) -> ArmFits:
    return arm_fits("intervention", arm_claims("intervention", **texts))


def test_events_and_total() -> None:
    assert fits(events="46", total="418").runs == (Run(418, 46, 46),)


def test_events_and_others() -> None:
    assert fits(events="46", non_events="372").runs == (Run(418, 46, 46),)


def test_others_and_total() -> None:
    assert fits(non_events="372", total="418").runs == (Run(418, 46, 46),)


def test_percentage_and_total_with_one_count() -> None:
    assert fits(risk="11.0", total="418").runs == (Run(418, 46, 46),)


def test_percentage_and_total_with_several_counts() -> None:
    assert fits(risk="16", total="409").runs == (Run(409, 64, 67),)


def test_percentage_and_total_at_the_ends() -> None:
    assert fits(risk="0", total="409").runs == (Run(409, 0, 2),)
    assert fits(risk="100", total="409").runs == (Run(409, 407, 409),)


def test_percentage_and_events() -> None:
    found = fits(risk="11.0", events="46")
    assert found.runs == tuple(Run(total, 46, 46) for total in range(417, 421))


def test_percentage_and_others() -> None:
    found = fits(risk="11.0", non_events="372")
    assert [(run.total, run.first) for run in found.runs] == [(418, 46)]


def test_no_count_fits_tells_neighbours_and_totals() -> None:
    found = fits(risk="11.3", total="40")
    assert found.status == "none_fits"
    assert found.nearest == (4, 5)
    assert not found.usable
    for total in found.other_totals:
        assert fits(risk="11.3", total=str(total)).usable


def test_truncation_is_listed_apart() -> None:
    """1/69 printed 1.4% by rounding; 1.4% truncated also holds nothing more, but 15% of 40 does."""
    found = fits(risk="12", total="64")
    assert found.runs == (Run(64, 8, 8),) if found.if_truncated is None else found.if_truncated.first > found.runs[0].last


def test_count_only_under_truncation() -> None:
    found = fits(risk="66", total="3")
    assert found.status == "none_fits"
    assert found.if_truncated == Run(3, 2, 2)


def test_one_unit_in_the_last_digit_is_no_contradiction() -> None:
    """1/69 printed 1.5% (phrasebook, section 3: 4 of 262 printed percentages are one unit off)."""
    found = fits(events="1", total="69", risk="1.5")
    assert (found.status, found.last_digit) == ("fits", True)


def test_counts_against_percentage() -> None:
    found = fits(events="46", total="418", risk="12.0")
    assert found.status == "contradiction"
    assert found.runs == (Run(418, 46, 46),)


@pytest.mark.parametrize(
    "texts",
    [{"events": "50", "total": "40"}, {"events": "4", "non_events": "5", "total": "10"}, {"non_events": "9", "total": "8"}],
)
def test_outright_contradiction_has_no_runs(texts: dict[str, str]) -> None:
    found = fits(**texts)
    assert (found.status, found.runs) == ("contradiction", ())


@pytest.mark.parametrize(
    "texts", [{"events": "4"}, {"total": "40"}, {"risk": "4"}, {"events": "0", "risk": "0"}, {"events": "3", "risk": "0"}]
)
def test_too_little(texts: dict[str, str]) -> None:
    assert fits(**texts).status == "too_little"


def test_nothing() -> None:
    assert fits().status == "nothing"


@given(total=st.integers(1, 300), percent=st.integers(0, 1000), decimals=st.integers(0, 1))
def test_nothing_is_missed_and_nothing_invented(total: int, percent: int, decimals: int) -> None:
    """Against a scan of every count with decimal arithmetic, half-up and half-even both."""
    printed = Decimal(percent) / 10 if decimals else Decimal(percent // 10)
    unit = Decimal(1).scaleb(-decimals)

    def prints(events: int, rounding: str) -> bool:
        # 60 digits: the division does not itself move a half.
        share = Decimal(100 * events) / Decimal(total)
        return share.quantize(unit, rounding) == printed

    wanted = [k for k in range(total + 1) if prints(k, ROUND_HALF_UP) or prints(k, ROUND_HALF_EVEN)]
    found = fits(risk=f"{printed:.{decimals}f}", total=str(total))
    got = [k for run in found.runs for k in range(run.first, run.last + 1)]
    assert set(wanted) <= set(got)
    # Whatever more is in the closed half unit sits exactly on its edge.
    for k in set(got) - set(wanted):
        assert abs(Decimal(100 * k) / Decimal(total) - printed) == unit / 2
    cut = [k for k in range(total + 1) if prints(k, ROUND_DOWN) and k not in got]
    listed = [] if found.if_truncated is None else list(range(found.if_truncated.first, found.if_truncated.last + 1))
    assert listed == cut


@given(events=st.integers(1, 60), total=st.integers(1, 400))
def test_true_total_is_among_those_found(events: int, total: int) -> None:
    assume(events <= total)
    share = (Decimal(100 * events) / Decimal(total)).quantize(Decimal("0.1"), ROUND_HALF_UP)
    found = fits(events=str(events), risk=str(share))
    assert found.status == "too_little" or Run(total, events, events) in found.runs


INTERVENTION: Arm = "intervention"
WHOLE: list[tuple[dict[str, str], ArmFits]] = [
    ({"events": "46", "total": "418"}, ArmFits(INTERVENTION, "fits", (Run(418, 46, 46),), total=418)),
    ({"events": "0", "total": "1"}, ArmFits(INTERVENTION, "fits", (Run(1, 0, 0),), total=1)),
    ({"events": "9", "total": "9"}, ArmFits(INTERVENTION, "fits", (Run(9, 9, 9),), total=9)),
    ({"events": "50", "total": "40"}, ArmFits(INTERVENTION, "contradiction", total=40)),
    ({"events": "46", "total": "418", "risk": "11.0"}, ArmFits(INTERVENTION, "fits", (Run(418, 46, 46),), total=418)),
    (
        {"events": "46", "total": "418", "risk": "10.9"},
        ArmFits(INTERVENTION, "fits", (Run(418, 46, 46),), last_digit=True, total=418),
    ),
    (
        {"events": "46", "total": "418", "risk": "11.1"},
        ArmFits(INTERVENTION, "fits", (Run(418, 46, 46),), last_digit=True, total=418),
    ),
    ({"events": "46", "total": "418", "risk": "11.2"}, ArmFits(INTERVENTION, "contradiction", (Run(418, 46, 46),), total=418)),
    ({"risk": "11.0", "total": "418"}, ArmFits(INTERVENTION, "fits", (Run(418, 46, 46),), total=418)),
    (
        {"risk": "16", "total": "409"},
        ArmFits(INTERVENTION, "fits", (Run(409, 64, 67),), if_truncated=Run(409, 68, 69), total=409),
    ),
    # 6/53 and 7/62 are the fractions within 25 of 40 people that print 11.3%.
    (
        {"risk": "11.3", "total": "40"},
        ArmFits(INTERVENTION, "none_fits", nearest=(4, 5), other_totals=(53, 62), total=40),
    ),
    (
        {"risk": "66", "total": "3"},
        ArmFits(INTERVENTION, "none_fits", if_truncated=Run(3, 2, 2), nearest=(1, 2), other_totals=(), total=3),
    ),
    ({"risk": "1.2", "total": "9"}, ArmFits(INTERVENTION, "none_fits", nearest=(0, 1), total=9)),
    ({"risk": "99.4", "total": "3"}, ArmFits(INTERVENTION, "none_fits", nearest=(2, 3), total=3)),
    (
        {"events": "1", "risk": "2.0"},
        ArmFits(INTERVENTION, "fits", (Run(49, 1, 1), Run(50, 1, 1), Run(51, 1, 1))),
    ),
    ({"non_events": "372", "risk": "11.0"}, ArmFits(INTERVENTION, "fits", (Run(418, 46, 46),))),
    ({"non_events": "3", "risk": "100"}, ArmFits(INTERVENTION, "too_little")),
    ({"total": "40"}, ArmFits(INTERVENTION, "too_little", total=40)),
    ({}, ArmFits(INTERVENTION, "nothing")),
]


@pytest.mark.parametrize(("texts", "expected"), WHOLE)
def test_the_whole_answer(texts: dict[str, str], expected: ArmFits) -> None:
    assert fits(**texts) == expected


def test_claims_of_the_other_arm_are_left_alone() -> None:
    assert arm_fits("comparator", arm_claims("intervention", events="46", total="418")) == ArmFits("comparator", "nothing")

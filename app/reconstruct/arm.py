"""One arm: every (events, total) that its claims allow.

What an arm's claims allow is kept as runs: for each possible total the first and last count of events.
A run of ten million counts is three numbers.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from app.printed.claims import Arm, Claim, Quantity
from app.printed.span import Span

Status = Literal["nothing", "too_little", "fits", "none_fits", "contradiction"]

_NEIGHBOURS = 25  # how far from the printed total a total that would fit is looked for
_MOST_TOTALS = 20_000  # more possible totals than this are as good as none known


@dataclass(frozen=True, slots=True)
class Run:
    """The counts from `first` to `last` events among `total` people."""

    total: int
    first: int
    last: int

    @property
    def count(self) -> int:
        """How many counts the run holds."""
        return self.last - self.first + 1

    @property
    def middle(self) -> int:
        """A count in the middle of the run."""
        return (self.first + self.last) // 2


@dataclass(frozen=True, slots=True)
class ArmFits:
    """What one arm's claims allow.

    `status` is `nothing` (no claim), `too_little` (more is needed), `fits`, `none_fits` (no count
    among that total prints so) or `contradiction` (counts and percentage each make sense, not
    together; then `runs` follow the counts). `if_truncated` holds counts that would fit only if
    further digits were cut off; `nearest` the counts next to the percentage; `other_totals` totals
    near by that would fit. `last_digit` says that the percentage is one unit of its last digit off.
    """

    arm: Arm
    status: Status
    runs: tuple[Run, ...] = ()
    if_truncated: Run | None = None
    nearest: tuple[int, ...] = ()
    other_totals: tuple[int, ...] = ()
    last_digit: bool = False
    total: int | None = None

    @property
    def count(self) -> int:
        """How many (events, total) fit."""
        return sum(run.count for run in self.runs)

    @property
    def usable(self) -> bool:
        """Whether results can be computed from it."""
        return bool(self.runs)


def _risk_span(claim: Claim) -> Span:
    return claim.said.rounds_from().scaled(Fraction(1, 100))


def _units_off(claim: Claim, risk: Fraction) -> int:
    """0 if `risk` rounds to the printed percentage, 1 if it is at most one unit further, else 2."""
    span, unit = claim.said.rounds_from(), claim.said.unit_in_last_place
    percent = risk * 100
    if span.holds(percent):
        return 0
    return 1 if Span(span.low - unit, span.high + unit).holds(percent) else 2


def totals_of(people: int, share: Span) -> tuple[int, int] | None:
    """First and last total among which `people` are the given share; None if too many."""
    if people == 0 or share.low <= 0:
        return None
    first = max(people, -(-people * share.high.denominator // share.high.numerator))
    last = people * share.low.denominator // share.low.numerator
    return None if last - first >= _MOST_TOTALS else (first, last)


def _totals(people: int, share: Span) -> tuple[Run, ...] | None:
    """Those totals as runs of that one count."""
    ends = totals_of(people, share)
    return None if ends is None else tuple(Run(total, people, people) for total in range(ends[0], ends[1] + 1))


def _unknown_total(events: int | None, others: int | None, share: Span) -> tuple[Run, ...] | None:
    """Runs from one count and the printed share of events; None if they leave the total open."""
    if events is not None:
        return _totals(events, share)
    if others is None:
        return None
    mirrored = _totals(others, share.mirrored())
    return None if mirrored is None else tuple(Run(r.total, r.total - others, r.total - others) for r in mirrored)


def _from_counts(arm: Arm, events: int, others: int | None, total: int, risk: Claim | None) -> ArmFits:
    """The one count that is stated outright, and whether the percentage fits it."""
    if not 0 <= events <= total or total < 1 or (others is not None and events + others != total):
        return ArmFits(arm, "contradiction", total=total)
    slip = 0 if risk is None else _units_off(risk, Fraction(events, total))
    status: Status = "fits" if slip <= 1 else "contradiction"
    return ArmFits(arm, status, (Run(total, events, events),), last_digit=slip == 1, total=total)


def _from_total(arm: Arm, total: int, claim: Claim) -> ArmFits:
    """Every count among `total` that rounds to the printed percentage, and its neighbours if none does."""
    span = _risk_span(claim)
    first, last = span.scaled(Fraction(total)).whole(total)
    cut_first, cut_last = claim.said.truncates_from().scaled(Fraction(total, 100)).whole(total)
    cut_first = max(cut_first, last + 1)
    truncated = Run(total, cut_first, cut_last) if cut_first <= cut_last else None
    if first <= last:
        return ArmFits(arm, "fits", (Run(total, first, last),), truncated, total=total)
    below = claim.said.exact * total / 100
    near = below.numerator // below.denominator
    others = [
        candidate
        for candidate in range(max(1, total - _NEIGHBOURS), total + _NEIGHBOURS + 1)
        if (run := span.scaled(Fraction(candidate)).whole(candidate))[0] <= run[1]
    ]
    return ArmFits(
        arm,
        "none_fits",
        if_truncated=truncated,
        nearest=tuple(count for count in (near, near + 1) if 0 <= count <= total),
        other_totals=tuple(others),
        total=total,
    )


def _whole(claims: Mapping[Quantity, Claim], quantity: Quantity) -> int | None:
    claim = claims.get(quantity)
    return None if claim is None else int(claim.said.value)


def arm_fits(arm: Arm, claims: Iterable[Claim]) -> ArmFits:
    """Every (events, total) that the claims of one arm allow.

    Counts that contradict each other outright (events above their total, parts that do not add up) are
    for intake to refuse; here they give `contradiction` without runs. A percentage that is at most one
    unit of its last digit off does not contradict the counts: printed ones often are.
    """
    mine = {claim.quantity: claim for claim in claims if claim.arm == arm}
    if not mine:
        return ArmFits(arm, "nothing")
    events, others, total = (_whole(mine, q) for q in ("events", "non_events", "total"))
    risk = mine.get("risk")
    if total is None and events is not None and others is not None:
        total = events + others
    elif events is None and others is not None and total is not None:
        events = total - others
    if events is not None and total is not None:
        return _from_counts(arm, events, others, total, risk)
    if risk is None:
        return ArmFits(arm, "too_little", total=total)
    if total is not None:
        return _from_total(arm, total, risk)
    runs = _unknown_total(events, others, _risk_span(risk))
    if runs is None:
        return ArmFits(arm, "too_little")
    return ArmFits(arm, "fits" if runs else "none_fits", runs)

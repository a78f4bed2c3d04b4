"""What is stated of one outcome, sorted by what it bears on, and the search problem that any part of it poses."""

from __future__ import annotations

from collections.abc import Collection, Iterable
from dataclasses import dataclass, replace
from fractions import Fraction

from app.printed.claims import ARMS, Arm, Claim, Quantity
from app.printed.span import Span
from app.reconstruct.arm import Run, totals_of
from app.reconstruct.p_prints import asked_p
from app.reconstruct.prints import Timed, asked, oriented
from app.reconstruct.search import Problem, Question

_DENOMINATORS = ("analysed", None, "per_protocol", "treated", "safety", "randomised")
"""Which of several totals of an arm its counts and percentages are out of, first that is printed."""
_MOST_TOTALS = 20_000


@dataclass(frozen=True, slots=True)
class ArmStated:
    """The claims of one arm. `total` is its denominator, `other_totals` those of other analysis sets."""

    arm: Arm
    events: tuple[Claim, ...] = ()
    non_events: tuple[Claim, ...] = ()
    total: tuple[Claim, ...] = ()
    risks: tuple[Claim, ...] = ()
    rates: tuple[Claim, ...] = ()
    person_time: tuple[Claim, ...] = ()
    other_totals: tuple[Claim, ...] = ()
    modelled_risks: tuple[Claim, ...] = ()

    @property
    def claims(self) -> tuple[Claim, ...]:
        """All that a table of counts can be held against."""
        return self.events + self.non_events + self.total + self.risks + self.rates + self.person_time

    def time(self) -> float | None:
        """The printed person-time; None if not printed."""
        return float(self.person_time[0].said.exact) if self.person_time else None


@dataclass(frozen=True, slots=True)
class Stated:
    """All claims of one outcome. `comparator_first` says that the arms stand so in print."""

    arms: tuple[ArmStated, ArmStated]
    measures: tuple[Claim, ...]
    p_values: tuple[Claim, ...]
    combined: tuple[Claim, ...]
    both_events: tuple[Claim, ...]
    margins: tuple[Claim, ...]
    equal: bool
    comparator_first: bool

    @property
    def timed(self) -> Timed | None:
        """Person-time of both arms, if printed."""
        first, second = (arm.time() for arm in self.arms)
        return Timed(first, second) if first and second else None

    @property
    def counts(self) -> tuple[Claim, ...]:
        """The claims about counts: of either arm and of both."""
        return self.arms[0].claims + self.arms[1].claims + self.combined + self.both_events

    def ways(self, claim: Claim) -> Question:
        """The ways of taking a measure claim that its label allows; empty where counts say nothing of it."""
        question = asked(claim)
        if question is None or (question.meant in ("rate_ratio", "rate_difference") and self.timed is None):
            return ()
        ways = oriented(question, comparator_first=self.comparator_first)
        if question.meant == "risk_ratio" and self.timed is not None:
            ways += tuple(replace(way, meant="rate_ratio") for way in ways)
        return ways

    def problem(self, aside: Collection[str] = (), *, slips: bool = False, counts_only: bool = False) -> Problem:
        """The search that all claims but those set aside pose."""
        runs = _both_runs(self, aside, slips=slips)
        measures = () if counts_only else self.constraining(aside)
        bound = () if counts_only else self.constraining_p(aside)
        p_values = tuple(asked_p(c) for c in bound)
        combined = [c for c in self.combined if c.id not in aside]
        both = [c for c in self.both_events if c.id not in aside]
        return Problem(
            runs=runs,
            questions=tuple(self.ways(c) for c in measures),
            p_values=tuple(p for p in p_values if p is not None),
            timed=self.timed,
            combined=int(combined[0].said.value) if combined else None,
            both_events=int(both[0].said.value) if both else None,
            equal=self.equal,
            slips=slips,
        )

    @property
    def p_is_modelled(self) -> bool:
        """Whether a p goes with estimates that counts cannot give: hazard ratios, adjusted ones."""
        estimates = [c for c in self.measures if c.interval is not None and c.quantity != "number_needed_to_treat"]
        return bool(estimates) and all(c.quantity == "hazard_ratio" or not c.checkable for c in estimates)

    def constraining_p(self, aside: Collection[str] = ()) -> tuple[Claim, ...]:
        """The p values that tables are held against: tests of no difference on counts, as far as is said."""
        if self.p_is_modelled:
            return ()
        return tuple(c for c in self.p_values if c.id not in aside and _constrains_p(c))

    def constraining(self, aside: Collection[str] = ()) -> tuple[Claim, ...]:
        """The measure claims that tables are held against: crude or of unstated basis, with an estimate."""
        return tuple(c for c in self.measures if c.checkable and c.number is not None and c.id not in aside and self.ways(c))


def _constrains_p(claim: Claim) -> bool:
    return claim.checkable and claim.test in (None, "superiority") and claim.number is not None and claim.said.exact <= 1


def stated(claims: Iterable[Claim], *, equal: bool = False) -> Stated:
    """Sort the claims of one outcome."""
    listed = tuple(claims)
    measures = tuple(
        c
        for c in listed
        if c.arm is None
        and c.quantity not in ("events", "non_events", "total", "p_value", "margin", "risk", "rate", "person_time")
    )
    return Stated(
        arms=(_arm(listed, "intervention"), _arm(listed, "comparator")),
        measures=measures,
        p_values=tuple(c for c in listed if c.quantity == "p_value"),
        combined=tuple(c for c in listed if c.arm is None and c.quantity == "total"),
        both_events=tuple(c for c in listed if c.arm is None and c.quantity == "events"),
        margins=tuple(c for c in listed if c.quantity == "margin"),
        equal=equal,
        comparator_first=_comparator_first(listed),
    )


def _arm(claims: tuple[Claim, ...], arm: Arm) -> ArmStated:
    def of(*quantities: Quantity) -> tuple[Claim, ...]:
        ranged = "total" in quantities
        return tuple(
            c for c in claims if c.arm == arm and c.quantity in quantities and (c.number is not None or (ranged and c.interval))
        )

    totals = of("total")
    kinds = {c.total_kind for c in totals}
    chosen = next((kind for kind in _DENOMINATORS if kind in kinds), None)
    proportions = tuple(c for c in of("risk") if c.checkable)
    return ArmStated(
        arm,
        events=of("events"),
        non_events=of("non_events"),
        total=tuple(c for c in totals if c.total_kind == chosen),
        risks=proportions,
        rates=of("rate"),
        person_time=of("person_time"),
        other_totals=tuple(c for c in totals if c.total_kind != chosen),
        modelled_risks=tuple(c for c in of("risk") if c not in proportions),
    )


def _comparator_first(claims: tuple[Claim, ...]) -> bool:
    """Whether every number of the comparator stands before every number of the intervention arm in the text."""
    places = {arm: [c.span for c in claims if c.arm == arm and c.quantity != "total" and c.span is not None] for arm in ARMS}
    first, second = places["comparator"], places["intervention"]
    return bool(first) and bool(second) and max(end for _, end in first) <= min(start for start, _ in second)


# -- runs of counts -------------------------------------------------------------------------------------


def risk_span(claim: Claim, *, slips: bool) -> Span:
    """The risks that print so."""
    number = claim.said
    away = number.unit_in_last_place * (Fraction(3, 2) if slips else Fraction(1, 2))
    return Span(number.exact - away, number.exact + away).scaled(claim.factor)


def event_span(claim: Claim, time: Claim) -> Span:
    """The events that print so as a rate over the printed person-time."""
    return claim.said.rounds_from().scaled(claim.factor * time.said.exact)


def _total_range(claims: tuple[Claim, ...]) -> tuple[int, int] | None:
    """Smallest and largest denominator stated; None if none is."""
    low, high = 1, None
    for claim in claims:
        if claim.interval is not None and claim.interval.low is not None and claim.interval.high is not None:
            ends = int(claim.interval.low.value), int(claim.interval.high.value)
        elif claim.number is not None:
            ends = int(claim.said.value), int(claim.said.value)
        else:
            continue
        low, high = max(low, ends[0]), ends[1] if high is None else min(high, ends[1])
    return None if high is None else (low, high)


def _whole(claims: tuple[Claim, ...]) -> tuple[int, bool] | None:
    """The count that all these claims print, and whether they agree; None if there are none."""
    values = {int(c.said.value) for c in claims}
    return None if not values else (min(values), len(values) == 1)


def _kept(arm: ArmStated, aside: Collection[str]) -> ArmStated:
    def some(claims: tuple[Claim, ...]) -> tuple[Claim, ...]:
        return tuple(c for c in claims if c.id not in aside)

    return replace(
        arm,
        events=some(arm.events),
        non_events=some(arm.non_events),
        total=some(arm.total),
        risks=some(arm.risks),
        rates=some(arm.rates),
        person_time=some(arm.person_time),
    )


def arm_runs(
    arm: ArmStated, aside: Collection[str] = (), *, slips: bool = False, totals: range | None = None
) -> tuple[Run, ...] | None:
    """Counts that an arm's own claims allow, those set aside left out; None where they leave the total open.

    `totals` are the totals to consider where the arm states none.
    """
    arm = _kept(arm, aside)
    spans = [risk_span(c, slips=slips) for c in arm.risks]
    events, others = _whole(arm.events), _whole(arm.non_events)
    if (events and not events[1]) or (others and not others[1]):
        return ()
    considered = _totals_considered(arm, events, others, spans, totals)
    if considered is None:
        return None
    exact = [event_span(c, arm.person_time[0]) for c in arm.rates] if arm.person_time else []
    if events:
        exact.append(Span(Fraction(events[0]), Fraction(events[0])))
    runs = []
    for total in considered[:_MOST_TOTALS]:
        bounds = [*(span.scaled(Fraction(total)) for span in spans), *exact]
        if others:
            bounds.append(Span(Fraction(total - others[0]), Fraction(total - others[0])))
        ends = [span.whole(total) for span in bounds]
        first, last = max((low for low, _ in ends), default=0), min((high for _, high in ends), default=total)
        if first <= last:
            runs.append(Run(total, first, last))
    return tuple(runs)


def _totals_considered(
    arm: ArmStated,
    events: tuple[int, bool] | None,
    others: tuple[int, bool] | None,
    spans: list[Span],
    totals: range | None,
) -> range | None:
    """The totals that an arm may have; None if nothing bounds them."""
    whole = _total_range(arm.total)
    if whole is not None:
        return range(whole[0], whole[1] + 1)
    if events and others:
        both = events[0] + others[0]
        return range(max(1, both), both + 1)
    if (events or others) and spans:
        people = events or others or (0, True)
        found = totals_of(people[0], spans[0] if events else spans[0].mirrored())
        if found is not None:
            bounds = totals or range(found[0], found[1] + 1)
            return range(max(found[0], bounds.start), min(found[1] + 1, bounds.stop))
    return totals


def _both_runs(of: Stated, aside: Collection[str], *, slips: bool) -> tuple[tuple[Run, ...] | None, tuple[Run, ...] | None]:
    first, second = (arm_runs(arm, aside, slips=slips) for arm in of.arms)
    combined = next((int(c.said.value) for c in of.combined if c.id not in aside), None)
    ends: list[tuple[Run, ...] | None] = []
    for own, other, arm in ((first, second, of.arms[0]), (second, first, of.arms[1])):
        if own is not None:
            ends.append(own)
            continue
        totals = _totals_beside(other, combined, equal=of.equal)
        ends.append(arm_runs(arm, aside, slips=slips, totals=totals) if totals is not None else None)
    return ends[0], ends[1]


def _totals_beside(other: tuple[Run, ...] | None, combined: int | None, *, equal: bool) -> range | None:
    """Totals that an arm may have beside the other's, where both add up or are equal."""
    if combined is not None and combined <= _MOST_TOTALS:
        if other:
            sizes = [combined - run.total for run in other if run.total < combined]
            return range(min(sizes), max(sizes) + 1) if sizes else range(0)
        return range(1, combined)
    if equal and other:
        return range(min(run.total for run in other), max(run.total for run in other) + 1)
    return None

"""JSON bodies of counts -> tables and settings, or every problem at once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from app.appraisal.sheet import DESIGNS, Design, EventIs
from app.intake.body import SAID, Body
from app.measures.bayes import PRIORS
from app.measures.fourfold import Fourfold
from app.measures.persontime import PersonTime

ARM_NAMES = ("intervention", "comparator")
_COUNTS = '{"events": 46, "total": 418}'
_MOST_STRATA = 1000
_SHORTEST_TIME, _LONGEST_TIME = 1e-3, 1e9


@dataclass(frozen=True, slots=True)
class EffectsInput:
    """One fourfold table, the level, and what the event and the design are."""

    table: Fourfold
    confidence_level: float
    event_is: EventIs
    design: Design
    exact_unconditional: bool


@dataclass(frozen=True, slots=True)
class RatesInput:
    """Events, person-time and (where given) people of both arms, the level, and the person-time of a scaled copy."""

    data: PersonTime
    totals: tuple[int | None, int | None]
    confidence_level: float
    per: float


@dataclass(frozen=True, slots=True)
class StrataInput:
    """The strata and the level."""

    strata: Fourfold
    confidence_level: float


@dataclass(frozen=True, slots=True)
class ClusterInput:
    """A fourfold table, the level, cluster size and intracluster correlation."""

    table: Fourfold
    confidence_level: float
    cluster_size: float
    intracluster_correlation: float


@dataclass(frozen=True, slots=True)
class PairedInput:
    """Pairs with the event on one side only."""

    first_only: int
    second_only: int


@dataclass(frozen=True, slots=True)
class ProbabilityInput:
    """A fourfold table and the prior of both risks."""

    table: Fourfold
    prior: str


def _arm(body: Body, name: str) -> tuple[int, int]:
    """Events and total of one arm; 0 of 1 where they are refused."""
    arm = body.inner(name, ("events", "total"), _COUNTS)
    if not body.has(name):
        return 0, 1
    events, total = arm.whole("events"), arm.whole("total", 1)
    if events is None or total is None:
        return 0, 1
    if events > total:
        arm.add("events", f"{events} events are more than the {total} people.", "Check both numbers.", "count_exceeds_total")
        return 0, 1
    return events, total


def table_of(body: Body) -> Fourfold:
    """The counts of both arms of a body."""
    (a, n1), (c, n2) = (_arm(body, name) for name in ARM_NAMES)
    return Fourfold(a, n1, c, n2)


def effects_input(given: Any) -> EffectsInput:
    """Read the body of /effects.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, (*ARM_NAMES, "confidence_level", "event_is", "design", "per", "missing", "exact_unconditional"))
    table = table_of(body)
    body.number("per", _SHORTEST_TIME, _LONGEST_TIME, default=1.0)
    if body.has("missing"):
        missing = body.inner("missing", ARM_NAMES, '{"intervention": 14, "comparator": 13}')
        for name in ARM_NAMES:
            if missing.has(name):
                missing.whole(name)
    found = EffectsInput(
        table,
        body.confidence_level(),
        body.choice("event_is", SAID, "unwanted"),
        body.choice("design", DESIGNS, "trial"),
        body.flag("exact_unconditional"),
    )
    body.finish()
    return found


def rates_input(given: Any) -> RatesInput:
    """Read the body of /rates.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, (*ARM_NAMES, "confidence_level", "per"))
    cells: list[float] = []
    totals: list[int | None] = []
    for name in ARM_NAMES:
        arm = body.inner(name, ("events", "person_time", "total"), '{"events": 7, "person_time": 4412.0}')
        given_here = body.has(name)
        events = arm.whole("events") if given_here else 0
        time = arm.number("person_time", _SHORTEST_TIME, _LONGEST_TIME) if given_here else 1.0
        totals.append(arm.whole("total", 1) if given_here and arm.has("total") else None)
        cells += [events or 0, time or 1.0]
    level = body.confidence_level()
    per = body.number("per", _SHORTEST_TIME, _LONGEST_TIME, default=1.0) or 1.0
    body.finish()
    data = PersonTime(int(cells[0]), cells[1], int(cells[2]), cells[3])
    return RatesInput(data, (totals[0], totals[1]), level, per)


def strata_input(given: Any) -> StrataInput:
    """Read the body of /strata.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("strata", "confidence_level"))
    rows = [
        (*_arm(stratum, "intervention"), *_arm(stratum, "comparator"))
        for stratum in body.each("strata", ARM_NAMES, _MOST_STRATA)
    ]
    level = body.confidence_level()
    body.finish()
    return StrataInput(Fourfold(*zip(*rows, strict=True)), level)


def cluster_input(given: Any) -> ClusterInput:
    """Read the body of /cluster.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, (*ARM_NAMES, "confidence_level", "cluster_size", "intracluster_correlation"))
    table = table_of(body)
    size = body.number("cluster_size", 1.0, 1e9)
    correlation = body.number("intracluster_correlation", 0.0, 1.0)
    level = body.confidence_level()
    body.finish()
    return ClusterInput(table, level, size or 1.0, correlation or 0.0)


def paired_input(given: Any) -> PairedInput:
    """Read the body of /paired.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("first_only", "second_only"))
    first, second = body.whole("first_only"), body.whole("second_only")
    body.finish()
    return PairedInput(first or 0, second or 0)


def probability_input(given: Any) -> ProbabilityInput:
    """Read the body of /probability.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, (*ARM_NAMES, "prior"))
    found = ProbabilityInput(table_of(body), body.choice("prior", tuple(PRIORS), "uniform"))
    body.finish()
    return found

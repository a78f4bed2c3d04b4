"""What an appraisal takes in and gives back. Values only."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from typing import NamedTuple

from app.appraisal.sheet import Design, EventIs, FollowUp, PartOf, Trust
from app.measures.needed import RoundedNeeded, Segment
from app.measures.registry import EffectMethod, Measure, NoDifferenceTest, RiskMethod
from app.printed.claims import Claim
from app.reconstruct.arm import ArmFits
from app.reconstruct.tables import Fits
from app.reconstruct.verdict import OutcomeCheck
from app.transport.constant import Held


@dataclass(frozen=True, slots=True)
class StartingRisk:
    """A risk without the intervention, or a range of it, of people who are not the trial's; from 0 to 1."""

    name: str
    low: float
    high: float
    source: str = ""


@dataclass(frozen=True, slots=True)
class OutcomeInput:
    """One outcome: what is counted, and what is claimed of it."""

    claims: tuple[Claim, ...]
    event_is: EventIs = "not_said"
    horizon: str = ""
    follow_up: FollowUp = "not_said"
    confidence_level: float = 0.95
    design: Design = "trial"
    trust: Trust = ""
    part_of: PartOf = ""
    starting_risks: tuple[StartingRisk, ...] = ()


@dataclass(frozen=True, slots=True)
class AppraisalInput:
    """One paper: a list of outcomes, each a list of claims."""

    outcomes: tuple[OutcomeInput, ...]


SHARED = "shared-total"
"""Beginning of the id of a total taken over from the other outcomes of the paper."""


class Range(NamedTuple):
    """Smallest and largest value over all tables that fit; equal where one table fits. Nan if undefined."""

    low: float
    high: float

    @property
    def one(self) -> bool:
        """Whether there is one value only."""
        return self.low == self.high


class IntervalRange(NamedTuple):
    """Lower and upper limit, each as its range over the tables that fit."""

    low: Range
    high: Range


@dataclass(frozen=True, slots=True)
class MeasureAppraisal:
    """One measure over the tables that fit, the default method first."""

    estimate: Range
    intervals: tuple[tuple[EffectMethod, IntervalRange], ...]

    @property
    def default(self) -> IntervalRange:
        """The interval by the default method."""
        return next(interval for method, interval in self.intervals if method.default)


@dataclass(frozen=True, slots=True)
class RiskAppraisal:
    """The risk of one arm over the counts that fit, the default method first."""

    fits: ArmFits
    estimate: Range
    intervals: tuple[tuple[RiskMethod, IntervalRange], ...]


@dataclass(frozen=True, slots=True)
class NeededAppraisal:
    """Number needed to treat: the values nearest and furthest from 1, and the inverted interval.

    `exact` and `rounded` hold one value where one table fits or all agree in direction, else are
    empty: across no difference there is no one range. `segments` come from the hull of the default
    interval, `others` from those of the other methods.
    """

    exact: tuple[Fraction, Fraction] | None
    rounded: tuple[RoundedNeeded, RoundedNeeded] | None
    direction: str
    segments: tuple[Segment, ...]
    others: tuple[tuple[EffectMethod, tuple[Segment, ...]], ...]


@dataclass(frozen=True, slots=True)
class Note:
    """Something a reader must know: a slug for its sentence, and the evidence."""

    slug: str
    evidence: Mapping[str, object] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class BothArms:
    """What follows once both arms allow something."""

    intervention: RiskAppraisal
    comparator: RiskAppraisal
    fits: Fits
    measures: Mapping[Measure, MeasureAppraisal]
    needed: NeededAppraisal
    tests: tuple[tuple[NoDifferenceTest, Range], ...]


@dataclass(frozen=True, slots=True)
class Patients:
    """The effect of the one table that fits on the scales that may be held, and the trial's own comparator risk."""

    held: tuple[Held, ...]
    comparator_risk: float


@dataclass(frozen=True, slots=True)
class OutcomeAppraisal:
    """All that follows from one outcome's claims; None for what too little is claimed of."""

    input: OutcomeInput
    intervention: RiskAppraisal | None
    comparator: RiskAppraisal | None
    both: BothArms | None
    notes: tuple[Note, ...]
    check: OutcomeCheck
    patients: Patients | None = None


@dataclass(frozen=True, slots=True)
class Appraisal:
    """The outcomes appraised, in the order given."""

    outcomes: tuple[OutcomeAppraisal, ...]

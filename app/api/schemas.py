"""The documented shapes of requests and answers, one pair an endpoint."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from app.api.shapes import (
    Level,
    Limits,
    MeasureAnswer,
    NeededAnswer,
    Number,
    PAnswer,
    Probability,
    SegmentAnswer,
    Shape,
)
from app.measures.fourfold import LARGEST_TOTAL

EventIs = Literal["unwanted", "wanted"]
Scale = Literal["ratio", "difference"]
Events = Annotated[int, Field(ge=0, le=LARGEST_TOTAL)]
Total = Annotated[int, Field(ge=1, le=LARGEST_TOTAL)]
Positive = Annotated[float, Field(ge=1e-9, le=1e9)]


class ArmCounts(Shape):
    """Events and people of one arm."""

    events: Events
    total: Total


class MissingCounts(Shape):
    """People randomised whose outcome is not known, per arm. They take no part in the figures."""

    intervention: Events | None = None
    comparator: Events | None = None


class EffectsRequest(Shape):
    """One fourfold table."""

    intervention: ArmCounts
    comparator: ArmCounts
    confidence_level: Level = 0.95
    event_is: EventIs = "unwanted"
    design: Literal["trial", "cohort", "case_control"] = "trial"
    per: Annotated[float, Field(ge=1e-3, le=1e9)] = 1.0
    missing: MissingCounts | None = None
    exact_unconditional: bool = False


class RisksAnswer(Shape):
    """The risk of each arm."""

    intervention: MeasureAnswer
    comparator: MeasureAnswer


class NeededIntervalAnswer(Shape):
    """The inverted interval of one difference method."""

    method: str
    segments: list[SegmentAnswer]
    default: bool


class NeededWithIntervals(NeededAnswer):
    """Number needed to treat with its intervals."""

    intervals: list[NeededIntervalAnswer]


class EffectsOnly(Shape):
    """The measures of two arms; null where the design forbids one."""

    risk_difference: MeasureAnswer | None
    risk_ratio: MeasureAnswer | None
    odds_ratio: MeasureAnswer
    relative_risk_reduction: MeasureAnswer | None
    number_needed_to_treat: NeededWithIntervals | None


class Refusal(Shape):
    """A measure that the design forbids, and why."""

    measure: str
    why: str


class EffectsAnswer(Shape):
    """All that the counts alone give."""

    risks: RisksAnswer | None
    effects: EffectsOnly
    p_values: list[PAnswer]
    refused: list[Refusal]
    version: str


class ArmTime(Shape):
    """Events and person-time of one arm."""

    events: Events
    person_time: Annotated[float, Field(ge=1e-3, le=1e9)]
    total: Total | None = None


class RatesRequest(Shape):
    """Events over person-time; `per` only adds scaled copies."""

    intervention: ArmTime
    comparator: ArmTime
    confidence_level: Level = 0.95
    per: Annotated[float, Field(ge=1e-3, le=1e9)] = 1


class RatesOnly(Shape):
    """The rate of each arm, per unit of person-time."""

    intervention: MeasureAnswer
    comparator: MeasureAnswer


class Scaled(Shape):
    """The same times `per`."""

    per: float
    rates: RatesOnly
    rate_difference: MeasureAnswer


class RateSegment(Shape):
    """One side of its interval: towards fewer events or towards more."""

    direction: Literal["fewer", "more"]
    low: Number
    high: Number


class MeanFollowUp(Shape):
    """Person-time over people; null where the people are not given."""

    intervention: Number
    comparator: Number


class PersonTimeNeeded(Shape):
    """Person-time to one event fewer or more. It is no number of people needed to treat."""

    estimate: Number
    segments: list[RateSegment]
    assumes: str


class RatePAnswer(Shape):
    """P of no difference in rates by one test."""

    test: str
    p: Number
    default: bool


class RatesAnswer(Shape):
    """All that events over person-time give. No risk, and no number needed to treat."""

    rates: RatesOnly
    rate_ratio: MeasureAnswer
    rate_difference: MeasureAnswer
    scaled: Scaled
    mean_follow_up: MeanFollowUp
    person_time_needed: PersonTimeNeeded
    p_values: list[RatePAnswer]
    version: str


class Stratum(Shape):
    """One stratum."""

    intervention: ArmCounts
    comparator: ArmCounts


class StrataRequest(Shape):
    """Several tables of one comparison."""

    strata: Annotated[list[Stratum], Field(min_length=1, max_length=1000)]
    confidence_level: Level = 0.95


class StrataTestAnswer(Shape):
    """One test over strata."""

    test: str
    statistic: Number
    df: int
    p: Number


class StrataAnswer(Shape):
    """Pooled estimates and tests."""

    odds_ratio: MeasureAnswer
    risk_ratio: MeasureAnswer
    risk_difference: MeasureAnswer
    tests: list[StrataTestAnswer]
    version: str


class RatioLimits(Shape):
    """A ratio with its limits."""

    estimate: Positive
    low: Positive
    high: Positive


class HazardRequest(Shape):
    """A hazard ratio, and the comparator's risk (or survival) at the time."""

    hazard_ratio: RatioLimits
    comparator_risk: Probability | None = None
    comparator_survival: Probability | None = None
    ratio_is_for: Literal["event", "event_free"] = "event"
    event_is: EventIs = "unwanted"


class NeededWithSegments(NeededAnswer):
    """Number needed to treat with the segments of its one interval."""

    segments: list[SegmentAnswer]


class HazardAnswer(Shape):
    """Risk by the time, difference, and number needed to treat, the comparator's risk taken as known."""

    risk_with: Limits
    risk_difference: Limits
    number_needed_to_treat: NeededWithSegments
    assumes: str
    version: str


class BackRequest(Shape):
    """An estimate with its limits, or with its p."""

    scale: Scale
    estimate: float
    low: float | None = None
    high: float | None = None
    p: Annotated[float, Field(ge=1e-300, le=1)] | None = None
    confidence_level: Level = 0.95
    sides: Literal[1, 2] = 2


class BackAnswer(Shape):
    """What the other two follow from; by exact normal quantiles."""

    z: Number
    standard_error: Number
    p: Number
    low: Number
    high: Number
    version: str


class TranslateRequest(Shape):
    """A ratio, and starting risks."""

    odds_ratio: Annotated[float, Field(ge=0, le=1e9)] | None = None
    risk_ratio: Annotated[float, Field(ge=0, le=1e9)] | None = None
    starting_risks: Annotated[list[Probability], Field(min_length=1, max_length=1000)]


class Translated(Shape):
    """The ratio at one starting risk; `risk_with` is null where it would be above 1."""

    starting_risk: float
    possible: bool
    risk_with: Number
    difference: Number
    risk_ratio: Number


class TranslateAnswer(Shape):
    """The ratio at each starting risk."""

    risks: list[Translated]
    version: str


class EValueRequest(Shape):
    """An observational estimate."""

    reported: Literal["RR", "OR_common_outcome", "HR_common_outcome"]
    estimate: Positive
    low: Positive
    high: Positive


class EValueAnswer(Shape):
    """E-values of the estimate and of the limit nearer 1."""

    risk_ratio: Number
    e_value: Number
    e_value_of_limit: Number
    version: str


class AnyLimits(Shape):
    """An estimate with its limits."""

    estimate: float
    low: float
    high: float


class InteractionRequest(Shape):
    """Two independent estimates of one scale."""

    scale: Scale
    first: AnyLimits
    second: AnyLimits
    confidence_level: Level = 0.95


class InteractionAnswer(Shape):
    """Whether they differ: ratio of ratios or difference of differences, first over second."""

    contrast: Limits
    difference: Number
    standard_error: Number
    z: Number
    p: Number
    version: str


class ClusterRequest(Shape):
    """Counts of a cluster-randomised trial."""

    intervention: ArmCounts
    comparator: ArmCounts
    cluster_size: Annotated[float, Field(ge=1, le=1e9)]
    intracluster_correlation: Probability
    confidence_level: Level = 0.95


class EffectiveArm(Shape):
    """What an arm's counts are worth; not rounded."""

    events: float
    total: float


class ClusterAnswer(Shape):
    """Counts over the design effect, an approximation, and the risk ratio with its wider interval."""

    design_effect: float
    intervention: EffectiveArm
    comparator: EffectiveArm
    risk_ratio: Limits
    version: str


class PairedRequest(Shape):
    """Pairs with the event on one side only."""

    first_only: Events
    second_only: Events


class PairedAnswer(Shape):
    """P of no difference within pairs."""

    p_values: list[RatePAnswer]
    version: str


class ProbabilityRequest(Shape):
    """One fourfold table, and the prior of both risks."""

    intervention: ArmCounts
    comparator: ArmCounts
    prior: Literal["uniform", "jeffreys"] = "uniform"


class ProbabilityAnswer(Shape):
    """Posterior probability that the intervention's risk is the lower one."""

    probability_lower: Probability
    prior: str
    version: str

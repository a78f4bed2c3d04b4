"""The documented shapes of requests and answers."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import BaseModel, ConfigDict, Field

from app.measures.fourfold import LARGEST_TOTAL

Number = Annotated[float | Literal["inf", "-inf"] | None, Field(description='null is undefined, "inf" infinite')]


class _Shape(BaseModel):
    model_config = ConfigDict(extra="forbid")


class Problem(_Shape):
    """One thing that was refused."""

    field: str
    message: str
    hint: str
    slug: str


class Problems(_Shape):
    """The one shape of every error, whatever its status."""

    problems: list[Problem]


class ArmCounts(_Shape):
    """Events and people of one arm."""

    events: Annotated[int, Field(ge=0, le=LARGEST_TOTAL)]
    total: Annotated[int, Field(ge=1, le=LARGEST_TOTAL)]


class EffectsRequest(_Shape):
    """One fourfold table."""

    intervention: ArmCounts
    comparator: ArmCounts
    confidence_level: Annotated[float, Field(ge=0.5, le=0.9999)] = 0.95
    event_is: Literal["unwanted", "wanted"] = "unwanted"


class IntervalAnswer(_Shape):
    """Limits by one method; null where it is undefined."""

    method: str
    low: Number
    high: Number
    default: bool


class MeasureAnswer(_Shape):
    """An estimate with every registered interval."""

    estimate: Number
    intervals: list[IntervalAnswer]


class RisksAnswer(_Shape):
    """The risk of each arm."""

    intervention: MeasureAnswer
    comparator: MeasureAnswer


class SegmentAnswer(_Shape):
    """One side of an interval of the number needed to treat."""

    direction: Literal["benefit", "harm"]
    low: Number
    high: Number


class NeededIntervalAnswer(_Shape):
    """The inverted interval of one difference method."""

    method: str
    segments: list[SegmentAnswer]
    default: bool


class NeededAnswer(_Shape):
    """Number needed to treat: unrounded, rounded by its rule, with its direction."""

    estimate: Number
    rounded: float | None
    rule: Literal["up", "down"] | None
    direction: Literal["benefit", "harm", "none"]
    intervals: list[NeededIntervalAnswer]


class EffectsOnly(_Shape):
    """The measures of two arms."""

    risk_difference: MeasureAnswer
    risk_ratio: MeasureAnswer
    odds_ratio: MeasureAnswer
    relative_risk_reduction: MeasureAnswer
    number_needed_to_treat: NeededAnswer


class PAnswer(_Shape):
    """P of no difference by one test; log10_p stays right where p is too small for a number."""

    test: str
    p: Number
    log10_p: Number
    default: bool


class EffectsAnswer(_Shape):
    """All that the counts alone give."""

    risks: RisksAnswer
    effects: EffectsOnly
    p_values: list[PAnswer]
    version: str

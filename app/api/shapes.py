"""Shapes that several answers share, and the base that refuses unknown fields."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import BaseModel, ConfigDict, Field

Number = Annotated[float | Literal["inf", "-inf"] | None, Field(description='null is undefined, "inf" infinite')]
Level = Annotated[float, Field(ge=0.5, le=0.9999)]
Probability = Annotated[float, Field(ge=0, le=1)]


class Shape(BaseModel):
    """A documented object; a field it does not name is refused."""

    model_config = ConfigDict(extra="forbid")


class Problem(Shape):
    """One thing that was refused."""

    field: str
    message: str
    hint: str
    slug: str


class Problems(Shape):
    """The one shape of every error, whatever its status."""

    problems: list[Problem]


class Limits(Shape):
    """An estimate with its limits."""

    estimate: Number
    low: Number
    high: Number


class IntervalAnswer(Shape):
    """Limits by one method; null where it is undefined. `estimate` only where it is not the raw one."""

    method: str
    estimate: Number = None
    low: Number
    high: Number
    default: bool


class MeasureAnswer(Shape):
    """An estimate with every registered interval."""

    estimate: Number
    intervals: list[IntervalAnswer]


class SegmentAnswer(Shape):
    """One side of an interval of the number needed to treat."""

    direction: Literal["benefit", "harm"]
    low: Number
    high: Number


class NeededAnswer(Shape):
    """Number needed to treat: unrounded, rounded by its rule, with its direction."""

    estimate: Number
    rounded: float | None
    rule: Literal["up", "down"] | None
    direction: Literal["benefit", "harm", "none"]


class PAnswer(Shape):
    """P of no difference by one test; log10_p stays right where p is too small for a number."""

    test: str
    p: Number
    log10_p: Number
    default: bool

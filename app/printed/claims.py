"""A claim: one thing a paper says of one outcome, with the text it was printed as.

Typed boxes and pasted sentences both make claims; reconstruction only consumes them.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from app.printed.number import Kind, PrintedNumber

Arm = Literal["intervention", "comparator"]
ARMS: tuple[Arm, Arm] = ("intervention", "comparator")

Quantity = Literal[
    "events",
    "non_events",
    "total",
    "risk",
    "rate",
    "person_time",
    "risk_difference",
    "risk_ratio",
    "odds_ratio",
    "rate_ratio",
    "rate_difference",
    "hazard_ratio",
    "relative_risk_reduction",
    "relative_risk_increase",
    "number_needed_to_treat",
    "p_value",
    "margin",
]
QUANTITIES: tuple[Quantity, ...] = Quantity.__args__  # type: ignore[attr-defined]
COUNTS: tuple[Quantity, ...] = ("events", "non_events", "total")
PER_ARM: tuple[Quantity, ...] = (*COUNTS, "risk", "rate", "person_time")
RATIOS: tuple[Quantity, ...] = ("risk_ratio", "odds_ratio", "rate_ratio", "hazard_ratio")
REDUCTIONS: tuple[Quantity, ...] = ("relative_risk_reduction", "relative_risk_increase")

Operator = Literal["=", "<", ">", "<=", ">="]
OPERATORS: tuple[Operator, ...] = ("=", "<", ">", "<=", ">=")
Basis = Literal["crude", "adjusted", "time_to_event", "clustered", "imputed", "matched", "unstated"]
BASES: tuple[Basis, ...] = ("crude", "adjusted", "time_to_event", "clustered", "imputed", "matched", "unstated")
Sense = Literal["lower", "higher", "reduction", "increase"]
SENSES: tuple[Sense, ...] = ("lower", "higher", "reduction", "increase")
TestKind = Literal["superiority", "noninferiority", "interaction", "trend", "logrank"]
TEST_KINDS: tuple[TestKind, ...] = ("superiority", "noninferiority", "interaction", "trend", "logrank")
RiskKind = Literal["proportion", "kaplan_meier", "cumulative_incidence"]
RISK_KINDS: tuple[RiskKind, ...] = ("proportion", "kaplan_meier", "cumulative_incidence")
TotalKind = Literal["randomised", "treated", "analysed", "per_protocol", "safety"]
TOTAL_KINDS: tuple[TotalKind, ...] = ("randomised", "treated", "analysed", "per_protocol", "safety")
Place = Literal["abstract", "text", "table", "figure"]
PLACES: tuple[Place, ...] = ("abstract", "text", "table", "figure")
IntervalKind = Literal["confidence", "credible"]

_PER = re.compile(r"per_([0-9]{1,9})(?:_[a-z_]+)?")
_PARTS: dict[str, Fraction] = {
    "percent": Fraction(1, 100),
    "points": Fraction(1, 100),
    "proportion": Fraction(1),
    "people": Fraction(1),
    "person_years": Fraction(1),
}


def unit_factor(unit: str) -> Fraction | None:
    """What one of the unit is worth: 1/100 for per cent and points, 1/n for `per_n`; None if unknown."""
    found = _PER.fullmatch(unit)
    if found:
        return Fraction(1, int(found[1])) if int(found[1]) else None
    return _PARTS.get(unit)


def default_unit(quantity: Quantity) -> str:
    """The unit that a number of this quantity has where none is said."""
    if quantity in ("risk", *REDUCTIONS):
        return "percent"
    if quantity == "risk_difference":
        return "points"
    return "people" if quantity in COUNTS else "proportion"


def number_kind(quantity: Quantity) -> Kind:
    """How the printed numbers of this quantity are read."""
    if quantity in COUNTS:
        return "count"
    if quantity in ("risk_difference", "rate_difference", "number_needed_to_treat", "margin", *REDUCTIONS):
        return "signed"
    return "decimal"


@dataclass(frozen=True, slots=True)
class PrintedInterval:
    """An interval as printed; a limit that is None is not given (a one-sided bound). `span` is its place in a passage."""

    low: PrintedNumber | None
    high: PrintedNumber | None
    confidence_level: float = 0.95
    kind: IntervalKind = "confidence"
    level_assumed: bool = False
    span: tuple[int, int] | None = None

    @property
    def limits(self) -> tuple[PrintedNumber | None, PrintedNumber | None]:
        """Both limits, low first."""
        return self.low, self.high


@dataclass(frozen=True, slots=True)
class Claim:
    """What is printed of one quantity.

    `id` is unique within its outcome; for a typed box it is the name of its field. `number` is None
    for a bound printed without an estimate. `unit` is the unit of the printed numbers (`unit_factor`).
    """

    id: str
    quantity: Quantity
    arm: Arm | None
    number: PrintedNumber | None
    unit: str
    operator: Operator = "="
    interval: PrintedInterval | None = None
    basis: Basis = "unstated"
    sense: Sense | None = None
    test: TestKind | None = None
    sides: Literal[1, 2] | None = None
    risk_kind: RiskKind | None = None
    total_kind: TotalKind | None = None
    outcome: str | None = None
    horizon: str | None = None
    place: Place | None = None
    span: tuple[int, int] | None = None
    label: str | None = None

    @property
    def said(self) -> PrintedNumber:
        """The printed number of a claim that has one.

        Raises
        ------
        ValueError
            It prints a bound only.
        """
        if self.number is None:
            raise ValueError(f"{self.id} prints no estimate")
        return self.number

    @property
    def factor(self) -> Fraction:
        """What one of the printed unit is worth."""
        return unit_factor(self.unit) or Fraction(1)

    @property
    def value(self) -> Fraction | None:
        """The printed value as a plain number: a risk from 0 to 1, a ratio, a count."""
        return None if self.number is None else self.number.exact * self.factor

    @property
    def checkable(self) -> bool:
        """Whether counts can be held against it: neither adjusted nor modelled, as far as is said."""
        return self.basis in ("crude", "unstated") and self.risk_kind in (None, "proportion")

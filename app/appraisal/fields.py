"""The fields of a sheet: their names in a form, and what each asks for. Forms and messages read this."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from app.printed.claims import Quantity, RiskKind, TotalKind
from app.printed.number import Kind

ArmPart = Literal["events", "non_events", "total", "percentage"]


@dataclass(frozen=True, slots=True)
class NumberField:
    """A box for one printed number of an arm."""

    part: ArmPart
    quantity: Quantity
    kind: Kind
    label: str
    example: str


NUMBER_FIELDS: tuple[NumberField, ...] = (
    NumberField("events", "events", "count", "With the event", "46"),
    NumberField("non_events", "non_events", "count", "Without", "372"),
    NumberField("total", "total", "count", "Analysed", "418"),
    NumberField("percentage", "risk", "percentage", "Per cent", "11.0"),
)


@dataclass(frozen=True, slots=True)
class FigureKind:
    """A kind of further number: what it is called in the list, what it claims, and in what unit."""

    label: str
    quantity: Quantity
    unit: str
    example: str
    per_arm: bool = False
    interval: bool = True
    risk_kind: RiskKind | None = None
    total_kind: TotalKind | None = None


FIGURES: dict[str, FigureKind] = {
    "risk_ratio": FigureKind("risk ratio, relative risk (RR)", "risk_ratio", "proportion", "0.67"),
    "odds_ratio": FigureKind("odds ratio (OR)", "odds_ratio", "proportion", "0.63"),
    "hazard_ratio": FigureKind("hazard ratio (HR)", "hazard_ratio", "proportion", "0.65"),
    "rate_ratio": FigureKind("rate ratio", "rate_ratio", "proportion", "0.66"),
    "risk_difference": FigureKind("risk difference, points", "risk_difference", "points", "5.4"),
    "difference_proportion": FigureKind("risk difference, as a proportion", "risk_difference", "proportion", "0.054"),
    "difference_per_1000": FigureKind("fewer or more per 1000", "risk_difference", "per_1000", "54"),
    "relative_risk_reduction": FigureKind("relative reduction, %", "relative_risk_reduction", "percent", "33"),
    "relative_risk_increase": FigureKind("relative increase, %", "relative_risk_increase", "percent", "49"),
    "number_needed_to_treat": FigureKind("number needed to treat", "number_needed_to_treat", "people", "19"),
    "p_value": FigureKind("P", "p_value", "proportion", "0.024", interval=False),
    "total_both": FigureKind("people in both arms", "total", "people", "827", interval=False),
    "events_both": FigureKind("events in both arms", "events", "people", "113", interval=False),
    "percentage": FigureKind("percentage again, %", "risk", "percent", "11.0", per_arm=True, interval=False),
    "percentage_at_time": FigureKind(
        "percentage by Kaplan–Meier", "risk", "percent", "11.4", per_arm=True, interval=False, risk_kind="kaplan_meier"
    ),
    "randomised": FigureKind(
        "people randomised", "total", "people", "427", per_arm=True, interval=False, total_kind="randomised"
    ),
    "person_years": FigureKind("person-years", "person_time", "person_years", "402", per_arm=True, interval=False),
    "rate_per_100": FigureKind(
        "rate per 100 person-years", "rate", "per_100_person_years", "11.4", per_arm=True, interval=False
    ),
    "rate_per_1000": FigureKind(
        "rate per 1000 person-years", "rate", "per_1000_person_years", "114", per_arm=True, interval=False
    ),
    "rate_per_10000": FigureKind(
        "rate per 10 000 person-years", "rate", "per_10000_person_years", "1140", per_arm=True, interval=False
    ),
    "rate_per_100000": FigureKind(
        "rate per 100 000 person-years", "rate", "per_100000_person_years", "11400", per_arm=True, interval=False
    ),
    "risk_per_1000": FigureKind("events per 1000 people", "risk", "per_1000", "110", per_arm=True, interval=False),
    "risk_per_100000": FigureKind("events per 100 000 people", "risk", "per_100000", "11000", per_arm=True, interval=False),
}
"""The further numbers a sheet can hold. A key, once released, is never renamed."""

TEXT_LIMIT = 4000
"""Longest text kept of one field; longer is refused with a message."""


def arm_field(outcome: int, arm: int, part: str) -> str:
    """Form name of a box of one arm of one outcome."""
    return f"outcome-{outcome}-arm-{arm}-{part}"


def outcome_field(outcome: int, part: str) -> str:
    """Form name of a field of one outcome."""
    return f"outcome-{outcome}-{part}"


def arm_name_field(arm: int) -> str:
    """Form name of the name of an arm."""
    return f"arm-{arm}-name"


def figure_field(outcome: int, key: str, part: str) -> str:
    """Form name of a part of a further number of one outcome."""
    return f"outcome-{outcome}-figure-{key}-{part}"


def risk_field(outcome: int, key: str, part: str) -> str:
    """Form name of a part of a group of the reader's patients."""
    return f"outcome-{outcome}-risk-{key}-{part}"

"""A further number as typed -> a claim, or what is wrong with it."""

from __future__ import annotations

import re

from app.appraisal.fields import FIGURES, FigureKind, figure_field
from app.appraisal.sheet import TypedFigure
from app.errors import FieldProblem, PrintedProblem
from app.intake.problems import printed_problem, problem
from app.measures.fourfold import LARGEST_TOTAL
from app.printed.claims import Claim, Operator, PrintedInterval, number_kind
from app.printed.number import PrintedNumber, read_number

MOST_FIGURES = 40
"""Most further numbers of one outcome."""

_OPERATOR = re.compile(r"^\s*(?:[pP]\s*)?(?P<sign><=|>=|<|>|=|≤|≥)?\s*")
_SIGNS: dict[str, Operator] = {"<": "<", ">": ">", "<=": "<=", ">=": ">=", "≤": "<=", "≥": ">=", "=": "="}


def _read(name: str, kind: FigureKind, text: str) -> tuple[PrintedNumber | None, list[FieldProblem]]:
    if not text.strip():
        return None, []
    try:
        number = read_number(text, number_kind(kind.quantity))
    except PrintedProblem as refused:
        return None, [printed_problem(name, refused, kind.example)]
    if abs(number.value) > LARGEST_TOTAL or abs(number.decimals) > 40:
        return None, [problem(name, "count_too_large")]
    if kind.quantity == "risk" and number.value > 100:
        return None, [problem(name, "percentage_above_100")]
    if kind.quantity in ("total", "person_time") and number.value == 0:
        return None, [problem(name, "total_is_zero", example=kind.example)]
    return number, []


def read_figure(outcome: int, figure: TypedFigure, horizon: str) -> tuple[Claim | None, list[FieldProblem]]:
    """The claim that a typed figure makes; None where it is empty or refused."""
    kind = FIGURES[figure.kind]

    def name(part: str) -> str:
        return figure_field(outcome, figure.key, part)

    found = _OPERATOR.match(figure.value)
    sign = found["sign"] if found and kind.quantity == "p_value" else None
    bare = figure.value[found.end() :] if found and kind.quantity == "p_value" else figure.value
    number, problems = _read(name("value"), kind, bare)
    interval = None
    if kind.interval:
        (low, wrong_low), (high, wrong_high) = (_read(name(part), kind, getattr(figure, part)) for part in ("low", "high"))
        problems += wrong_low + wrong_high
        if low is not None and high is not None and low.exact > high.exact:
            problems.append(problem(name("low"), "limits_reversed", low=low.text.strip(), high=high.text.strip()))
        elif low is not None or high is not None:
            interval = PrintedInterval(low, high, float(figure.level) / 100)
    if (number is not None or interval is not None) and kind.per_arm and not figure.arm:
        problems.append(problem(name("arm"), "which_arm"))
    if problems or (number is None and interval is None):
        return None, problems
    claim = Claim(
        id=name("value"),
        quantity=kind.quantity,
        arm=figure.arm or None if kind.per_arm else None,
        number=number,
        unit=kind.unit,
        operator=_SIGNS[sign] if sign else "=",
        interval=interval,
        basis=figure.basis,
        sense=figure.word or None,  # type: ignore[arg-type]
        test=figure.test or None,
        risk_kind=kind.risk_kind,
        total_kind=kind.total_kind,
        horizon=horizon or None,
        place=figure.place or None,
        label=figure.label.strip() or None,
    )
    return claim, []

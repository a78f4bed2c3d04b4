"""Marks to claims: numbers as pasted, units, basis, level, and what a test is of."""

from __future__ import annotations

import re
from collections.abc import Iterator
from decimal import Decimal
from typing import Literal

from app.errors import PrintedProblem
from app.printed.claims import (
    Arm,
    Basis,
    Claim,
    Operator,
    PrintedInterval,
    Quantity,
    RiskKind,
    Sense,
    TestKind,
    number_kind,
)
from app.printed.number import PrintedNumber, read_number
from app.reading.grammar import Mark
from app.reading.marks import Estimate
from app.reading.sentences import sentence_of
from app.reading.text import Even
from app.reading.words import value_of


class Writer:
    """Makes the claims of one passage."""

    def __init__(self, passage: Even) -> None:
        self.even = passage
        self.made = 0
        self.read: list[tuple[int, int]] = []

    def number(self, start: int, end: int, quantity: Quantity) -> PrintedNumber | None:
        """A number by its even text, kept as it was pasted."""
        plain = self.even.text[start:end].strip()
        printed = self.even.printed(start, end).strip()
        word = value_of(plain) if plain[:1].isalpha() else None
        if word is not None:
            return PrintedNumber(printed, Decimal(word), 0)
        signed = re.sub(r"^([-\u2212\u2013+])\s+", r"\1", plain).replace("\u2009", "").replace(" ", "")
        try:
            found = read_number(re.sub(r"(?<=\d),(?=\d{3})", "", signed), number_kind(quantity))
        except PrintedProblem:
            return None
        return PrintedNumber(printed, found.value, found.decimals)

    def claim(self, mark: Mark, part: str, quantity: Quantity, arm: Arm | None, unit: str, **more: object) -> Claim | None:
        """One claim of one part of a mark."""
        start, end = mark.parts[part]
        number = self.number(start, end, quantity)
        if number is None:
            return None
        self.made += 1
        self.read.append((start, end))
        plain = self.even.text[start:end]
        lead = len(plain) - len(plain.lstrip())
        span = self.even.span(start + lead, start + lead + len(plain.strip()))
        return Claim(f"n{self.made}", quantity, arm, number, unit, span=span, **more)  # type: ignore[arg-type]


def arm_claims(write: Writer, mark: Mark, arm: Arm, kind: RiskKind | None) -> Iterator[Claim | None]:
    """Counts, total and percentage of one arm."""
    if "events" in mark.parts:
        yield write.claim(mark, "events", "events", arm, "people")
    if "total" in mark.parts:
        yield write.claim(mark, "total", "total", arm, "people")
    if "percent" in mark.parts:
        yield write.claim(mark, "percent", "risk", arm, "percent", risk_kind=kind)


_TESTS: tuple[tuple[str, TestKind], ...] = (
    ("noninferiority", "noninferiority"),
    ("non-inferiority", "noninferiority"),
    ("interaction", "interaction"),
    ("trend", "trend"),
    ("superiority", "superiority"),
)


def p_claim(write: Writer, mark: Mark, basis: Basis) -> Claim | None:
    """A p value, with its bound and what it is a test of."""
    text = write.even.text
    around = " ".join(mark.text(text, part) for part in ("kind", "tail") if part in mark.parts).lower()
    around += re.split(r"[()\[\]]", text[max(0, mark.start - 60) : mark.start])[-1].lower()
    test = next((kind for word, kind in _TESTS if word in around), None)
    sign = mark.text(text, "operator").strip() if "operator" in mark.parts else "="
    operators: dict[str, Operator] = {"<": "<", ">": ">", "=": "=", "≤": "<=", "≥": ">=", "< or =": "<=", "> or =": ">="}
    return write.claim(mark, "value", "p_value", None, "proportion", operator=operators.get(sign, "="), test=test, basis=basis)


def _interval(write: Writer, mark: Mark, quantity: Quantity) -> PrintedInterval | None:
    text = write.even.text
    if mark.rule == "bound":
        return _bound(write, mark, quantity)
    low, high = (write.number(*mark.parts[part], quantity) for part in ("low", "high"))
    if low is None or high is None:
        return None
    write.read += [mark.parts["low"], mark.parts["high"]]
    if low.exact > high.exact:
        low, high = high, low
    stated = [mark.text(text, part) for part in ("level", "after") if part in mark.parts]
    level = float(stated[0]) / 100 if stated else 0.95
    lead = text[mark.start : mark.parts["low"][0]].lower()
    kind: Literal["confidence", "credible"] = (
        "credible" if "credible" in lead or "cri" in lead or "bci" in lead else "confidence"
    )
    level = level if 0.5 <= level < 1.0 else 0.95
    first, last = (write.even.span(*mark.parts[part]) for part in ("low", "high"))
    return PrintedInterval(low, high, level, kind, level_assumed=not stated, span=(first[0], last[1]))


def _bound(write: Writer, mark: Mark, quantity: Quantity) -> PrintedInterval | None:
    """One limit alone, with the level it is printed at."""
    text = write.even.text
    limit = write.number(*mark.parts["value"], quantity)
    if limit is None:
        return None
    write.read.append(mark.parts["value"])
    stated = [mark.text(text, part) for part in ("level", "after") if part in mark.parts]
    level = float(stated[0]) / 100 if stated else 0.95
    low, high = (None, limit) if mark.text(text, "side").lower() == "upper" else (limit, None)
    span = write.even.span(*mark.parts["value"])
    return PrintedInterval(low, high, level if 0.5 <= level < 1.0 else 0.95, level_assumed=not stated, span=span)


def _unit(estimate: Estimate, quantity: Quantity, text: str) -> str:
    mark = estimate.mark
    shown = mark.text(text, "unit").lower() if "unit" in mark.parts else ""
    if quantity == "risk_difference":
        after = text[mark.end : mark.end + 60].lower()
        if "per 1" in shown:
            return "per_1000"
        if "point" in shown or "percentage point" in after:
            return "points"
        number = mark.text(text, "value").lstrip("-\u2212\u2013+ ")
        return "percent" if "%" in shown or "%" in after[:40] or not number.startswith(("0.", ".")) else "proportion"
    if quantity in ("relative_risk_reduction", "relative_risk_increase"):
        return "percent"
    return "people" if quantity == "number_needed_to_treat" else "proportion"


def basis_of(estimate: Estimate, text: str) -> Basis:
    """Crude, adjusted or clustered, by the words before an estimate."""
    start, _ = sentence_of(text, estimate.mark.start)
    before = text[max(start, estimate.mark.start - 45) : estimate.mark.parts["value"][0]].lower()
    label = before[-30:]
    if "unadjusted" in before or "crude" in before:
        return "crude"
    if "adjusted" in before or re.search(r"\ba(?:or|rr|hr)\b", label):
        return "adjusted"
    if re.search(r"cluster", text[start : sentence_of(text, estimate.mark.start)[1]], re.IGNORECASE):
        return "clustered"
    return "unstated"


_RELATIVE = re.compile(r"[ ]*%?,?[ ]+(?:a[ ]+|the[ ]+)?relative[ ]+(?:risk[ ]+)?(?:reduction|decrease)", re.IGNORECASE)


def measure_claim(write: Writer, estimate: Estimate, sense: Sense | None) -> Claim | None:
    """An estimate with its interval."""
    text = write.even.text
    quantity = estimate.mark.quantity
    if quantity is None:
        return None
    if quantity == "risk_difference" and _RELATIVE.match(text, estimate.mark.end):
        quantity = "relative_risk_reduction"  # "-0.4%, a relative reduction": the words after it say what it is
    basis = basis_of(estimate, text)
    unit = _unit(estimate, quantity, text)
    label = text[estimate.mark.start : estimate.mark.parts["value"][0]].strip(" ,:;=(") or None
    if quantity == "risk_difference" and label and label.upper().startswith("ARR"):
        value = write.number(*estimate.mark.parts["value"], "risk_difference")
        plain = unit == "proportion" or "%" not in text[estimate.mark.start : estimate.mark.end + 30]
        if value is not None and estimate.interval is not None and plain and 0.1 < float(value.value) < 10:
            quantity, unit, basis = "risk_ratio", "proportion", "adjusted"  # adjusted relative risk
    interval = _interval(write, estimate.interval, quantity) if estimate.interval is not None else None
    if interval is not None and interval.kind == "credible" and basis == "unstated":
        basis = "adjusted"  # from a model with a prior
    return write.claim(estimate.mark, "value", quantity, None, unit, interval=interval, basis=basis, sense=sense, label=label)


def rate_claims(write: Writer, mark: Mark, arm: Arm) -> Iterator[Claim | None]:
    """A rate over person-time, or a risk per so many people, with the events and person-time that stand before it."""
    text = write.even.text
    if "events" in mark.parts:
        yield write.claim(mark, "events", "events", arm, "people")
    if "time" in mark.parts:
        yield write.claim(mark, "time", "person_time", arm, "person_years")
    per = mark.text(text, "per").replace(",", "").replace(" ", "")
    timed = re.search(r"year|month|day|pyr", mark.text(text, "what"), re.IGNORECASE)
    yield write.claim(mark, "value", "rate" if timed else "risk", arm, f"per_{per}_person_years" if timed else f"per_{per}")

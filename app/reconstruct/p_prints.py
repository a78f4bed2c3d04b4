"""Which p values tables print: by every registered test, as a printed p or a bound."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from app.measures.fourfold import Flags, Floats, Fourfold
from app.measures.registry import RATE_TESTS, TESTS, NoDifferenceTest, RateTest
from app.printed.claims import Claim
from app.printed.number import PrintedNumber
from app.reconstruct.prints import SLOW, Match, Timed, take
from app.reconstruct.window import Window, rounding


@dataclass(frozen=True, slots=True)
class AskedP:
    """A printed p: its number or bound, and whether it is one-sided."""

    number: PrintedNumber
    operator: str
    sides: int = 2

    @property
    def two_sided(self) -> int:
        """By how much the printed p is multiplied to be two-sided."""
        return 2 if self.sides == 1 else 1


def asked_p(claim: Claim) -> AskedP | None:
    """The p that a claim prints; None if it prints none."""
    if claim.quantity != "p_value" or claim.number is None:
        return None
    return AskedP(claim.number, claim.operator, claim.sides or 2)


def p_window(question: AskedP) -> Window:
    """The p values that print so, as two-sided p."""
    value = float(question.number.exact)
    half = rounding(question.number)
    if question.operator == "=":
        window = Window(max(half.low, 0.0), half.high)
        if value == 0.0:
            window = Window(0.0, half.high)
    elif question.operator in ("<", "<="):
        window = Window(0.0, value)
    else:
        window = Window(value, 1.0 + 1e-9)
    return Window(window.low * question.two_sided, window.high * question.two_sided)


AnyTest = NoDifferenceTest | RateTest


def tests(use: str, timed: Timed | None) -> tuple[AnyTest, ...]:
    """Registered tests of one printed use that take no request, rates only where person-time is printed."""
    listed: list[AnyTest] = [t for t in TESTS if t.printed_use == use and not t.on_request]
    if timed is not None:
        listed += [t for t in RATE_TESTS if t.printed_use == use]
    return tuple(sorted(listed, key=lambda test: test.key in SLOW))


def p_of(test: AnyTest, tables: Fourfold, timed: Timed | None) -> Floats:
    """P of each table by one test."""
    if isinstance(test, NoDifferenceTest):
        return test.p(tables)
    if timed is None:
        raise ValueError("a test of rates needs person-time")
    return np.asarray(test.p(timed.of(tables)))


def p_matches(question: AskedP, tables: Fourfold, timed: Timed | None = None, *, seldom: bool = True) -> Match:
    """Judge a printed p against many tables (1-d): by a usual test, or only by a seldom one."""
    window = p_window(question)
    nothing = np.zeros(tables.events_intervention.shape, dtype=np.bool_)
    found: list[Flags] = []
    for use in ("usual", "seldom") if seldom else ("usual",):
        held = np.zeros(tables.events_intervention.shape, dtype=np.bool_)
        for test in tests(use, timed):
            open_rows = ~held if use == "usual" else ~(held | found[0])
            if open_rows.any():
                held[open_rows] = window.holds(p_of(test, take(tables, open_rows), timed))
        found.append(held)
    return Match(found[0], found[0], found[1] if seldom else nothing, found[0], found[0])

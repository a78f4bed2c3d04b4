"""Other readings: what a number may be when it is not what it is called. Each is another way to ask the same tables."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from app.measures.fourfold import Floats, Fourfold
from app.printed.claims import RATIOS, REDUCTIONS, Claim
from app.reconstruct.p_prints import AskedP, asked_p, p_matches, p_of, p_window, tests
from app.reconstruct.prints import Asked, asked, matches
from app.reconstruct.stated import Stated, risk_span
from app.reconstruct.verdict import Reading
from app.reconstruct.window import exact, significant_digits

OTHER_LEVELS = (0.90, 0.95, 0.99, 0.98, 0.975, 0.995, 0.999)
_HUNDREDTH = Fraction(1, 100)
_THOUSANDTH = Fraction(1, 1000)


@dataclass(frozen=True, slots=True)
class Alternative:
    """One other reading, or a likely pair of them, and how the claim is then asked."""

    readings: tuple[Reading, ...]
    asked: Asked


def alternatives(claim: Claim) -> Iterator[Alternative]:
    """Every other reading of a measure claim, single ones first."""
    face = asked(claim)
    if face is None:
        return
    yield from _turned(face)
    yield from _another_measure(claim, face)
    yield from _another_unit(claim, face)
    yield from _pairs(claim, face)
    if face.interval is not None:
        for level in OTHER_LEVELS:
            if abs(level - face.interval.confidence_level) > 1e-6:
                for way in (face, replace(face, sign="opposite")) if face.additive else (face,):
                    yield Alternative(
                        ("other_confidence_level",), replace(way, interval=replace(face.interval, confidence_level=level))
                    )


def _turned(face: Asked) -> Iterator[Alternative]:
    """The other way round: arms swapped, the other face counted, the sign turned."""
    if face.shown == "needed":
        return
    if face.meant in ("risk_difference", "rate_difference"):
        yield Alternative(("opposite_sign",), replace(face, sign="opposite"))
        return
    swapped = replace(face, swapped=True)
    both: tuple[Reading, ...] = ("arms_swapped", "complement_outcome") if face.meant == "odds_ratio" else ("arms_swapped",)
    yield Alternative(both, swapped)
    if face.meant == "risk_ratio":
        yield Alternative(("complement_outcome",), replace(face, complement=True))
    if face.additive:
        yield Alternative(both, replace(swapped, sign="opposite"))
        if face.meant == "risk_ratio":
            yield Alternative(("complement_outcome",), replace(face, complement=True, sign="opposite"))


def _another_measure(claim: Claim, face: Asked) -> Iterator[Alternative]:
    if face.meant == "risk_ratio":
        odds = replace(face, meant="odds_ratio")
        yield Alternative(("odds_ratio_called_risk_ratio",), odds)
        if face.additive:
            yield Alternative(("odds_ratio_called_risk_ratio",), replace(odds, sign="opposite"))
    if face.meant == "odds_ratio":
        yield Alternative(("risk_ratio_called_odds_ratio",), replace(face, meant="risk_ratio"))
    if claim.quantity in REDUCTIONS:
        yield Alternative(("ratio_read_as_reduction",), replace(face, shown="plain"))
    if claim.quantity in RATIOS:
        yield Alternative(("reduction_read_as_ratio",), replace(face, shown="reduction"))
        yield Alternative(("reduction_read_as_ratio",), replace(face, shown="increase"))


def _another_unit(claim: Claim, face: Asked) -> Iterator[Alternative]:
    if claim.quantity in REDUCTIONS:
        points = replace(face, meant="risk_difference", shown="plain", factor=_HUNDREDTH)
        yield Alternative(("points_called_percent",), points)
        yield Alternative(("points_called_percent",), replace(points, sign="opposite"))
    if claim.quantity == "risk_difference" and face.factor == _HUNDREDTH:
        relative = replace(face, meant="risk_ratio", shown="reduction")
        yield Alternative(("percent_called_points",), relative)
        yield Alternative(("percent_called_points",), replace(relative, sign="opposite"))
        yield Alternative(("per_thousand_called_percent",), replace(face, factor=_THOUSANDTH))
        yield Alternative(("per_thousand_called_percent",), replace(face, factor=_THOUSANDTH, sign="opposite"))


def _pairs(claim: Claim, face: Asked) -> Iterator[Alternative]:
    """Two slips that are likely to come together."""
    if face.meant == "risk_ratio":
        odds = replace(face, meant="odds_ratio")
        yield Alternative(("odds_ratio_called_risk_ratio", "arms_swapped"), replace(odds, swapped=True))
        if claim.quantity in REDUCTIONS:
            yield Alternative(("ratio_read_as_reduction", "odds_ratio_called_risk_ratio"), replace(odds, shown="plain"))
            yield Alternative(("ratio_read_as_reduction", "arms_swapped"), replace(face, shown="plain", swapped=True))
        if claim.quantity == "risk_ratio":
            yield Alternative(("reduction_read_as_ratio", "odds_ratio_called_risk_ratio"), replace(odds, shown="reduction"))
    if face.meant == "odds_ratio":
        yield Alternative(("risk_ratio_called_odds_ratio", "arms_swapped"), replace(face, meant="risk_ratio", swapped=True))
        yield Alternative(
            ("risk_ratio_called_odds_ratio", "complement_outcome"), replace(face, meant="risk_ratio", complement=True)
        )


# -- which of them hold ---------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class Found:
    """The readings named on enough evidence, those that are only possible, and the way the first is asked."""

    named: tuple[Reading, ...] = ()
    possible: tuple[Reading, ...] = ()
    asked: Asked | None = None


def readings_of(claim: Claim, of: Stated, tables: Fourfold) -> Found:
    """Try every other reading of a measure claim on the tables.

    A reading is named if it explains estimate and interval, or three significant digits, or equals
    another printed figure of the outcome; else it is possible.
    """
    named: list[Reading] = []
    possible: list[Reading] = []
    first: Asked | None = None
    for alternative in alternatives(claim):
        if named and len(alternative.readings) > 1:
            break  # a pair is tried only where no single reading is named
        match = matches(alternative.asked, tables, of.timed, seldom=False)
        if not match.estimate.any():
            continue
        other_level = alternative.readings == ("other_confidence_level",)
        interval = claim.interval is not None and bool((match.exact if other_level else match.exact | match.near).any())
        if interval or (not other_level and _enough_alone(claim, alternative, of)):
            named += alternative.readings
            first = first or alternative.asked
        elif not other_level:
            possible += alternative.readings
    if named[:1] == ["other_confidence_level"]:
        named = named[:1]
    return Found(_once(named), tuple(r for r in _once(possible) if r not in named), first)


def _once(readings: Sequence[Reading]) -> tuple[Reading, ...]:
    return tuple(dict.fromkeys(readings))


def _enough_alone(claim: Claim, alternative: Alternative, of: Stated) -> bool:
    """Whether the estimate alone is evidence: three significant digits, or another printed figure equal to it."""
    if claim.interval is None and claim.number is not None and significant_digits(claim.number) >= 3:
        return True
    return equals_another(claim, alternative.readings[0], of)


def equals_another(claim: Claim, reading: Reading, of: Stated) -> bool:
    """Whether another printed figure of the outcome is what the reading takes this one for."""
    wanted: dict[Reading, tuple[str, ...]] = {
        "ratio_read_as_reduction": RATIOS,
        "reduction_read_as_ratio": REDUCTIONS,
        "points_called_percent": ("risk_difference",),
        "percent_called_points": REDUCTIONS,
        "hazard_ratio_called_risk_ratio": ("hazard_ratio",),
        "odds_ratio_called_risk_ratio": ("odds_ratio",),
        "risk_ratio_called_odds_ratio": ("risk_ratio",),
    }
    if claim.number is None:
        return False
    value = abs(claim.said.exact * claim.factor)
    for other in of.measures:
        if other.id != claim.id and other.quantity in wanted.get(reading, ()) and other.number is not None:
            window = exact(other.number, other.factor)
            if window.low <= float(value) <= window.high or window.low <= -float(value) <= window.high:
                return True
    if reading == "points_called_percent":
        risks = [[c.said.exact * c.factor for c in arm.risks + arm.modelled_risks if c.number is not None] for arm in of.arms]
        return any(abs(abs(a - b) - value) < Fraction(1, 10**9) for a in risks[0] for b in risks[1])
    return False


def one_sided(claim: Claim, of: Stated, tables: Fourfold) -> tuple[bool, bool]:
    """Whether half of a usual two-sided p prints as the claim, and whether that is evidence enough.

    Two significant digits are; a single one if most of the usual tests print it.
    """
    question = asked_p(claim)
    if question is None or question.operator != "=" or claim.sides is not None:
        return False, False
    halved = AskedP(question.number, question.operator, 1)
    fits = bool(np.any(p_matches(halved, tables, of.timed, seldom=False).exact))
    if not fits or significant_digits(question.number) >= 2:
        return fits, fits
    window = p_window(halved)
    held = [bool(window.holds(p_of(test, tables, of.timed)).any()) for test in tests("usual", of.timed)]
    return True, 2 * sum(held) > len(held)


def alternatives_by_print(claim: Claim, of: Stated) -> tuple[Reading, ...]:
    """Readings that another printed figure of the outcome alone names."""
    if claim.number is None:
        return ()
    wanted: tuple[Reading, ...] = ()
    if claim.quantity in REDUCTIONS:
        wanted = ("ratio_read_as_reduction", "points_called_percent")
    elif claim.quantity == "risk_difference":
        wanted = ("percent_called_points",)
    elif claim.quantity == "risk_ratio":
        wanted = ("hazard_ratio_called_risk_ratio",)
    return tuple(reading for reading in wanted if equals_another(claim, reading, of))


def risk_readings(claim: Claim, of: Stated, tables: Fourfold) -> tuple[Reading, ...]:
    """Other readings of a percentage that does not fit: out of another printed total, of the other face, per 1000."""
    if claim.quantity != "risk" or claim.number is None:
        return ()
    span = risk_span(claim, slips=False)
    a, n1, c, n2 = tables.floats()
    events, total = (a, n1) if claim.arm == "intervention" else (c, n2)
    own, other = of.arms if claim.arm == "intervention" else of.arms[::-1]
    printed = [int(c.said.value) for c in (*own.other_totals, *other.total, *other.other_totals) if c.number is not None]

    def prints(values: Floats, share: Fraction = Fraction(1)) -> bool:
        low, high = float(span.low * share), float(span.high * share)
        return bool(np.any((values >= low - 1e-12) & (values <= high + 1e-12)))

    found: list[Reading] = []
    if any(prints(events / n) for n in printed if n):
        found.append("other_denominator")
    if prints(1.0 - events / total):
        found.append("complement_outcome")
    if claim.unit == "percent" and prints(events / total, Fraction(1, 10)):
        found.append("per_thousand_called_percent")
    return tuple(found)

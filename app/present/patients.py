"""The effect at other starting risks: a row for each scale that may stay the same, and a picture of where that matters."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from markupsafe import Markup

import app.transport.constant as constant
from app.appraisal.model import OutcomeAppraisal, Patients, StartingRisk
from app.measures.needed import direction_of, rounded_needed
from app.present.figures.fan import Fan, Line, fan
from app.present.numerals import fixed, needed, per_1000_decimals, percentages, sizes, spread
from app.present.wording import DIRECTIONS, FEWER_MORE, Names, signed_spread

_SCALE_TEXT = {
    "risk_ratio": "risk ratio",
    "odds_ratio": "odds ratio",
    "hazard_ratio": "hazard ratio",
    "risk_difference": "risk difference",
}
_SHOWN = ("risk_ratio", "odds_ratio", "risk_difference")
_POINTS = 60
_LEAST = 1e-12  # a smaller difference is none

ASSUMED = (
    "None of these stays the same by law: whether the risk ratio or the odds ratio does is disputed. The interval carries the "
    "uncertainty of the effect alone, the starting risk taken as known, over the same time as in the trial."
)
ELSEWHERE = (
    "The trial’s own risk may be higher or lower than in practice: prefer a figure from people like yours, and say where it is "
    "from."
)
OTHER_FACE = "The event is wanted: the ratio of those without it is held too, and may lead elsewhere."


@dataclass(frozen=True, slots=True)
class CarriedRow:
    """One scale at one starting risk."""

    scale: str
    with_it: str
    change: str
    interval: str
    needed: str


@dataclass(frozen=True, slots=True)
class CarriedGroup:
    """One starting risk: what it is called, and a row for each scale."""

    title: str
    source: str
    rows: tuple[CarriedRow, ...]


@dataclass(frozen=True, slots=True)
class PatientsView:
    """Your patients: groups of rows, the picture, a sentence, and what is assumed."""

    groups: tuple[CarriedGroup, ...]
    picture: Markup
    say: str
    assumed: tuple[str, ...]
    why_not: str


def _name_of(held: constant.Held) -> str:
    text = _SCALE_TEXT[held.scale]
    return f"{text} of those without" if held.face == "complement" else text


def patients_view(outcome: OutcomeAppraisal, names: Names) -> PatientsView | None:
    """What follows at the starting risks typed; None where nothing can be carried or nothing is asked."""
    found, risks = outcome.patients, outcome.input.starting_risks
    if found is None:
        if not risks or outcome.both is None:
            return None
        return PatientsView((), Markup(), "", (), "More than one table fits: settle the table first, then carry its effect.")
    held = [h for h in found.held if h.scale in _SHOWN]
    words = DIRECTIONS[outcome.input.event_is]
    unwanted = outcome.input.event_is != "wanted"
    groups = [_own(found, words, unwanted)]
    for risk in risks:
        rows = tuple(_row(h, (risk.low, risk.high), words, unwanted) for h in held)
        title = f"{risk.name or 'Yours'}, {_percent(risk)}"
        groups.append(CarriedGroup(title, risk.source, rows))
    assumed = (ASSUMED, ELSEWHERE, *([OTHER_FACE] if any(h.face == "complement" for h in held) else []))
    return PatientsView(tuple(groups), _picture(found, risks, names), _say(held[0], risks, names), assumed, "")


def _percent(risk: StartingRisk) -> str:
    texts = percentages([risk.low, risk.high], 1)
    return f"{spread([text.removesuffix('.0') for text in texts])}%"


def _own(found: Patients, words: object, unwanted: bool) -> CarriedGroup:
    """The trial's own risk, where all scales agree; its interval is that of the difference."""
    held = next(h for h in found.held if h.scale == "risk_difference")
    row = _row(held, (found.comparator_risk,) * 2, words, unwanted)
    one = CarriedRow("any of them", row.with_it, row.change, row.interval, row.needed)
    risk = percentages([found.comparator_risk], 1)[0]
    return CarriedGroup(f"The trial’s own, {risk}%", "", (one,))


def _row(held: constant.Held, ends: tuple[float, float], words: object, unwanted: bool) -> CarriedRow:
    found = [constant.carried(held, risk) for risk in dict.fromkeys(ends)]
    risks = [float(f.risk_with) for f in found]
    if any(math.isnan(risk) for risk in risks):
        return CarriedRow(_name_of(held), "impossible", "–", "–", "–")
    changes = [float(f.difference) for f in found]
    lows, highs = [float(f.low) for f in found], [float(f.high) for f in found]
    limits = [end for end in (*lows, *highs) if not math.isnan(end)]
    decimals = per_1000_decimals(changes, limits)
    change = signed_spread((min(changes), max(changes)), sizes((min(changes), max(changes)), 1000.0, decimals), FEWER_MORE)
    if any(math.isnan(end) for end in (*lows, *highs)):
        interval = "one limit is impossible here"
    else:
        span = min(lows), max(highs)
        interval = signed_spread(span, sizes(span, 1000.0, decimals), FEWER_MORE)
    with_it = spread(percentages([min(risks), max(risks)], 1))
    return CarriedRow(_name_of(held), f"{with_it}%", change, interval, _needed(changes, words, unwanted))


def _needed(changes: Sequence[float], words: object, unwanted: bool) -> str:
    near, far = (Fraction(change) for change in (changes[0], changes[-1]))
    if near * far <= 0 or min(abs(near), abs(far)) < _LEAST:
        return "none"
    sense = direction_of(near, unwanted)
    texts = [rounded_needed(abs(1 / end), sense) for end in sorted((near, far), key=lambda d: -abs(d))]
    return f"{spread([needed(t.value, t.decimals) for t in texts])} {words[sense]}"  # type: ignore[index]


def _say(held: constant.Held, risks: Sequence[StartingRisk], names: Names) -> str:
    """The first group in a sentence, per 1000."""
    if not risks or risks[0].low != risks[0].high:
        return ""
    found = constant.carried(held, risks[0].low)
    ends = [float(x) for x in (found.difference, found.low, found.high)]
    if any(math.isnan(end) for end in ends):
        return ""
    decimals = per_1000_decimals(ends[:1], ends[1:])
    change, span = (
        signed_spread(pair, sizes(pair, 1000.0, decimals), FEWER_MORE) for pair in ((ends[0], ends[0]), (ends[1], ends[2]))
    )
    start = fixed(1000.0 * risks[0].low, 0)
    return (
        f"Of 1000 people like these, {start} would have {names.counted} without it{names.within}. If the risk ratio holds, "
        f"{change} have {names.counted} with it ({span}, starting risk taken as known)."
    )


def _picture(found: Patients, risks: Sequence[StartingRisk], names: Names) -> Markup:
    """Change against starting risk, from 0 to well beyond what is asked for."""
    widest = min(1.0, max([1.8 * found.comparator_risk, 0.05, *(1.25 * risk.high for risk in risks)]))
    grid = [widest * k / _POINTS for k in range(_POINTS + 1)]
    own = next(float(h.effect.estimate) for h in found.held if h.scale == "risk_difference")
    sign, word = (-1.0, "fewer") if own <= 0 else (1.0, "more")
    lines = []
    for held in found.held:
        if held.scale not in _SHOWN or held.face == "complement":
            continue
        change = constant.carried(held, grid).difference  # type: ignore[arg-type]
        points = tuple((x, sign * float(y)) for x, y in zip(grid, change, strict=True))
        lines.append(Line(held.scale, points))
    ratio = next(h for h in found.held if h.scale == "risk_ratio")
    ends = constant.carried(ratio, grid)  # type: ignore[arg-type]
    band = tuple((x, sign * float(lo), sign * float(hi)) for x, lo, hi in zip(grid, ends.low, ends.high, strict=True))
    own_risk = percentages([found.comparator_risk], 1)[0]
    marks = [(found.comparator_risk, f"the trial’s, {own_risk}%", "trial")]
    marks += [(risk.low, f"{risk.name or 'yours'}, {_percent(risk)}", "yours") for risk in risks]
    said = "; ".join(
        f"{_name_of(h)} {signed_spread((d, d), sizes((d, d), 1000.0, 0), FEWER_MORE)}"
        for risk in risks[:1]
        for h in found.held
        if h.scale in _SHOWN and not math.isnan(d := float(constant.carried(h, risk.low).difference))
    )
    description = f"Change per 1000 against the risk without it, from 0 to {fixed(100 * widest, 0)}%. " + (
        f"At {_percent(risks[0])}: {said}." if risks else f"The trial’s own risk is {own_risk}%."
    )
    return fan(Fan(tuple(lines), band, tuple(marks), widest, word, f"risk without it{names.within}", description))

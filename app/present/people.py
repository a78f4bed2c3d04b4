"""Out of 100: both arms as people, on one denominator, with both faces in words."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from markupsafe import Markup

from app.appraisal.model import BothArms, OutcomeInput
from app.present.figures.icons import icon_array
from app.present.numerals import fixed, needed, per_1000_decimals, sizes, spread
from app.present.wording import FEWER_MORE, Names, signed_spread


@dataclass(frozen=True, slots=True)
class KeyLine:
    """One line beside an array: the class of icon, how many, and what they are."""

    icon: str
    count: str
    text: str


@dataclass(frozen=True, slots=True)
class ArrayView:
    """One arm's array with its key."""

    name: str
    key: str
    figure: Markup
    caption: str
    lines: tuple[KeyLine, ...]


@dataclass(frozen=True, slots=True)
class PeopleView:
    """Both arrays, and the sentence: its lead in full weight, and the rest."""

    out_of: str
    when: str
    arrays: tuple[ArrayView, ...]
    lead: str
    rest: str
    drawn: str


def denominator(first: float, second: float) -> int:
    """100, or 1000 where 100 would hide a risk or a difference, or draw it off by over half a person."""
    drawn = [round_half_up(100 * risk) for risk in (first, second)]
    hidden = any(
        (risk > 0 and count == 0) or (risk < 1 and count == 100) for risk, count in zip((first, second), drawn, strict=True)
    )
    difference = 100 * (first - second)
    if hidden or (difference != 0 and drawn[0] == drawn[1]) or abs(drawn[0] - drawn[1] - difference) > 0.5 + 1e-9:
        return 1000
    return 100


def round_half_up(value: float) -> int:
    """Nearest whole number, halves up."""
    return int(fixed(value, 0).replace(",", ""))


def _beside(value: float, count: int) -> str:
    """The unrounded figure in brackets, where it is not the drawn one."""
    return "" if abs(value - count) < 0.05 else f" ({fixed(value, 1)})"


def people_view(both: BothArms, names: Names, given: OutcomeInput) -> PeopleView:
    """The people of one outcome, drawn for the table in the middle where several fit."""
    middle = both.fits.middle
    risks = float(middle.risk_intervention), float(middle.risk_comparator)
    out_of = denominator(*risks)
    treated, control = (round_half_up(out_of * risk) for risk in risks)
    more = treated > control
    net = abs(treated - control)
    event = min(treated, control)
    arrays = (
        _array(names.row("comparator"), "comparator", control, 0, False, out_of, risks[1], names),
        _array(names.row("intervention"), "intervention", event, net, more, out_of, risks[0], names),
    )
    drawn = ""
    if both.fits.count > 1:
        a, n1, c, n2 = (fixed(float(x), 0) for x in middle.floats())
        drawn = f"Drawn for {a} of {n1} and {c} of {n2}, one table of the {fixed(both.fits.count, 0)} that fit."
    rare = any(0 < risk < 0.5 / out_of for risk in risks) and max(treated, control) <= 1
    return PeopleView(
        out_of=str(out_of),
        when=names.within.strip() or "time not stated",
        arrays=() if rare else arrays,
        lead=_lead(both, names, given),
        rest=_rest(both, names, given),
        drawn="Too rare to draw: one or nobody in 1000 would be marked." if rare else drawn,
    )


def _array(name: str, key: str, event: int, net: int, more: bool, out_of: int, risk: float, names: Names) -> ArrayView:
    with_event = event + net if more else event
    caption = (
        f"{with_event} of {out_of} with {names.counted}{_beside(out_of * risk, with_event)}, {out_of - with_event} without"
    )
    other = names.comparator
    if more and net:
        lines = [
            KeyLine("with-event", str(event), "with it, either way on balance"),
            KeyLine("net-more", str(net), f"more than with {other}, on balance"),
            KeyLine("no-event", str(out_of - event - net), "without"),
        ]
    elif net:
        lines = [
            KeyLine("with-event", str(event), "with it"),
            KeyLine("net-fewer", str(net), f"fewer than with {other}, on balance"),
            KeyLine("no-event", str(out_of - event - net), "without, either way on balance"),
        ]
    else:
        lines = [KeyLine("with-event", str(event), "with it"), KeyLine("no-event", str(out_of - event), "without")]
    words = ", ".join(f"{line.count} {line.text}" for line in lines)
    description = f"{name}: {caption}{names.within}. Drawn: {words}."
    figure = icon_array(event, net, more=more, out_of=out_of, arm=key, description=description)
    return ArrayView(name, key, figure, caption, tuple(lines))


def _anything_from(both: BothArms) -> str:
    result = both.measures["risk_difference"]
    ends: Sequence[float] = (result.default.low.low, result.default.high.high)
    decimals = per_1000_decimals(result.estimate, ends)
    told = signed_spread(ends, sizes(ends, 1000.0, decimals), FEWER_MORE)
    return f"{'anything from ' if ' to ' in told else ''}{told} in every 1000"


def _settled(both: BothArms) -> bool:
    """Whether the interval lies on one side of no difference."""
    return len(both.needed.segments) == 1


def _point(both: BothArms, names: Names, given: OutcomeInput) -> str:
    """The estimate as people: per number needed to treat, or of every 100 where that is below 10."""
    result = both.needed
    estimate = both.measures["risk_difference"].estimate
    fewer = estimate.high < 0
    word = "fewer" if fewer else "more"
    rather = f"with {names.intervention} rather than {names.comparator}"
    if result.rounded is None:
        if 0.0 in estimate:
            side = "fewer" if estimate.low < 0 else "more"
            return f"the tables that fit have equally many or {side} with {names.counted} {rather}"
        return "the tables that fit differ in direction"
    if any(r.decimals for r in result.rounded):
        count = spread(sorted(sizes(estimate, 100.0, 0), key=float))
        sentence = f"of every 100 people {rather}, {count} {word} have {names.counted}{names.within}"
    else:
        numbers = spread([needed(r.value, r.decimals) for r in result.rounded])
        sentence = f"for every {numbers} people {rather}, one {word} has {names.counted}{names.within}"
    if given.event_is == "wanted":
        sentence += ", the unwanted direction" if fewer else ", the wanted direction"
    return sentence


def _lead(both: BothArms, names: Names, given: OutcomeInput) -> str:
    """The sentence in full weight: the estimate if the interval settles its direction, else the interval."""
    if given.follow_up != "fixed":
        return "Counted as if all were followed equally long: " + _lower_first(_told(both, names, given))
    return _told(both, names, given)


def _told(both: BothArms, names: Names, given: OutcomeInput) -> str:
    difference = both.measures["risk_difference"].estimate
    tables = both.fits.tables
    if not tables.events_intervention.any() and not tables.events_comparator.any():
        return f"Nobody in either arm had {names.counted}."
    if difference == (0.0, 0.0):
        return f"The two arms had {names.counted} equally often."
    if not _settled(both):
        return f"The trial does not settle the direction: it fits {_anything_from(both)}."
    return f"On average, {_point(both, names, given)}."


def _rest(both: BothArms, names: Names, given: OutcomeInput) -> str:
    """The other half: the interval, or the estimate where the interval leads."""
    level = f"{fixed(100 * given.confidence_level, 0)}% interval"
    if both.measures["risk_difference"].estimate == (0.0, 0.0) or _settled(both):
        return f"The trial fits {_anything_from(both)} ({level})."
    return f"({level}.) As seen, {_point(both, names, given)}."


def _lower_first(text: str) -> str:
    return text[:1].lower() + text[1:]

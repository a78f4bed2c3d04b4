"""Out of 100: both arms as people, on one denominator, with both faces in words."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from markupsafe import Markup

from app.appraisal.model import BothArms
from app.present.figures.icons import icon_array
from app.present.numerals import decimals_showing_sides, fixed, needed, sizes, spread
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
    lines: tuple[KeyLine, ...]


@dataclass(frozen=True, slots=True)
class PeopleView:
    """Both arrays, the sentence of both, and the range in people."""

    out_of: str
    when: str
    arrays: tuple[ArrayView, ...]
    sentence: str
    range: str
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


def _exactly(value: float, count: int) -> str:
    decimals = decimals_showing_sides((value,), 1, (0.0, float(count)))
    return "" if abs(value - count) < 0.005 else f" (exactly {fixed(value, decimals)})"


def people_view(both: BothArms, names: Names, confidence_level: float) -> PeopleView:
    """The people of one outcome, drawn for the table in the middle where several fit."""
    middle = both.fits.middle
    risks = float(middle.risk_intervention), float(middle.risk_comparator)
    out_of = denominator(*risks)
    treated, control = (round_half_up(out_of * risk) for risk in risks)
    more = treated > control
    net = abs(treated - control)
    event = min(treated, control)
    arrays = (
        _array(names.comparator, "comparator", control, 0, False, out_of, risks[1], names),
        _array(names.intervention, "intervention", event, net, more, out_of, risks[0], names),
    )
    several = both.fits.count > 1
    return PeopleView(
        out_of=str(out_of),
        when=names.within.strip() or "time not stated",
        arrays=arrays,
        sentence=_sentence(both, names),
        range=_range(both, confidence_level),
        drawn=f"Drawn for one table of the {fixed(both.fits.count, 0)} that fit." if several else "",
    )


def _array(name: str, key: str, event: int, net: int, more: bool, out_of: int, risk: float, names: Names) -> ArrayView:
    with_event = event + net if more else event
    without = out_of - with_event
    lines = [KeyLine("with-event", str(with_event), f"with {names.counted}{_exactly(out_of * risk, with_event)}")]
    if net and more:
        lines.append(KeyLine("net-more", str(net), "of them net more than with the comparator"))
    lines.append(KeyLine("no-event", str(without), "without"))
    if net and not more:
        lines.append(KeyLine("net-fewer", str(net), "of them net fewer than with the comparator"))
    words = ", ".join(f"{line.count} {line.text}" for line in lines)
    description = f"{name}: of {out_of} people{names.within}, {words}."
    return ArrayView(
        name, key, icon_array(event, net, more=more, out_of=out_of, arm=key, description=description), tuple(lines)
    )


def _sentence(both: BothArms, names: Names) -> str:
    result = both.needed
    if result.rounded is None:
        if result.direction == "none":
            return f"The two arms had {names.counted} equally often."
        return "The tables that fit differ in direction: some have fewer, some more."
    numbers = spread([needed(r.value, r.decimals) for r in result.rounded])
    word = "fewer" if both.measures["risk_difference"].estimate.high < 0 else "more"
    return (
        f"On average, for every {numbers} people with {names.intervention} rather than {names.comparator}, "
        f"one {word} has {names.counted}{names.within}."
    )


def _range(both: BothArms, confidence_level: float) -> str:
    interval = both.measures["risk_difference"].default
    ends: Sequence[float] = (interval.low.low, interval.high.high)
    text = signed_spread(ends, sizes(ends, 1000.0, 0), FEWER_MORE)
    level = fixed(100 * confidence_level, 0)
    return f"The trial fits anything from {text} in every 1000 ({level}% interval)."

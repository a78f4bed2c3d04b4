"""All marks of a passage in order: what each rule takes, intervals tied to their estimates."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from itertools import islice

from app.printed.claims import Quantity
from app.reading.grammar import (
    BOUND,
    CHANGE,
    COUNTS,
    DECIMAL,
    INTERVAL,
    MARGIN,
    MEASURES,
    P_VALUE,
    RATE,
    SIGNED,
    Mark,
    Rule,
    found,
    take,
)
from app.reading.sentences import Aside, not_results, sentence_of
from app.reading.text import Even

_MOST_MARKS = 300  # of one rule in one piece of a passage; more is no prose
_SEPARATOR = r"[ ]*(?:%|percentage points)?[ ]*(?:to|and|[-\u2013\u2212,;])[ ]*"
_BARE = re.compile(rf"[ ]*%?[ ]*[,;]?[ ]*[\(\[][ ]*(?P<low>{SIGNED}){_SEPARATOR}(?P<high>{SIGNED})[ ]*%?[ ]*[\)\];]")
_PLAIN = re.compile(
    rf"[ ]*%?[ ]*[,;][ ]*(?P<low>{SIGNED})[ ]*(?:%[ ]*)?(?:to|[-\u2013])[ ]*(?P<high>{SIGNED})[ ]*%?(?=[ ]*[,;)\]])"
)
_UNLABELLED = re.compile(rf"[\(\[](?P<value>{DECIMAL})[,;][ ]*(?P<low>{SIGNED}){_SEPARATOR}(?P<high>{SIGNED})(?=[ ]*[;,\)\]])")
_PAIR = re.compile(
    r"(?<![\d./%])(?P<first>\d{1,3}(?:[,\u2009]\d{3})+|\d+)(?:[ ]+(?!of\b)[A-Za-z\-]+){0,6}[ ]*(?:vs?\.?|versus|against|compared with)[ ]+"
    r"(?P<second>\d{1,3}(?:[,\u2009]\d{3})+|\d+)(?![\d./%]|[ ]*[%\(\[/]|[ ]+of\b)"
)


@dataclass(frozen=True, slots=True)
class Estimate:
    """A measure as found: its mark, and the mark of its interval."""

    mark: Mark
    interval: Mark | None = None
    label: str = ""


@dataclass(frozen=True, slots=True)
class Marked:
    """The marks of a passage."""

    estimates: tuple[Estimate, ...]
    p_values: tuple[Mark, ...]
    counts: tuple[Mark, ...]
    pairs: tuple[Mark, ...]
    rates: tuple[Mark, ...]
    margins: tuple[Mark, ...]
    risk_intervals: tuple[tuple[Mark, Mark], ...]
    taken: bytes
    aside: tuple[tuple[int, int, Aside], ...]


def marks_of(even: Even) -> Marked:
    """Apply every rule, the most telling first."""
    text = even.text
    taken = bytearray(len(text))
    aside = not_results(text)
    for start, end, _ in aside:
        taken[start:end] = b"\x01" * (end - start)
    p_values = _taking(P_VALUE, text, taken)
    bounds = _taking(BOUND, text, taken)
    intervals = _taking(INTERVAL, text, taken)
    margins = _taking(MARGIN, text, taken)
    estimates: list[Mark] = []
    for rule, quantity in MEASURES:
        estimates += [replace(mark, quantity=quantity) for mark in _taking(rule, text, taken)]
    estimates += [_change(mark, text) for mark in _taking(CHANGE, text, taken)]
    rates = _taking(RATE, text, taken)
    rates = _with_events(rates, text, taken)
    estimates += _unlabelled(text, taken, estimates)
    estimates += _elided(text, taken, estimates, intervals)
    estimates.sort(key=lambda mark: mark.start)
    tied = [_with_bare_interval(mark, text, taken) for mark in estimates]
    counts: list[Mark] = []
    for rule in COUNTS:
        counts += _taking(rule, text, taken)
    counts = sorted(counts, key=lambda mark: mark.start)[:_MOST_MARKS]
    pairs = []
    for hit in _PAIR.finditer(text):
        if not any(taken[hit.start() : hit.end()]):
            mark = Mark("events_pair", hit.start(), hit.end(), {"first": hit.span("first"), "second": hit.span("second")})
            take(mark, taken)
            pairs.append(mark)
    intervals = sorted([*intervals, *bounds], key=lambda mark: mark.start)
    return _tie(tied, intervals, p_values, counts, pairs, rates, margins, taken, aside)


def _taking(rule: Rule, text: str, taken: bytearray) -> list[Mark]:
    """What a rule finds, kept from the rules after it."""
    kept = []
    for mark in islice(found(rule, text, taken), _MOST_MARKS):
        take(mark, taken)
        kept.append(mark)
    return kept


def _change(mark: Mark, text: str) -> Mark:
    part = "value" if "value" in mark.parts else "value2"
    word = mark.text(text, "word" if "word" in mark.parts else "word2").lower()
    up: Quantity = "relative_risk_increase"
    quantity = up if re.match(r"incr|rose|higher", word) else "relative_risk_reduction"
    return Mark(mark.rule, mark.start, mark.end, {"value": mark.parts[part]}, quantity)


def _unlabelled(text: str, taken: bytearray, labelled: list[Mark]) -> list[Mark]:
    """An estimate with its interval in brackets and no label: the measure named last before it."""
    more = []
    for hit in _UNLABELLED.finditer(text):
        before = [mark for mark in labelled if mark.end <= hit.start() and mark.quantity]
        if not before or any(taken[hit.start() : hit.end()]):
            continue
        parts = {name: hit.span(name) for name in ("value", "low", "high")}
        mark = Mark("unlabelled", hit.start(), hit.end(), parts, before[-1].quantity)
        take(mark, taken)
        more.append(mark)
    return more


_BEFORE = re.compile(rf"(?<![\d.,])(?P<value>{SIGNED})[ ]*%?[ ]*[(\[][ ]*$")


def _elided(text: str, taken: bytearray, labelled: list[Mark], intervals: list[Mark]) -> list[Mark]:
    """An estimate right before its interval whose label is left out: "0.66 (95% CI ...) and 0.48 (95% CI ...)"."""
    more = []
    for interval in intervals:
        start, _ = sentence_of(text, interval.start)
        hit = _BEFORE.search(text, max(start, interval.start - 30), interval.start)
        if hit is None or any(taken[hit.start("value") : hit.end("value")]) or "%" in hit[0]:
            continue
        before = [mark for mark in labelled if start <= mark.start and mark.end <= hit.start() and mark.quantity]
        if before:
            mark = Mark("elided", *hit.span("value"), {"value": hit.span("value")}, before[-1].quantity)
            take(mark, taken)
            more.append(mark)
    return more


_EVENTS_BEFORE = re.compile(r"(?<![\d.,])(?P<events>\d{1,3}(?:[,\u2009]\d{3})+|\d+)(?:[ ]+[A-Za-z]+){0,3}[ ]*[(\[][ ]*$")
_OVER_TIME = re.compile(
    r"(?<![\d.,])(?P<events>\d{1,3}(?:[,\u2009]\d{3})+|\d+)(?:[ ]+[A-Za-z]+){0,3}[ ]+(?:over|in|during)[ ]+"
    r"(?P<time>\d{1,3}(?:[,\u2009]\d{3})+|\d+(?:\.\d+)?)[ ]*(?:person|patient|woman|child|participant)[- ]years?[^.;]{0,60}?$"
)


def _with_events(rates: list[Mark], text: str, taken: bytearray) -> list[Mark]:
    """Rates with the events, and the person-time, that stand right before them."""
    found = []
    for mark in rates:
        start, _ = sentence_of(text, mark.start)
        start = max(start, mark.start - 140)
        hit = _EVENTS_BEFORE.search(text, start, mark.start) or _OVER_TIME.search(text, start, mark.start)
        if hit is not None and not any(taken[hit.start() : hit.end()]):
            parts = {name: hit.span(name) for name in hit.groupdict()}
            mark = replace(mark, start=hit.start(), parts={**mark.parts, **parts})
            take(mark, taken)
        found.append(mark)
    return found


def _with_bare_interval(mark: Mark, text: str, taken: bytearray) -> Estimate:
    """An estimate with two numbers in brackets after it, without a word of confidence."""
    if "low" in mark.parts:
        return Estimate(mark, mark)
    hit = _BARE.match(text, mark.end) or _PLAIN.match(text, mark.end)
    if hit is None or any(taken[hit.start() : hit.end()]):
        return Estimate(mark)
    if hit.re is _PLAIN and not _holds(mark.text(text, "value"), hit["low"], hit["high"]):
        return Estimate(mark)
    interval = Mark("bare_interval", hit.start(), hit.end(), {"low": hit.span("low"), "high": hit.span("high")})
    take(interval, taken)
    return Estimate(mark, interval)


def _holds(value: str, low: str, high: str) -> bool:
    """Whether a value lies between two others, as they are written."""
    signed = [re.sub(r"[\u2212\u2013]", "-", text).replace(",", "").replace(" ", "") for text in (low, value, high)]
    ends = [float(text) for text in signed]
    return ends[0] <= ends[1] <= ends[2] or ends[0] <= -ends[1] <= ends[2]


def _tie(
    estimates: list[Estimate],
    intervals: list[Mark],
    p_values: list[Mark],
    counts: list[Mark],
    pairs: list[Mark],
    rates: list[Mark],
    margins: list[Mark],
    taken: bytearray,
    aside: tuple[tuple[int, int, Aside], ...],
) -> Marked:
    """Each interval belongs to the estimate or percentage that stands last before it."""
    tied = {estimate.mark.start: estimate for estimate in estimates}
    of_risks: list[tuple[Mark, Mark]] = []
    for interval in intervals:
        before = [e for e in tied.values() if e.mark.end <= interval.start and e.interval is None]
        last = max(before, key=lambda e: e.mark.end, default=None)
        risks = [c for c in counts if c.end <= interval.start and "percent" in c.parts]
        risk = max(risks, key=lambda c: c.end, default=None)
        if risk is not None and interval.start - risk.end <= 4 and (last is None or last.mark.end < risk.start):
            of_risks.append((risk, interval))
        elif last is not None:
            tied[last.mark.start] = replace(last, interval=interval)
    return Marked(
        tuple(sorted(tied.values(), key=lambda e: e.mark.start)),
        tuple(p_values),
        tuple(counts),
        tuple(pairs),
        tuple(rates),
        tuple(margins),
        tuple(of_risks),
        bytes(taken),
        aside,
    )

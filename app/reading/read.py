"""A passage -> outcomes of claims, with what was not understood and what a reader is asked."""

from __future__ import annotations

import re
from bisect import bisect_left
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field, replace
from functools import lru_cache
from typing import Literal

from app.printed.claims import (
    ARMS,
    Arm,
    Basis,
    Claim,
    RiskKind,
    Sense,
)
from app.reading.arms import totals_in, words_of_arms
from app.reading.grammar import Mark
from app.reading.marks import Estimate, Marked, marks_of
from app.reading.naming import arm_name_after, horizon_in, name_in
from app.reading.rows import Table
from app.reading.sentences import Aside, sentence_of
from app.reading.table import in_rows, table_of
from app.reading.text import Even, Repair, even, is_table
from app.reading.write import Writer, arm_claims, basis_of, measure_claim, p_claim, rate_claims

Question = Literal["which_is_comparator"]


@dataclass(frozen=True, slots=True)
class Unread:
    """A number of which no claim was made."""

    span: tuple[int, int]
    text: str
    why: str


@dataclass(frozen=True, slots=True)
class ReadOutcome:
    """One outcome as read."""

    claims: tuple[Claim, ...]
    name: str | None = None
    horizon: str | None = None


@dataclass(frozen=True, slots=True)
class Reading:
    """All that a passage says."""

    outcomes: tuple[ReadOutcome, ...]
    unread: tuple[Unread, ...]
    questions: tuple[Question, ...]
    arm_names: tuple[str, str] = ("", "")
    repairs: tuple[Repair, ...] = ()


@dataclass
class _Group:
    """The marks of one outcome."""

    arms: list[Mark] = field(default_factory=list)
    again: list[Mark] = field(default_factory=list)
    order: tuple[Arm, Arm] | None = None
    pair: Mark | None = None
    rates: list[Mark] = field(default_factory=list)
    estimates: list[Estimate] = field(default_factory=list)
    p_values: list[Mark] = field(default_factory=list)

    @property
    def start(self) -> int:
        """Where its first mark stands."""
        marks = [
            *self.arms,
            *self.rates,
            *(e.mark for e in self.estimates),
            *self.p_values,
            *([self.pair] if self.pair else []),
        ]
        return min((mark.start for mark in marks), default=0)

    @property
    def full(self) -> bool:
        """Whether both arms are there."""
        return len(self.arms) >= 2 or self.pair is not None or len(self.rates) >= 2


def _groups(marked: Marked, text: str) -> list[_Group]:
    """Marks in order, gathered into outcomes: a third arm, or the same measure again, begins another."""
    events: list[tuple[int, str, object]] = []
    events += [(m.start, "arm", m) for m in marked.counts]
    events += [(m.start, "pair", m) for m in marked.pairs]
    events += [(m.start, "rate", m) for m in marked.rates]
    events += [(e.mark.start, "estimate", e) for e in marked.estimates]
    events += [(m.start, "p", m) for m in marked.p_values]
    groups = [_Group()]
    for _, kind, what in sorted(events, key=lambda event: event[0]):
        now = groups[-1]
        if _begins(now, kind, what, text):
            now = _Group()
            groups.append(now)
        if kind == "arm":
            (now.again if len(now.arms) >= 2 else now.arms).append(what)  # type: ignore[arg-type]
        elif kind == "pair":
            now.pair = what  # type: ignore[assignment]
        elif kind == "rate":
            now.rates.append(what)  # type: ignore[arg-type]
        elif kind == "estimate":
            now.estimates.append(what)  # type: ignore[arg-type]
        else:
            now.p_values.append(what)  # type: ignore[arg-type]
    groups = [contrast for group in _with_third(groups, text) for contrast in group]
    return [
        g
        for g in groups
        if g.estimates or g.p_values or g.rates or (g.full and any("percent" in m.parts for m in g.arms + g.again))
    ]


def _with_third(groups: list[_Group], text: str) -> Iterator[list[_Group]]:
    """Groups as they are, but two arms and a third in one sentence as a contrast each against the comparator."""
    i = 0
    while i < len(groups):
        now, after = groups[i], groups[i + 1] if i + 1 < len(groups) else None
        if after is None or not _is_third(now, after, text):
            yield [now]
            i += 1
            continue
        estimates, p_values, i = list(after.estimates), list(after.p_values), i + 2
        while i < len(groups) and not groups[i].arms and not groups[i].pair and not groups[i].rates:
            estimates += groups[i].estimates
            p_values += groups[i].p_values
            i += 1
        yield _contrasts([*now.arms, *after.arms], estimates, p_values, text)


def _is_third(now: _Group, after: _Group, text: str) -> bool:
    """Whether a lone arm belongs to the two before it: one sentence, all printed alike, nothing between them."""
    if len(now.arms) != 2 or len(after.arms) != 1 or now.estimates or now.p_values or now.again or after.rates:
        return False
    start, end = sentence_of(text, now.start)
    alike = {frozenset(mark.parts) & {"events", "total", "percent"} for mark in (*now.arms, *after.arms)}
    return len(alike) == 1 and start <= after.arms[0].start < end


def _contrasts(arms: list[Mark], estimates: list[Estimate], p_values: list[Mark], text: str) -> list[_Group]:
    """Each arm against the one that words call the comparator, else the last; estimates and p in the order of the arms."""
    ends = [*(mark.start for mark in arms[1:]), arms[-1].end + 60]
    named = [i for i, mark in enumerate(arms) if any(arm == "comparator" for _, arm in words_of_arms(text[mark.end : ends[i]]))]
    reference = named[0] if len(named) == 1 else len(arms) - 1
    others = [mark for i, mark in enumerate(arms) if i != reference]
    found = [_Group(arms=[mark, arms[reference]], order=ARMS) for mark in others]
    seen: Counter[str] = Counter()
    for estimate in estimates:
        k = seen[str(estimate.mark.quantity)]
        seen[str(estimate.mark.quantity)] += 1
        if k < len(found):
            found[k].estimates.append(estimate)
    for k, mark in enumerate(p_values):
        before = [i for i, group in enumerate(found) if any(e.mark.start < mark.start for e in group.estimates)]
        of = before[-1] if before else k
        if of < len(found) and not found[of].p_values:
            found[of].p_values.append(mark)
    return found


def _begins(now: _Group, kind: str, what: object, text: str) -> bool:
    """Whether a mark begins another outcome."""
    place = what.mark.start if isinstance(what, Estimate) else what.start  # type: ignore[attr-defined]
    other_sentence = now.start < sentence_of(text, place)[0] if (now.arms or now.pair or now.estimates or now.rates) else False
    if kind in ("arm", "pair"):
        if kind == "arm" and _percent_again(now, what, other_sentence=other_sentence):  # type: ignore[arg-type]
            return False
        beside_rates = bool(now.rates) and len(now.arms) < 2 and not other_sentence
        return (now.full and not beside_rates) or (bool(now.estimates) and other_sentence)
    if kind == "rate":
        return len(now.rates) >= 2 or (bool(now.estimates) and other_sentence)
    if kind == "estimate":
        same = [e for e in now.estimates if e.mark.quantity == what.mark.quantity]  # type: ignore[attr-defined]
        return bool(same) and basis_of(same[-1], text) == basis_of(what, text)  # type: ignore[arg-type]
    return bool(now.p_values) and other_sentence


def _percent_again(now: _Group, what: Mark, *, other_sentence: bool) -> bool:
    """Whether a percentage is of two arms whose counts stand before it: "71/94 and 52/97, respectively (76% v 54%)"."""
    bare = set(what.parts) <= {"percent", "sign"} and not any("percent" in mark.parts for mark in now.arms)
    return bare and len(now.arms) == 2 and len(now.again) < 2 and not now.estimates and not other_sentence


_CUMULATIVE = re.compile(r"kaplan|cumulative incidence|incidence was|survival", re.IGNORECASE)
_DIRECTION = re.compile(
    r"(?P<word>higher|lower|commoner|less common|more common|more often|less often)[ ]+(?:in|on|with|among)[ ]+(?P<who>[^,.;()]{3,60}?)[ ]+(?:than|compared)",
    re.IGNORECASE,
)


def _sense(text: str, group: _Group) -> Sense | None:
    """The word of direction of the intervention arm, where it is said whose it is."""
    start, end = sentence_of(text, group.start)
    hit = _DIRECTION.search(text, start, end)
    if hit is None:
        return None
    roles = words_of_arms(hit["who"])
    if not roles:
        return None
    higher = hit["word"].lower() in ("higher", "commoner", "more common", "more often")
    of_intervention = roles[0][1] == "intervention"
    return "higher" if higher == of_intervention else "lower"


@lru_cache(maxsize=4)
def _arm_words(text: str) -> list[tuple[int, Arm]]:
    return words_of_arms(text)


def _order(text: str, marks: list[Mark]) -> tuple[tuple[Arm, Arm], bool]:
    """Which arm each of two marks is of, and whether that is only assumed."""
    start, end = sentence_of(text, marks[0].start)
    end = max(end, min(len(text), marks[1].end + 60))
    words = [word for word in _arm_words(text)[bisect_left(_arm_words(text), (start, "")) :][:12] if word[0] < end]
    named: dict[Arm, int] = {}
    for place, arm in words:
        named.setdefault(arm, place)
    if len(named) == 2:
        return (("comparator", "intervention") if named["comparator"] < named["intervention"] else ARMS), False
    if len(named) == 1:
        arm, place = next(iter(named.items()))
        second = place > marks[1].start or (marks[0].end < place and marks[1].start - place < 14)
        if arm == "comparator":
            return (ARMS if second else ("comparator", "intervention")), False
        return (("comparator", "intervention") if second else ARMS), False
    return ARMS, True


@dataclass
class _Known:
    """What earlier outcomes of a passage have said: the order of its arms, and what is to be asked."""

    order: tuple[Arm, Arm] | None = None
    asked: set[Question] = field(default_factory=set)
    names: dict[Arm, str] = field(default_factory=dict)

    def settle(self, order: tuple[Arm, Arm], *, assumed: bool) -> tuple[Arm, Arm]:
        """The order to take: the one said, else that of the outcomes before, else asked about."""
        if not assumed:
            self.order = order
        elif self.order is None:
            self.asked.add("which_is_comparator")
        return order if not assumed or self.order is None else self.order


def _outcome(write: Writer, group: _Group, totals: dict[Arm, tuple[int, int]], known: _Known) -> ReadOutcome:
    text = write.even.text
    claims: list[Claim | None] = []
    marks = group.arms or group.rates or ([group.pair, group.pair] if group.pair else [])
    order = group.order or ARMS
    if len(marks) >= 2 and group.order is None:
        found, assumed = _order(text, marks[:2])
        order = known.settle(found, assumed=assumed)
        names = [arm_name_after(text, mark.end) for mark in marks[:2]]
        if not known.names and names[0] and names[1] and names[0] != names[1]:
            known.names = dict(zip(order, (names[0], names[1]), strict=True))
    start, end = sentence_of(text, group.start)
    kind: RiskKind | None = (
        "cumulative_incidence"
        if _CUMULATIVE.search(text, start, end) and not any("events" in m.parts for m in group.arms)
        else None
    )
    for mark, arm in (*zip(group.arms, order, strict=False), *zip(group.again, order, strict=False)):
        claims += arm_claims(write, mark, arm, kind)
    if group.pair is not None:
        claims += [
            write.claim(group.pair, part, "events", arm, "people") for part, arm in zip(("first", "second"), order, strict=True)
        ]
    for mark, arm in zip(group.rates, order, strict=False):
        claims += rate_claims(write, mark, arm)
    if marks:
        claims += _earlier_totals(write, claims, totals)
    sense = _sense(text, group)
    measured = [measure_claim(write, e, sense if i == 0 else None) for i, e in enumerate(group.estimates)]
    bases = {c.basis for c in measured if c is not None}
    basis: Basis = next(iter(bases)) if len(bases) == 1 else "unstated"
    claims += measured
    placed = [(e.mark.start, c.basis) for e, c in zip(group.estimates, measured, strict=True) if c is not None]
    for mark in group.p_values:
        before = [own for place, own in placed if place < mark.start] if len(bases) > 1 else []
        claims.append(p_claim(write, mark, before[-1] if before else basis))
    name, horizon = name_in(text, start, group.start), horizon_in(text, start, group.start)
    said = (replace(c, outcome=name, horizon=horizon) for c in claims if c is not None)
    return ReadOutcome(tuple(said), name, horizon)


def _earlier_totals(write: Writer, claims: list[Claim | None], totals: dict[Arm, tuple[int, int]]) -> list[Claim | None]:
    """Totals stated apart from the counts, for arms that have none of their own."""
    have = {c.arm for c in claims if c is not None and c.quantity == "total"}
    found: list[Claim | None] = []
    for arm, (start, end) in totals.items():
        if arm not in have and any(c is not None and c.arm == arm for c in claims):
            found.append(write.claim(Mark("total", start, end, {"total": (start, end)}), "total", "total", arm, "people"))
    return found


_LEFT_ALONE = re.compile(
    r"\b(?:19|20)\d\d\b|\d+(?:\.\d+)?[ ]*(?:mg|g|kg|ml|mL|mm|cm|µg|mcg|mmol|IU|h|hours?|days?|weeks?|months?|years?|d|min|minutes)\b|"
    r"\b\d{1,2}/\d{1,2}/\d{2,4}\b|(?:table|figure|fig\.?|ref\.?|day|week|month|aged?|year|grade|stage|phase)[ ]*\d+|\b[A-Za-z]{1,12}\d+|\b95[ ]*%|\d\d(?:\.\d)?[ ]*%[ ]*(?=C\.?I|conf|cred|Bayes|IC|KI)",
    re.IGNORECASE,
)
_ANY_NUMBER = re.compile(r"(?<![\w.])\d+(?:[.,]\d+)*")


def _unread(write: Writer, aside: tuple[tuple[int, int, Aside], ...] = ()) -> tuple[Unread, ...]:
    text = write.even.text
    known = bytearray(len(text))
    for start, end in (*write.read, *(hit.span() for hit in _LEFT_ALONE.finditer(text))):
        known[start:end] = b"\x01" * (end - start)
    hits = [hit.span() for hit in _ANY_NUMBER.finditer(text) if not any(known[hit.start() : hit.end()])]

    def why(place: int) -> str:
        return next((slug for start, end, slug in aside if start <= place < end), "not_understood")

    return tuple(Unread(write.even.span(*span), write.even.printed(*span), why(span[0])) for span in hits)


def _read_table(passage: Even, table: Table) -> Reading:
    """The rows of a table as outcomes; totals of the header are each row's own."""
    write = Writer(passage)
    outcomes = []
    for row in table.rows:
        claims: list[Claim | None] = []
        for mark, arm in zip(row.arms, table.order, strict=True):
            claims += arm_claims(write, mark, arm, None)
        claims += _earlier_totals(write, claims, row.totals or table.totals)
        if row.estimate is not None:
            claims.append(measure_claim(write, row.estimate, None))
        if row.p_value is not None:
            claims.append(p_claim(write, row.p_value, "unstated"))
        named = tuple(replace(c, outcome=row.name or None, place="table") for c in claims if c is not None)
        outcomes.append(ReadOutcome(named, row.name or None))
    write.read += [hit.span() for hit in re.finditer(r"[^\n]*\n", passage.text) if hit.end() <= table.rows[0].start]
    asked: tuple[Question, ...] = ("which_is_comparator",) if table.assumed else ()
    return Reading(tuple(outcomes), _unread(write), asked, repairs=passage.repairs)


MOST_OUTCOMES = 200
"""Outcomes read of one passage; the numbers of any more are unread."""


def read(passage: str) -> Reading:
    """Read a passage.

    Parameters
    ----------
    passage : str
        As pasted. Offsets of spans refer to it.

    Returns
    -------
    Reading
        Outcomes with two or more claims that bear on each other; numbers not understood; what is asked.
    """
    text = in_rows(even(passage))
    table = table_of(text.text) if is_table(text.text) else None
    if table is not None:
        return _read_table(text, table)
    marked = marks_of(text)
    write = Writer(text)
    known = _Known()
    totals = totals_in(text.text, marked.taken)
    groups = _groups(marked, text.text)[:MOST_OUTCOMES]
    outcomes = [_outcome(write, group, totals, known) for group in groups]
    kept = tuple(o for o in outcomes if len(o.claims) >= 2 or any(c.interval for c in o.claims))
    return Reading(
        kept,
        _unread(write, marked.aside),
        tuple(sorted(known.asked)),
        (known.names.get("intervention", ""), known.names.get("comparator", "")),
        text.repairs,
    )

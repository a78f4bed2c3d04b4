"""A passage -> outcomes of claims, with what was not understood and what a reader is asked."""

from __future__ import annotations

import re
from bisect import bisect_left
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
from app.reading.groups import Group, groups_of
from app.reading.marks import marks_of
from app.reading.naming import arm_name_after, horizon_in, name_in
from app.reading.rows import Table
from app.reading.sentences import Aside, sentence_of
from app.reading.table import in_rows, table_of
from app.reading.text import Even, Repair, even, is_table
from app.reading.write import Writer, arm_claims, measure_claim, p_claim, rate_claims

Question = Literal["which_is_comparator", "risk_or_rate_ratio"]


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


_PLACE_TAG = re.compile(r"\[(?P<place>abstract|text|table|figure)[^\]]{0,12}\]", re.IGNORECASE)
_CUMULATIVE = re.compile(r"kaplan|cumulative incidence|incidence was|survival", re.IGNORECASE)
_DIRECTION = re.compile(
    r"(?P<word>higher|lower|commoner|less common|more common|more often|less often)[ ]+(?:in|on|with|among)[ ]+(?P<who>[^,.;()]{3,60}?)[ ]+(?:than|compared)",
    re.IGNORECASE,
)


def _sense(text: str, group: Group) -> Sense | None:
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


def _outcome(write: Writer, group: Group, totals: dict[Arm, tuple[int, int]], known: _Known) -> ReadOutcome:
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
    if group.rates and any(c is not None and c.quantity == "risk_ratio" for c in measured):
        known.asked.add("risk_or_rate_ratio")
    bases = {c.basis for c in measured if c is not None}
    basis: Basis = next(iter(bases)) if len(bases) == 1 else "unstated"
    claims += measured
    placed = [(e.mark.start, c.basis) for e, c in zip(group.estimates, measured, strict=True) if c is not None]
    for mark in group.p_values:
        before = [own for place, own in placed if place < mark.start] if len(bases) > 1 else []
        claims.append(p_claim(write, mark, before[-1] if before else basis))
    name, horizon = name_in(text, start, group.start), horizon_in(text, start, group.start)
    tags = list(_PLACE_TAG.finditer(text, 0, group.start))
    place = tags[-1]["place"].lower() if tags else None
    said = (replace(c, outcome=name, horizon=horizon, place=place) for c in claims if c is not None)  # type: ignore[arg-type]
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


def _moved(claim: Claim, by: int, block: int) -> Claim:
    """A claim of a block of a passage as one of the whole passage."""
    span = None if claim.span is None else (claim.span[0] + by, claim.span[1] + by)
    interval = claim.interval
    if interval is not None and interval.span is not None:
        interval = replace(interval, span=(interval.span[0] + by, interval.span[1] + by))
    return replace(claim, id=f"b{block}{claim.id}", span=span, interval=interval)


def _of_blocks(blocks: list[tuple[int, Reading]]) -> Reading:
    """Prose and tables of one passage, each read by itself."""
    outcomes = [
        replace(outcome, claims=tuple(_moved(claim, by, i) for claim in outcome.claims))
        for i, (by, found) in enumerate(blocks)
        for outcome in found.outcomes
    ]
    return Reading(
        tuple(outcomes),
        tuple(replace(u, span=(u.span[0] + by, u.span[1] + by)) for by, found in blocks for u in found.unread),
        tuple(dict.fromkeys(q for _, found in blocks for q in found.questions)),
        next((found.arm_names for _, found in blocks if all(found.arm_names)), ("", "")),
        tuple(dict.fromkeys(r for _, found in blocks for r in found.repairs)),
    )


_PIECE = 20_000
_CUT = re.compile(r"(?<=[.?!])\s+(?=[A-Z])|\n")


def _in_pieces(passage: str) -> Reading:
    """A long passage piece by piece, cut between sentences; once enough outcomes are read the rest is left unread."""
    found: list[tuple[int, Reading]] = []
    start = outcomes = 0
    while start < len(passage):
        end = len(passage)
        if end - start > _PIECE:
            cuts = list(_CUT.finditer(passage, start + _PIECE // 2, start + _PIECE))
            end = cuts[-1].end() if cuts else start + _PIECE
        piece = passage[start:end]
        read_here = read(piece) if outcomes < MOST_OUTCOMES else Reading((), _unread(Writer(even(piece))), ())
        outcomes += len(read_here.outcomes)
        found.append((start, read_here))
        start = end
    whole = _of_blocks(found)
    return replace(whole, outcomes=whole.outcomes[:MOST_OUTCOMES])


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
    if len(passage) > _PIECE:
        return _in_pieces(passage)
    if not re.search(r"\d", passage):
        return Reading((), (), ())
    blocks = list(re.finditer(r"\S(?:.|\n(?!\s*\n))*", passage)) if "\n" in passage else []
    if len(blocks) > 1 and any(is_table(block[0]) for block in blocks):
        return _of_blocks([(block.start(), read(block[0])) for block in blocks[:MOST_OUTCOMES]])
    text = in_rows(even(passage))
    table = table_of(text.text) if is_table(text.text) else None
    if table is not None:
        return _read_table(text, table)
    marked = marks_of(text)
    write = Writer(text)
    known = _Known()
    totals = totals_in(text.text, marked.taken)
    groups = groups_of(marked, text.text)[:MOST_OUTCOMES]
    outcomes = [_outcome(write, group, totals, known) for group in groups]
    kept = tuple(o for o in outcomes if len(o.claims) >= 2 or any(c.interval for c in o.claims))
    return Reading(
        kept,
        _unread(write, marked.aside),
        tuple(sorted(known.asked)),
        (known.names.get("intervention", ""), known.names.get("comparator", "")),
        text.repairs,
    )

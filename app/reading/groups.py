"""Marks gathered into outcomes: a third arm, or the same measure again, begins another; three arms make contrasts."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field

from app.printed.claims import ARMS, Arm
from app.reading.arms import words_of_arms
from app.reading.grammar import Mark
from app.reading.marks import Estimate, Marked
from app.reading.sentences import sentence_of
from app.reading.write import basis_of


@dataclass
class Group:
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


def groups_of(marked: Marked, text: str) -> list[Group]:
    """Marks in order, gathered into outcomes: a third arm, or the same measure again, begins another."""
    events: list[tuple[int, str, object]] = []
    events += [(m.start, "arm", m) for m in marked.counts]
    events += [(m.start, "pair", m) for m in marked.pairs]
    events += [(m.start, "rate", m) for m in marked.rates]
    events += [(e.mark.start, "estimate", e) for e in marked.estimates]
    events += [(m.start, "p", m) for m in marked.p_values]
    groups = [Group()]
    for _, kind, what in sorted(events, key=lambda event: event[0]):
        now = groups[-1]
        if _begins(now, kind, what, text):
            now = Group()
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


def _with_third(groups: list[Group], text: str) -> Iterator[list[Group]]:
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


def _is_third(now: Group, after: Group, text: str) -> bool:
    """Whether a lone arm belongs to the two before it: one sentence, all printed alike, nothing between them."""
    if len(now.arms) != 2 or len(after.arms) != 1 or now.estimates or now.p_values or now.again or after.rates:
        return False
    start, end = sentence_of(text, now.start)
    alike = {frozenset(mark.parts) & {"events", "total", "percent"} for mark in (*now.arms, *after.arms)}
    return len(alike) == 1 and start <= after.arms[0].start < end


def _contrasts(arms: list[Mark], estimates: list[Estimate], p_values: list[Mark], text: str) -> list[Group]:
    """Each arm against the one that words call the comparator, else the last; estimates and p in the order of the arms."""
    ends = [*(mark.start for mark in arms[1:]), arms[-1].end + 60]
    named = [i for i, mark in enumerate(arms) if any(arm == "comparator" for _, arm in words_of_arms(text[mark.end : ends[i]]))]
    reference = named[0] if len(named) == 1 else len(arms) - 1
    others = [mark for i, mark in enumerate(arms) if i != reference]
    found = [Group(arms=[mark, arms[reference]], order=ARMS) for mark in others]
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


def _begins(now: Group, kind: str, what: object, text: str) -> bool:
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


def _percent_again(now: Group, what: Mark, *, other_sentence: bool) -> bool:
    """Whether a percentage is of two arms whose counts stand before it: "71/94 and 52/97, respectively (76% v 54%)"."""
    bare = set(what.parts) <= {"percent", "sign"} and not any("percent" in mark.parts for mark in now.arms)
    return bare and len(now.arms) == 2 and len(now.again) < 2 and not now.estimates and not other_sentence

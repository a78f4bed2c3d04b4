"""Outcomes of one paper held against each other: parts within a whole, groups that exclude each other, numbers repeated."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Literal

import numpy as np

from app.measures.fourfold import Fourfold
from app.printed.claims import ARMS, Arm, Claim
from app.reconstruct.prints import take
from app.reconstruct.verdict import Advice, Judgement, NoteSlug, OutcomeCheck

Kind = Literal["components", "categories"]


@dataclass(frozen=True, slots=True)
class Belonging:
    """How outcomes belong together, by their place: parts of a whole, or groups of which a person is in one."""

    kind: Kind
    whole: int | None
    parts: tuple[int, ...]


def _events(tables: Fourfold, arm: Arm) -> np.ndarray[tuple[int, ...], np.dtype[np.int64]]:
    return tables.events_intervention if arm == "intervention" else tables.events_comparator


def _usable(check: OutcomeCheck) -> Fourfold | None:
    return check.tables.tables if check.tables.complete else None


def _within(whole: OutcomeCheck, part: OutcomeCheck) -> tuple[OutcomeCheck, OutcomeCheck, bool]:
    """Both with the tables left in which no more have the part than the whole; False where none are left."""
    outer, inner = _usable(whole), _usable(part)
    if outer is None or inner is None:
        return whole, part, True
    keep_outer, keep_inner = np.ones(outer.shape, dtype=np.bool_), np.ones(inner.shape, dtype=np.bool_)
    for arm in ARMS:
        keep_inner &= _events(inner, arm) <= _events(outer, arm).max()
        keep_outer &= _events(outer, arm) >= _events(inner, arm).min()
    if not keep_inner.any() or not keep_outer.any():
        return whole, part, False
    return _narrowed(whole, outer, keep_outer), _narrowed(part, inner, keep_inner), True


def _narrowed(check: OutcomeCheck, tables: Fourfold, keep: np.ndarray[tuple[int, ...], np.dtype[np.bool_]]) -> OutcomeCheck:
    if keep.all():
        return check
    left = take(tables, keep)
    return replace(check, tables=replace(check.tables, tables=left, count=int(keep.sum()), narrowed=True))


def _noted(
    check: OutcomeCheck, slug: NoteSlug, quantities: Sequence[str], arm: Arm | None = None, **evidence: object
) -> OutcomeCheck:
    """The check with a note at the first claim of such a quantity."""
    for i, judged in enumerate(check.judgements):
        if judged.claim.quantity in quantities and (arm is None or judged.claim.arm == arm):
            noted = replace(judged, notes=(*judged.notes, Advice(slug, evidence)))
            return replace(check, judgements=(*check.judgements[:i], noted, *check.judgements[i + 1 :]))
    return check


_COUNTED = ("events", "non_events", "risk")


def _components(checks: list[OutcomeCheck], belonging: Belonging) -> None:
    """No part is larger than the whole, and a person may have several, so parts together are no fewer."""
    whole = belonging.whole
    if whole is None:
        return
    for part in belonging.parts:
        checks[whole], checks[part], fits = _within(checks[whole], checks[part])
        if not fits:
            checks[part] = _noted(checks[part], "parts_do_not_add", _COUNTED, why="part_exceeds_whole")
    outer = _usable(checks[whole])
    inner = [_usable(checks[part]) for part in belonging.parts]
    if outer is None or len(inner) < 2 or any(tables is None for tables in inner):
        return
    for arm in ARMS:
        most = sum(int(_events(tables, arm).max()) for tables in inner if tables is not None)
        if most < int(_events(outer, arm).min()):
            checks[whole] = _noted(checks[whole], "parts_do_not_add", _COUNTED, arm, why="parts_fewer_than_whole")


def _categories(checks: list[OutcomeCheck], belonging: Belonging) -> None:
    """Groups of which everybody is in one at most hold no more than all; percentages of all groups add up to 100."""
    for arm in ARMS:
        tables = [_usable(checks[part]) for part in belonging.parts]
        known = [t for t in tables if t is not None]
        last = belonging.parts[-1]
        if len(known) == len(tables):
            least = sum(int(_events(t, arm).min()) for t in known)
            totals = [t.total_intervention if arm == "intervention" else t.total_comparator for t in known]
            if least > max(int(total.max()) for total in totals):
                checks[last] = _noted(checks[last], "parts_do_not_add", _COUNTED, arm, why="groups_exceed_all")
                continue
        risks = [_risk(checks[part], arm) for part in belonging.parts]
        printed = [claim for claim in risks if claim is not None]
        if len(printed) == len(risks) >= 2 and _misses_hundred(printed):
            checks[last] = _noted(checks[last], "percentages_do_not_sum", ("risk",), arm)


def _risk(check: OutcomeCheck, arm: Arm) -> Claim | None:
    found = [j.claim for j in check.judgements if j.claim.quantity == "risk" and j.claim.arm == arm and j.claim.number]
    return found[0] if found else None


def _misses_hundred(claims: Sequence[Claim]) -> bool:
    """Whether percentages that nearly add up to 100 miss it by more than their rounding; far from it some are not printed."""
    total = sum((c.said.exact * c.factor for c in claims), Fraction(0))
    room = sum((c.said.unit_in_last_place * c.factor / 2 for c in claims), Fraction(0))
    return room < abs(total - 1) <= Fraction(1, 20)


def _repeated(checks: list[OutcomeCheck]) -> None:
    """An estimate with its interval that stands at two outcomes."""
    seen: dict[tuple[str, ...], int] = {}
    for place, check in enumerate(checks):
        for judged in check.judgements:
            key = _figures(judged)
            if key is not None and seen.setdefault(key, place) != place:
                checks[place] = _noted(checks[place], "repeated_numbers", (judged.claim.quantity,))


def _figures(judged: Judgement) -> tuple[str, ...] | None:
    claim = judged.claim
    if claim.number is None or claim.interval is None or claim.interval.low is None or claim.interval.high is None:
        return None
    return claim.quantity, *(str(n.value) for n in (claim.number, claim.interval.low, claim.interval.high))


def together(checks: Sequence[OutcomeCheck], belongings: Sequence[Belonging] = ()) -> tuple[OutcomeCheck, ...]:
    """The checks of all outcomes of a paper, narrowed by each other and with the notes that only together show."""
    found = list(checks)
    for belonging in belongings:
        (_components if belonging.kind == "components" else _categories)(found, belonging)
    _repeated(found)
    return tuple(found)

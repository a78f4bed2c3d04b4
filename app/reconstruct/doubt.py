"""Which claims to doubt where no table fits all: the smallest set whose removal leaves one.

Every pair of an arm's own claims that settles its counts proposes candidates; each candidate table is charged
for every claim it does not print. The cheapest tables say which claims are set aside. Between sets of one size
the smallest slip of the pen decides; where none does, the claims contradict each other and none is blamed.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from app.measures.fourfold import Counts, Floats, Fourfold
from app.printed.claims import Claim
from app.printed.span import Span
from app.reconstruct.arm import totals_of
from app.reconstruct.crude import excused, p_lies_near
from app.reconstruct.p_prints import asked_p, p_matches
from app.reconstruct.prints import matches, take
from app.reconstruct.readings import one_sided, readings_of, risk_readings
from app.reconstruct.recompute import recomputed_p
from app.reconstruct.search import empty
from app.reconstruct.stated import ArmStated, Stated, event_span, risk_span

COUNT, DERIVED, EXCUSED, READING, SLIP, NEAR = 100.0, 97.0, 25.0, 20.0, 8.0, 1.0
"""What a table is charged: for a count, a percentage or total it contradicts, for a measure or p it
contradicts, for one that may be adjusted, for one that fits under another reading only, what a slip of the pen
takes off, and for a last digit."""

_MOST_FREE = 20_000
_MOST_RUN = 2_000
_MOST_JUDGED = 60_000
_MOST_READ = 40


@dataclass(frozen=True, slots=True)
class Doubt:
    """The claims set aside, the tables that then fit, and every equally small set where there are several."""

    aside: tuple[str, ...]
    tables: Fourfold
    tied: tuple[tuple[str, ...], ...] = ()


@dataclass(frozen=True, slots=True)
class _ArmPool:
    events: Counts
    totals: Counts
    charges: Floats  # one row per candidate, one column per claim of the arm
    claims: tuple[Claim, ...]


def _candidates(arm: ArmStated, *, free: bool) -> set[tuple[int, int]]:
    """(events, total) that some of an arm's claims settle between them."""
    counts = [int(c.said.value) for c in arm.events]
    others = [int(c.said.value) for c in arm.non_events]
    totals = [int(c.said.value) for c in arm.total + arm.other_totals if c.number is not None]
    found = {(e, n) for e in counts for n in totals} | {(n - x, n) for x in others for n in totals}
    found |= {(e, e + x) for e in counts for x in others}
    for risk in arm.risks:
        span = risk_span(risk, slips=True)
        for n in totals:
            first, last = span.scaled(Fraction(n)).whole(n)
            found |= {(e, n) for e in range(first, min(last, first + _MOST_RUN) + 1)}
        for e in counts:
            ends = totals_of(e, span)
            if ends is not None:
                found |= {(e, n) for n in range(ends[0], min(ends[1], ends[0] + _MOST_RUN) + 1)}
    if free:
        for n in totals[:1]:
            found |= {(e, n) for e in range(min(n, _MOST_FREE) + 1)}
    return {(e, n) for e, n in found if 0 <= e <= n and n >= 1}


def _charge(claim: Claim, arm: ArmStated, events: Counts, totals: Counts) -> Floats:
    if claim.quantity == "events":
        return np.where(events == int(claim.said.value), 0.0, COUNT)
    if claim.quantity == "non_events":
        return np.where(totals - events == int(claim.said.value), 0.0, COUNT)
    if claim.quantity == "total":
        low, high = (claim.said.value, claim.said.value) if claim.number is not None else (Decimal(0), Decimal("inf"))
        return np.where((totals >= float(low)) & (totals <= float(high)), 0.0, COUNT)
    if claim.quantity == "risk":
        risk = events / totals
        sure, near = (_in(risk, risk_span(claim, slips=slips)) for slips in (False, True))
        return np.where(sure, 0.0, np.where(near, NEAR, COUNT))
    if claim.quantity == "rate" and arm.person_time:
        return np.where(_in(events, event_span(claim, arm.person_time[0])), 0.0, COUNT)
    return np.zeros(events.shape)


def _in(values: Floats | Counts, span: Span) -> NDArray[np.bool_]:
    low, high = float(span.low), float(span.high)
    return np.asarray((values >= low - abs(low) * 1e-12) & (values <= high + abs(high) * 1e-12))


def _arm_pool(arm: ArmStated, *, free: bool) -> _ArmPool:
    found = sorted(_candidates(arm, free=free))
    events, totals = (np.array([pair[i] for pair in found], dtype=np.int64) for i in (0, 1))
    columns = [_charge(claim, arm, events, totals) for claim in arm.claims]
    charges = np.stack(columns, axis=1) if columns else np.zeros((events.size, 0))
    return _ArmPool(events, totals, charges, arm.claims)


class _Ledger:
    """Tables with what each is charged for each claim."""

    def __init__(self, of: Stated, aside: Iterable[str]) -> None:
        self.of = of
        self.out = frozenset(aside)
        self.measures = of.constraining(self.out)
        self.p_values = of.constraining_p(self.out)
        self.claims = of.arms[0].claims + of.arms[1].claims + of.combined + of.both_events + self.measures + self.p_values
        self.tables = empty()
        self.charges = np.zeros((0, len(self.claims)))

    @property
    def cheapest(self) -> float:
        """The smallest total charge so far."""
        return float(self.charges.sum(axis=1).min()) if self.charges.size else np.inf

    def add(self, first: _ArmPool, second: _ArmPool) -> None:
        """Charge the product of two arms' candidates, the cheapest of them first; what is dearer already is left out."""
        if not first.events.size or not second.events.size:
            return
        own, other = (pool.charges.sum(axis=1) for pool in (first, second))
        price = own[:, None] + other[None, :]
        rows, columns = np.nonzero(price <= self.cheapest)
        if not rows.size:
            return
        order = np.argsort(price[rows, columns], kind="stable")[:_MOST_JUDGED]
        rows, columns = rows[order], columns[order]
        head = int(np.count_nonzero(price[rows, columns] < price[rows[0], columns[0]] + COUNT * 0.5))
        self._charge(first, second, rows[: min(head, _MOST_READ)], columns[: min(head, _MOST_READ)])
        self.read()
        rest = np.flatnonzero(price[rows, columns] <= self.cheapest)
        rest = rest[rest >= min(head, _MOST_READ)]
        if rest.size:
            self._charge(first, second, rows[rest], columns[rest])
            self.read()

    def _charge(self, first: _ArmPool, second: _ArmPool, rows: Counts, columns: Counts) -> None:
        tables = Fourfold(first.events[rows], first.totals[rows], second.events[columns], second.totals[columns])
        charges = np.hstack([first.charges[rows], second.charges[columns], self._both(tables)])
        for claim in (*self.measures, *self.p_values):
            live = charges.sum(axis=1) <= self.cheapest
            column = np.full(rows.size, COUNT * 2)
            if live.any():
                column[live] = self._derived(claim, take(tables, live))
            charges = np.hstack([charges, column[:, None]])
        self.tables = Fourfold(
            *(
                np.concatenate([getattr(self.tables, name), getattr(tables, name)])
                for name in ("events_intervention", "total_intervention", "events_comparator", "total_comparator")
            )
        )
        self.charges = np.vstack([self.charges, charges])

    def _both(self, tables: Fourfold) -> Floats:
        columns = [
            np.where(tables.total_intervention + tables.total_comparator == int(c.said.value), 0.0, DERIVED)
            for c in self.of.combined
        ]
        columns += [
            np.where(tables.events_intervention + tables.events_comparator == int(c.said.value), 0.0, DERIVED)
            for c in self.of.both_events
        ]
        return np.stack(columns, axis=1) if columns else np.zeros((tables.events_intervention.size, 0))

    def _derived(self, claim: Claim, tables: Fourfold) -> Floats:
        """Charge of a measure or p claim for each table; readings are tried where the tables are few."""
        size = tables.events_intervention.size
        few = size <= _MOST_READ
        if claim.quantity == "p_value":
            question = asked_p(claim)
            if question is None:
                return np.zeros(size)
            match = p_matches(question, tables, self.of.timed, seldom=few)
            return np.where(match.exact, 0.0, np.where(match.seldom, READING, DERIVED))
        charge = np.full(size, DERIVED)
        for way in self.of.ways(claim):
            match = matches(way, tables, self.of.timed, seldom=few)
            charge = np.minimum(charge, np.where(match.exact, 0.0, np.where(match.near, NEAR, DERIVED)))
            charge = np.minimum(charge, np.where(match.seldom, READING, DERIVED))
        return charge

    def read(self) -> None:
        """Charge less where a claim that the cheapest tables contradict fits them under another reading."""
        totals = self.charges.sum(axis=1)
        nearest = self._one_of_each(np.flatnonzero(totals < totals.min() + COUNT), totals)[:_MOST_READ]
        start = len(self.claims) - len(self.measures) - len(self.p_values)
        for row in nearest:
            one = take(self.tables, np.arange(totals.size) == row)
            for i, claim in enumerate(self.claims):
                charge = self.charges[row, i]
                if i >= start and charge == DERIVED:
                    self.charges[row, i] = self._explained(claim, one)
                elif charge == COUNT and risk_readings(claim, self.of, one):
                    self.charges[row, i] = READING

    def _one_of_each(self, rows: Counts, totals: Floats) -> Counts:
        """The rows, first the cheapest of each set of claims contradicted, then the second of each, and so on."""
        order = rows[np.argsort(totals[rows], kind="stable")]
        masks = (self.charges[order] > 0.0) @ (2.0 ** np.arange(len(self.claims)))
        seen: dict[float, int] = {}
        turns = []
        for mask in masks:
            turns.append(seen.setdefault(mask, 0))
            seen[mask] += 1
        return np.asarray(order[np.argsort(turns, kind="stable")])

    def _explained(self, claim: Claim, one: Fourfold) -> float:
        """Charge of a claim that a table does not print, if another reading or an adjustment explains it."""
        if claim.quantity == "p_value":
            question = asked_p(claim)
            if question is None or one_sided(claim, self.of, one)[1]:
                return READING
            near = claim.basis == "unstated" and p_lies_near(
                question, recomputed_p(one, self.of.timed, question)[1], closely=False
            )
            return EXCUSED if near else DERIVED
        if readings_of(claim, self.of, one).named:
            return READING
        return EXCUSED if excused(claim, self.of, one) else DERIVED


def doubt(of: Stated, aside: Iterable[str] = ()) -> Doubt | None:
    """The smallest set of claims to set aside; None where nothing settles a table even then."""
    ledger = _Ledger(of, aside)
    firm = [_arm_pool(arm, free=False) for arm in of.arms]
    ledger.add(firm[0], firm[1])
    if ledger.cheapest >= COUNT * 0.9 and ledger.measures:
        loose = [_arm_pool(arm, free=True) for arm in of.arms]
        ledger.add(loose[0], firm[1])
        ledger.add(firm[0], loose[1])
        if not ledger.charges.size and loose[0].events.size * loose[1].events.size <= _MOST_JUDGED:
            ledger.add(loose[0], loose[1])
    return _settle(ledger) if ledger.charges.size else None


def doubt_arm(of: Stated, arm: int) -> Doubt | None:
    """The same for one arm alone, where the other leaves its total open."""
    nobody = ArmStated("comparator" if arm == 0 else "intervention")
    alone = Stated(
        (of.arms[0], nobody) if arm == 0 else (nobody, of.arms[1]), (), (), (), (), (), equal=False, comparator_first=False
    )
    ledger = _Ledger(alone, ())
    anyone = _ArmPool(np.array([0]), np.array([1]), np.zeros((1, 0)), ())
    own = _arm_pool(of.arms[arm], free=False)
    ledger.add(*((own, anyone) if arm == 0 else (anyone, own)))
    return _settle(ledger) if ledger.charges.size else None


def _settle(ledger: _Ledger) -> Doubt:
    charges, claims = ledger.charges, ledger.claims
    totals = charges.sum(axis=1)
    near = np.flatnonzero(totals <= totals.min() + SLIP)[:2000]
    prices = totals[near].copy()
    for k, row in enumerate(near):
        if (charges[row][charges[row] < DERIVED] > 0.0).any():
            continue  # a slip explains only if it leaves nothing else in doubt
        for j in np.flatnonzero(charges[row] >= DERIVED):
            if _slip(claims[j], ledger.tables, int(row)):
                prices[k] -= SLIP
    best = near[np.abs(prices - prices.min()) < 1e-9]
    masks: dict[tuple[str, ...], list[int]] = {}
    for row in best:
        masks.setdefault(tuple(claims[j].id for j in np.flatnonzero(charges[row] >= DERIVED)), []).append(int(row))
    ranked = sorted(masks.items(), key=lambda item: _trusted(item[0], claims))
    aside, rows = ranked[0]
    chosen = np.zeros(totals.size, dtype=np.bool_)
    chosen[rows] = True
    tied = tuple(mask for mask, _ in ranked) if len(ranked) > 1 else ()
    return Doubt(aside, take(ledger.tables, chosen), tied)


def _trusted(aside: Sequence[str], claims: Sequence[Claim]) -> tuple[int, ...]:
    """Order of equally small sets: percentages are set aside before totals, totals before events."""
    order = {"risk": 0, "rate": 0, "total": 1, "non_events": 2, "events": 2}
    by_id = {c.id: c.quantity for c in claims}
    return tuple(sorted(order.get(by_id[i], 0) for i in aside))


# -- slips of the pen -----------------------------------------------------------------------------------


def digits(value: Fraction, decimals: int) -> str:
    """The digits that a value prints at so many decimals, without its mark."""
    scaled = abs(value) * Fraction(10) ** decimals
    return str(int(scaled + Fraction(1, 2)))


def is_slip(printed: str, meant: str) -> bool:
    """Whether two strings of digits differ in the last digit, by two neighbours exchanged, or by a lost decimal point."""
    if printed == meant or not printed or not meant:
        return False
    if len(printed) == len(meant):
        apart = [i for i, pair in enumerate(zip(printed, meant, strict=True)) if pair[0] != pair[1]]
        if apart == [len(printed) - 1]:
            return True
        return (
            len(apart) == 2
            and apart[1] == apart[0] + 1
            and printed[apart[0]] == meant[apart[1]]
            and printed[apart[1]] == meant[apart[0]]
        )
    short, long = sorted((printed, meant), key=len)
    return long.strip("0") == short.strip("0") and bool(short.strip("0"))


def needed_value(claim: Claim, tables: Fourfold, row: int) -> Fraction | None:
    """What a claim of counts would have to print for one of the tables, in its printed unit."""
    a, n1, c, n2 = (
        int(x[row])
        for x in (tables.events_intervention, tables.total_intervention, tables.events_comparator, tables.total_comparator)
    )
    events, total = (a, n1) if claim.arm == "intervention" else (c, n2)
    if claim.arm is None:
        return Fraction(n1 + n2) if claim.quantity == "total" else Fraction(a + c) if claim.quantity == "events" else None
    if claim.quantity == "risk":
        return Fraction(events, total) / claim.factor
    return {"events": Fraction(events), "non_events": Fraction(total - events), "total": Fraction(total)}.get(claim.quantity)


def _slip(claim: Claim, tables: Fourfold, row: int) -> bool:
    if claim.number is None:
        return False
    meant = needed_value(claim, tables, row)
    if meant is None:
        return False
    return is_slip(digits(claim.said.exact, claim.said.decimals), digits(meant, claim.said.decimals))

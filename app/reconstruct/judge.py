"""One verdict for each claim of an outcome: tables that fit the others, then each number held against them."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from app.measures.fourfold import Fourfold
from app.printed.claims import Claim
from app.reconstruct.bench import Bench
from app.reconstruct.between import as_if_many, inside
from app.reconstruct.doubt import Doubt, doubt, doubt_arm
from app.reconstruct.judge_counts import judge_count
from app.reconstruct.judge_measures import judge_measure
from app.reconstruct.judge_p import judge_p
from app.reconstruct.narrowing import narrow_with
from app.reconstruct.prints import take
from app.reconstruct.search import Found, Problem, judged, search
from app.reconstruct.stated import Stated, arm_runs, stated
from app.reconstruct.verdict import Choice, Judgement, OutcomeCheck, Tables

_SAMPLE = 1_500


@dataclass(frozen=True, slots=True)
class _Settled:
    """What the search came to: tables (None if open), claims set aside, and sets that tie."""

    found: Found | None
    aside: tuple[str, ...] = ()
    tied: tuple[tuple[str, ...], ...] = ()
    slips: bool = False


def check_outcome(claims: Iterable[Claim], *, equal: bool = False, trust: str = "") -> OutcomeCheck:
    """Find the tables that fit the claims of one outcome, and judge every claim.

    Parameters
    ----------
    claims : iterable of Claim
        With ids of their own.
    equal : bool
        Whether the arms are stated to be of one size.
    trust : "", "counts" or "percentages"
        What the reader has chosen to go by where counts and percentages contradict each other.
    """
    of = stated(claims, equal=equal)
    contradicted = {c.id for c in of.measures if not inside(c)}
    settled = _settle(of, contradicted)
    if settled.tied and trust:
        settled = _chosen(of, settled, trust)
    return _judged(of, settled)


def _settle(of: Stated, contradicted: set[str]) -> _Settled:
    found = search(of.problem(contradicted))
    if found is None:
        return _one_armed(of)
    if not found.complete or found.count:
        return _Settled(found)
    looser = search(of.problem(contradicted, slips=True))
    doubted = doubt(of, contradicted) if looser is None or not looser.count else None
    if looser is not None and looser.complete and looser.count:
        return _Settled(_fewest_slips(of, contradicted, looser), slips=True)
    if doubted is None:
        return _one_armed(of)
    tables = _all_that_fit(of, contradicted, doubted)
    return _Settled(Found(tables, int(tables.events_intervention.size), complete=True), doubted.aside, doubted.tied)


def _all_that_fit(of: Stated, contradicted: set[str], doubted: Doubt) -> Fourfold:
    """Every table once the doubted claims are out; those of the pool where the search cannot list them."""
    out = contradicted | set(doubted.aside)
    for slips in (False, True):
        found = search(of.problem(out, slips=slips))
        if found is not None and found.complete and found.count:
            return found.tables
    return doubted.tables


def _fewest_slips(of: Stated, contradicted: set[str], found: Found) -> Found:
    """Of tables that print every claim nearly, those that print most of them exactly."""
    if found.count > 20_000:
        return found
    slips = np.zeros(found.count)
    for claim in of.constraining(contradicted):
        alone = Problem(of.problem().runs, questions=(of.ways(claim),), timed=of.timed)
        slips += ~judged(alone, found.tables)
    best = slips == slips.min()
    return replace(found, tables=take(found.tables, best))


def _one_armed(of: Stated) -> _Settled:
    """Where a total is open: each arm that states its own is held against itself."""
    aside: tuple[str, ...] = ()
    tied: tuple[tuple[str, ...], ...] = ()
    for i, arm in enumerate(of.arms):
        if arm_runs(arm) == () and arm_runs(arm, slips=True) == ():
            found = doubt_arm(of, i)
            if found is not None:
                aside, tied = aside + found.aside, tied + found.tied
    return _Settled(None, aside, tied)


def _chosen(of: Stated, settled: _Settled, trust: str) -> _Settled:
    """The way out that the reader has chosen."""
    for choice in _choices(of, settled):
        if choice.slug == f"if_{trust}":
            count = int(choice.tables.events_intervention.size)
            return _Settled(Found(choice.tables, count, complete=True), choice.set_aside, (), settled.slips)
    return settled


def _choices(of: Stated, settled: _Settled) -> tuple[Choice, ...]:
    quantity = {c.id: c.quantity for c in (*of.counts, *of.measures, *of.p_values)}
    made: dict[str, Choice] = {}
    for aside in settled.tied:
        kinds = {quantity[i] for i in aside}
        slug = "if_counts" if kinds <= {"risk", "rate"} else "if_percentages"
        found = search(of.problem(aside)) or search(of.problem(aside, slips=True))
        if found is not None and found.count and slug not in made:
            made[slug] = Choice(slug, aside, found.tables)  # type: ignore[arg-type]
    return tuple(made[slug] for slug in ("if_counts", "if_percentages") if slug in made)


def _judged(of: Stated, settled: _Settled) -> OutcomeCheck:
    found = settled.found
    usable = found is not None and found.complete and found.count > 0
    tables = _sample(found.tables) if found is not None and usable else None
    tied = {i for mask in settled.tied for i in mask}
    many = as_if_many(of, settled.aside) if tables is None else None
    bench = Bench(of, tables, many, frozenset(settled.aside), frozenset(tied), found is not None and found.count == 1)
    judgements: list[Judgement] = [judge_count(c, bench) for c in _in_order(of)]
    measured = [judge_measure(c, bench) for c in of.measures]
    judgements += measured
    judgements += [judge_p(c, bench, measured) for c in of.p_values]
    judgements += [Judgement(c, "cannot_be_checked", reason="too_little") for c in of.margins]
    judgements = _told_how_many_agree(judgements)
    shown = Tables(
        found.tables if found is not None and (found.count or not found.complete) else None,
        0 if found is None else found.count if found.complete else found.candidates,
        found is not None and found.complete,
        narrow_with(of, found.tables) if found is not None and (found.count > 1 or not found.complete) else None,
    )
    questions = tuple(dict.fromkeys(str(j.evidence["question"]) for j in judgements if "question" in j.evidence))
    return OutcomeCheck(tuple(judgements), shown, settled.aside, _choices(of, settled) if settled.tied else (), questions)


def _told_how_many_agree(judgements: list[Judgement]) -> list[Judgement]:
    """The judgements of doubted claims, told how many of the others agree with each other."""
    agree = sum(j.verdict in ("agrees", "agrees_within_rounding") for j in judgements)
    return [replace(j, evidence={**j.evidence, "others": agree}) if "others" in j.evidence else j for j in judgements]


def _in_order(of: Stated) -> tuple[Claim, ...]:
    counts = [c for arm in of.arms for c in (*arm.claims, *arm.other_totals, *arm.modelled_risks)]
    return (*counts, *of.combined, *of.both_events)


def _sample(tables: Fourfold) -> Fourfold:
    """At most so many of the tables, spread evenly, ends included."""
    size = tables.events_intervention.size
    if size <= _SAMPLE:
        return tables
    keep = np.zeros(size, dtype=np.bool_)
    keep[np.linspace(0, size - 1, _SAMPLE).astype(np.int64)] = True
    return take(tables, keep)

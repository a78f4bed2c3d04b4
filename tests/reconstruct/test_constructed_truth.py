"""Trials whose truth is known: the true table is found, and no true figure is called into question."""

from __future__ import annotations

import pytest

from app.reconstruct.judge import check_outcome
from app.reconstruct.verdict import Judgement, OutcomeCheck
from tests.reconstruct.faults_maker import PLANTED, planted
from tests.reconstruct.trials_maker import Trial, outside_trial, plain_trial

SEEDS = 200
PLANTED_SEEDS = 12


def holds_truth(trial: Trial, check: OutcomeCheck) -> bool:
    """Whether the true table is among those found; where they were only counted, whether it lies in their band."""
    tables = check.tables.tables
    if tables is None:
        return False
    columns = (tables.events_intervention, tables.total_intervention, tables.events_comparator, tables.total_comparator)
    if check.tables.complete:
        rows = zip(*columns, strict=True)
        return trial.table in {tuple(int(x) for x in row) for row in rows}
    return all(column.min() <= cell <= column.max() for column, cell in zip(columns, trial.table, strict=True))


@pytest.mark.parametrize("start", range(0, SEEDS, 25))
def test_usual_print_is_never_called_into_question(start: int) -> None:
    for seed in range(start, start + 25):
        trial = plain_trial(seed)
        check = check_outcome(trial.claims)
        assert check.set_aside == ()
        assert holds_truth(trial, check)
        assert {j.verdict for j in check.judgements} <= {"agrees", "agrees_within_rounding", "cannot_be_checked"}, seed


def test_figures_from_models_and_habits_are_hardly_ever_found_against() -> None:
    """Adjusted, stratified, Cox, Kaplan-Meier, truncated, twice rounded, of a sub-total: under 1% found against."""
    outside = against = 0
    for seed in range(SEEDS):
        trial = outside_trial(seed)
        check = check_outcome(trial.claims)
        assert holds_truth(trial, check), seed
        for judged in check.judgements:
            assert judged.claim.id in trial.outside or judged.verdict != "does_not_agree", (seed, judged)
            outside += judged.claim.id in trial.outside
            against += judged.claim.id in trial.outside and judged.verdict == "does_not_agree"
    assert outside > 300
    assert against < 0.01 * outside


def _of(check: OutcomeCheck, claim_id: str) -> Judgement:
    return next(j for j in check.judgements if j.claim.id == claim_id)


def hidden(check: OutcomeCheck, faulty: str) -> bool:
    """Whether rounding hides the fault: a table is found that prints every claim as it stands."""
    return check.tables.count > 0 and not check.set_aside and _of(check, faulty).verdict in ("agrees", "agrees_within_rounding")


@pytest.mark.parametrize("kind", PLANTED)
def test_planted_faults_are_found_and_named(kind: str) -> None:
    seen = named = 0
    for seed in range(PLANTED_SEEDS):
        trial = planted(kind, seed)
        if trial is None:
            continue
        check = check_outcome(trial.claims)
        if hidden(check, trial.faulty):
            continue
        seen += 1
        judged = _of(check, trial.faulty)
        assert judged.verdict in ("does_not_agree", "agrees_under_another_reading"), (seed, judged)
        names = {*judged.readings, *judged.findings, *judged.possible}
        named += kind in names or (kind == "percentage_does_not_fit" and "impossible_percentage" in names)
        assert [j.claim.id for j in check.judgements if j.verdict == "does_not_agree"] in ([trial.faulty], []), seed
    assert seen >= 2
    assert named == seen

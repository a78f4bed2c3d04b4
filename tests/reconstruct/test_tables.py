from __future__ import annotations

import numpy as np

from app.appraisal.effects import effects_of
from app.measures.fourfold import Fourfold
from app.reconstruct.arm import arm_fits
from app.reconstruct.tables import MOST_EVALUATED, Fits, ends, tables_that_fit
from tests.claims_maker import arm_claims


def both(first: dict[str, str], second: dict[str, str]) -> Fits:
    arms = (
        arm_fits("intervention", arm_claims("intervention", **first)),
        arm_fits("comparator", arm_claims("comparator", **second)),
    )
    return tables_that_fit(*arms)


def test_one_table() -> None:
    fits = both({"events": "46", "total": "418"}, {"risk": "16.4", "total": "409"})
    assert (fits.count, fits.listed, fits.complete) == (1, True, True)
    assert [int(x[0]) for x in fits.tables._integers()] == [46, 418, 67, 409]


def test_every_pair_is_carried_on() -> None:
    fits = both({"risk": "11", "total": "418"}, {"risk": "16", "total": "409"})
    pairs = set(zip(fits.tables.events_intervention.tolist(), fits.tables.events_comparator.tolist(), strict=True))
    assert fits.count == len(pairs) == 20
    assert pairs == {(a, c) for a in range(44, 49) for c in range(64, 68)}


def test_large_sets_are_computed_on_their_ends() -> None:
    """Counts of 1% of a million: the ranges from the ends equal those from every table."""
    fits = both({"risk": "1.0", "total": "200000"}, {"risk": "1.2", "total": "200000"})
    assert fits.count > MOST_EVALUATED
    assert (fits.listed, fits.complete, fits.tables.shape) == (False, True, (4,))
    first = arm_fits("intervention", arm_claims("intervention", risk="1.0", total="200000"))
    second = arm_fits("comparator", arm_claims("comparator", risk="1.2", total="200000"))
    a = np.arange(ends(first)[0, 0], ends(first)[1, 0] + 1, 7)
    c = np.arange(ends(second)[0, 0], ends(second)[1, 0] + 1, 7)
    some = Fourfold(a[:, None], 200000, c[None, :], 200000)
    for measure, result in effects_of(fits.tables, 0.95).measures.items():
        inner = effects_of(some, 0.95).measures[measure]
        for outer_values, inner_values in (
            (result.estimate, inner.estimate),
            (result.default[1].low, inner.default[1].low),
            (result.default[1].high, inner.default[1].high),
        ):
            assert np.min(outer_values) <= np.min(inner_values) + 1e-12
            assert np.max(outer_values) >= np.max(inner_values) - 1e-12


def test_too_many_totals_are_said() -> None:
    fits = both({"events": "900", "risk": "4.5"}, {"events": "950", "risk": "4.7"})
    assert fits.count > MOST_EVALUATED
    assert not fits.complete
    assert fits.tables.events_intervention.size <= MOST_EVALUATED

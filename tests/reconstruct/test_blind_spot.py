"""The stored blind spot is what its generator measures: begun again on the first trials of each row."""

from __future__ import annotations

import pytest

from app.reconstruct.blind_spot import blind_spot
from tests.bench.reconstruct import SLIPS, limits_passing, p_passing


def test_every_row_is_stored() -> None:
    found = blind_spot()
    assert {kind: list(sizes) for kind, sizes in found.items()} == {"p": ["0.01", "0.02", "0.03"], "limit": ["1", "2", "3"]}
    assert all(0 <= passing.passed <= passing.tried <= SLIPS for sizes in found.values() for passing in sizes.values())


@pytest.mark.parametrize("units", [1, 3])
def test_a_limit_one_unit_off_passes_and_three_hardly_ever(units: int) -> None:
    passed, tried = limits_passing(units, 25)
    stored = blind_spot()["limit"][str(units)]
    assert abs(passed / tried - stored.passed / stored.tried) < 0.2


def test_a_p_further_off_passes_less() -> None:
    shares = [passed / tried for passed, tried in (p_passing(0.01, 60), p_passing(0.03, 60))]
    assert shares[0] > shares[1]

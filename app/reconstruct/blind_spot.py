"""Small slips that pass the check of a printed number: the tool's blind spot, measured.

`blind_spot.json` is made by `python -m tests.generate_blind_spot`, which says how.
"""

from __future__ import annotations

import json
from functools import lru_cache
from pathlib import Path
from typing import NamedTuple


class Passing(NamedTuple):
    """Slips that pass, of those tried."""

    passed: int
    tried: int


@lru_cache(maxsize=1)
def blind_spot() -> dict[str, dict[str, Passing]]:
    """By kind ("p", "limit") and size of the slip (0.01 to 0.03; 1 to 3 units)."""
    found = json.loads((Path(__file__).parent / "blind_spot.json").read_text(encoding="utf-8"))
    return {kind: {size: Passing(*counts) for size, counts in sizes.items()} for kind, sizes in found.items()}

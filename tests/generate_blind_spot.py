"""Generates app/reconstruct/blind_spot.json: do not edit that file, run `python -m tests.generate_blind_spot`.

How many small slips pass the check of a printed number: p printed 0.01 to 0.03 too large, and one limit of a risk
ratio 1 to 3 units of its last digit off, beside the true counts, over random trials (tests/bench/reconstruct.py).
"""

from __future__ import annotations

import json
from pathlib import Path

from tests.bench.reconstruct import limits_passing, p_passing

TARGET = Path(__file__).parents[1] / "app" / "reconstruct" / "blind_spot.json"


def main() -> None:
    """Measure and write."""
    found = {
        "p": {f"{by:.2f}": p_passing(by) for by in (0.01, 0.02, 0.03)},
        "limit": {str(n): limits_passing(n) for n in (1, 2, 3)},
    }
    TARGET.write_text(json.dumps(found, indent=1) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()

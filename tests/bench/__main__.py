"""All measurements as one table."""

from __future__ import annotations

from tests.bench import core, page, reconstruct


def main() -> None:
    """Measure and print."""
    print("Median of repeats on this machine; libraries looped over the same tables in the same process.\n")
    for heading, rows in (
        ("Core, per table", core.rows()),
        ("Tables that fit, and verdicts", reconstruct.rows()),
        ("Page", page.rows()),
    ):
        print(heading)
        for name, value in rows:
            print(f"  {name:<62} {value}")
        print()


main()

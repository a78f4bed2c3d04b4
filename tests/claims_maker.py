"""Claims as the boxes of a sheet make them, for tests below the page."""

from __future__ import annotations

from app.printed.claims import Arm, Claim, Quantity
from app.printed.number import read_number


def claim(arm: Arm, quantity: Quantity, text: str) -> Claim:
    """One claim of one arm."""
    if quantity == "risk":
        return Claim(f"{arm}-risk", quantity, arm, read_number(text, "percentage"), "percent")
    return Claim(f"{arm}-{quantity}", quantity, arm, read_number(text, "count"), "people")


def arm_claims(arm: Arm, **texts: str) -> tuple[Claim, ...]:
    """The claims of one arm: events, non_events, total, risk."""
    return tuple(claim(arm, quantity, text) for quantity, text in texts.items())  # type: ignore[arg-type]

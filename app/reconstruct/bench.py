"""What claims are held against, and what judging any of them needs."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from app.measures.fourfold import Floats, Fourfold
from app.printed.claims import Claim
from app.reconstruct.prints import Timed
from app.reconstruct.recompute import recomputed_measure
from app.reconstruct.stated import ArmStated, Stated
from app.reconstruct.verdict import Advice, Judgement, Reason
from app.reconstruct.window import exact

REASONS: dict[str, Reason] = {
    "adjusted": "adjusted",
    "matched": "adjusted",
    "time_to_event": "time_to_event",
    "clustered": "clustered",
    "imputed": "imputed",
}


@dataclass(frozen=True, slots=True)
class Bench:
    """What claims are held against.

    `tables` fit the claims not set aside (None where a total stays open); `many` stand for the printed
    percentages alone where there are no tables. `tied` are claims that contradict each other.
    """

    of: Stated
    tables: Fourfold | None
    many: Fourfold | None
    aside: frozenset[str]
    tied: frozenset[str]
    one: bool

    @property
    def timed(self) -> Timed | None:
        """Person-time of both arms, if printed."""
        return self.of.timed

    def arm(self, claim: Claim) -> ArmStated:
        """The claims of the claim's arm."""
        return self.of.arms[0 if claim.arm == "intervention" else 1]

    def counts(self, claim: Claim) -> tuple[Floats, Floats] | None:
        """Events and total of the claim's arm over the tables."""
        if self.tables is None:
            return None
        a, n1, c, n2 = self.tables.floats()
        return (a, n1) if claim.arm == "intervention" else (c, n2)


def higher(bench: Bench) -> bool | None:
    """Whether every table says the intervention arm has more; None if they say neither."""
    tables = bench.tables if bench.tables is not None else bench.many
    if tables is None:
        return None
    sides = np.sign(tables.determinant)
    return True if np.all(sides > 0) else False if np.all(sides < 0) else None


def printed_otherwise(claim: Claim, of: Stated) -> bool:
    """Whether the same quantity is printed elsewhere with another value."""
    same = [c for c in (*of.counts, *of.measures) if c.quantity == claim.quantity and c.arm == claim.arm and c.id != claim.id]
    for other in same:
        if claim.place == other.place or claim.number is None or other.number is None or claim.total_kind != other.total_kind:
            continue
        if not exact(claim.said, claim.factor).meets(exact(other.said, other.factor)):
            return True
    return False


def wrong_word(claim: Claim, bench: Bench, notes: tuple[Advice, ...]) -> Judgement:
    """A number that agrees under a direction word that does not."""
    recomputed = recomputed_measure(claim, bench.of, bench.tables)[0] if bench.tables is not None and claim.arm is None else ()
    return Judgement(
        claim,
        "does_not_agree",
        findings=("direction_word_against_numbers",),
        notes=notes,
        recomputed=recomputed,
        consequence="direction",
        evidence={"sense": claim.sense},
    )

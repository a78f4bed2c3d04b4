"""What is concluded of each printed number: slugs and evidence, no sentences."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from app.measures.fourfold import Fourfold
from app.printed.claims import Claim

Verdict = Literal["agrees", "agrees_within_rounding", "agrees_under_another_reading", "cannot_be_checked", "does_not_agree"]
VERDICTS: tuple[Verdict, ...] = Verdict.__args__  # type: ignore[attr-defined]

Reading = Literal[
    "arms_swapped",
    "complement_outcome",
    "odds_ratio_called_risk_ratio",
    "risk_ratio_called_odds_ratio",
    "rate_ratio_called_risk_ratio",
    "hazard_ratio_called_risk_ratio",
    "ratio_read_as_reduction",
    "reduction_read_as_ratio",
    "points_called_percent",
    "percent_called_points",
    "per_thousand_called_percent",
    "other_denominator",
    "other_confidence_level",
    "one_sided_p",
    "needed_from_another_difference",
    "opposite_sign",
    "unusual_method",
]
READINGS: tuple[Reading, ...] = Reading.__args__  # type: ignore[attr-defined]

Finding = Literal[
    "count_exceeds_total",
    "impossible_percentage",
    "percentage_does_not_fit",
    "total_does_not_fit",
    "count_does_not_fit",
    "contradict_each_other",
    "estimate_outside_interval",
    "interval_off_centre",
    "estimate_does_not_fit",
    "interval_does_not_fit",
    "impossible_p",
    "p_against_counts",
    "p_against_interval",
    "needed_does_not_fit",
    "direction_word_against_numbers",
    "totals_do_not_add",
    "impossible_person_time",
]
FINDINGS: tuple[Finding, ...] = Finding.__args__  # type: ignore[attr-defined]
"""In the order in which the first that holds is the finding."""

Reason = Literal["adjusted", "time_to_event", "clustered", "imputed", "too_little", "unread"]
REASONS: tuple[Reason, ...] = Reason.__args__  # type: ignore[attr-defined]

NoteSlug = Literal[
    "interval_symmetric_on_plain_scale",
    "times_more_wording",
    "needed_incomplete",
    "needed_interval_through_zero",
    "needed_from_rates",
    "differs_between_places",
    "parts_do_not_add",
    "hazard_against_counts",
    "p_mirrors_threshold",
    "interval_narrower_than_counts",
    "percentages_do_not_sum",
    "more_digits_than_people",
    "repeated_numbers",
    "naive_follow_up",
]
NOTE_SLUGS: tuple[NoteSlug, ...] = NoteSlug.__args__  # type: ignore[attr-defined]

Consequence = Literal["direction", "conclusion", "size", "nothing"]
CONSEQUENCES: tuple[Consequence, ...] = Consequence.__args__  # type: ignore[attr-defined]
"""What changes if the recomputed value is taken, most consequential first."""

Spread = tuple[float, float]


@dataclass(frozen=True, slots=True)
class Recomputed:
    """What the tables give by one method or test, as smallest and largest over them, in the printed unit."""

    method: str
    estimate: Spread | None = None
    low: Spread | None = None
    high: Spread | None = None
    prints: bool = False


@dataclass(frozen=True, slots=True)
class Advice:
    """An advisory note: a slug and its evidence. It never changes a verdict."""

    slug: NoteSlug
    evidence: Mapping[str, object] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Judgement:
    """What is concluded of one claim.

    `reading` is the first of `readings`, all that explain the number; `possible` fit it without enough
    evidence. `finding` is the first of `findings`. `evidence` holds what its sentence needs.
    """

    claim: Claim
    verdict: Verdict
    readings: tuple[Reading, ...] = ()
    possible: tuple[Reading, ...] = ()
    findings: tuple[Finding, ...] = ()
    reason: Reason | None = None
    notes: tuple[Advice, ...] = ()
    recomputed: tuple[Recomputed, ...] = ()
    consequence: Consequence = "nothing"
    evidence: Mapping[str, object] = field(default_factory=dict)

    @property
    def reading(self) -> Reading | None:
        """The reading named, if any."""
        return self.readings[0] if self.readings else None

    @property
    def finding(self) -> Finding | None:
        """The finding named, if any."""
        return self.findings[0] if self.findings else None


@dataclass(frozen=True, slots=True)
class Choice:
    """One way out of a contradiction: what is set aside, and the tables that then fit."""

    slug: Literal["if_counts", "if_percentages", "if_measures"]
    set_aside: tuple[str, ...]
    tables: Fourfold


@dataclass(frozen=True, slots=True)
class Tables:
    """The tables that fit: all of them if `complete`, else corners of the band, and `count` of candidates.

    None fit at all where `tables` is None: the claims leave a total open. `narrowed` says that another
    outcome of the paper left fewer.
    """

    tables: Fourfold | None
    count: int
    complete: bool
    narrow_with: str | None = None
    narrowed: bool = False


@dataclass(frozen=True, slots=True)
class OutcomeCheck:
    """Everything concluded of one outcome."""

    judgements: tuple[Judgement, ...]
    tables: Tables
    set_aside: tuple[str, ...]
    choices: tuple[Choice, ...]
    questions: tuple[str, ...]

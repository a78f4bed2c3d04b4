"""Slugs and keys that papers, exports and other programs may hold by now: none is ever renamed or taken away."""

from __future__ import annotations

from app.appraisal.fields import FIGURES
from app.present.asked import QUESTIONS
from app.printed.claims import BASES, QUANTITIES, RISK_KINDS, TEST_KINDS, TOTAL_KINDS
from app.reconstruct.verdict import CONSEQUENCES, FINDINGS, NOTE_SLUGS, READINGS, REASONS, VERDICTS

RELEASED: dict[str, str] = {
    "quantities": (
        "events non_events total risk rate person_time risk_difference risk_ratio odds_ratio rate_ratio "
        "rate_difference hazard_ratio relative_risk_reduction relative_risk_increase number_needed_to_treat "
        "p_value margin"
    ),
    "bases": ("crude adjusted time_to_event clustered imputed matched unstated"),
    "tests": ("superiority noninferiority interaction trend logrank"),
    "risk kinds": ("proportion kaplan_meier cumulative_incidence"),
    "total kinds": ("randomised treated analysed per_protocol safety"),
    "verdicts": ("agrees agrees_within_rounding agrees_under_another_reading cannot_be_checked does_not_agree"),
    "readings": (
        "arms_swapped complement_outcome odds_ratio_called_risk_ratio risk_ratio_called_odds_ratio "
        "rate_ratio_called_risk_ratio hazard_ratio_called_risk_ratio ratio_read_as_reduction "
        "reduction_read_as_ratio points_called_percent percent_called_points per_thousand_called_percent "
        "other_denominator other_confidence_level one_sided_p needed_from_another_difference opposite_sign "
        "unusual_method"
    ),
    "findings": (
        "count_exceeds_total impossible_percentage percentage_does_not_fit total_does_not_fit "
        "count_does_not_fit contradict_each_other estimate_outside_interval interval_off_centre "
        "estimate_does_not_fit interval_does_not_fit impossible_p p_against_counts p_against_interval "
        "needed_does_not_fit direction_word_against_numbers totals_do_not_add impossible_person_time"
    ),
    "reasons": ("adjusted time_to_event clustered imputed too_little unread"),
    "notes": (
        "interval_symmetric_on_plain_scale times_more_wording needed_incomplete needed_interval_through_zero "
        "needed_from_rates differs_between_places parts_do_not_add hazard_against_counts p_mirrors_threshold "
        "interval_narrower_than_counts percentages_do_not_sum more_digits_than_people repeated_numbers "
        "naive_follow_up"
    ),
    "consequences": ("direction conclusion size nothing"),
    "figures": (
        "risk_ratio odds_ratio hazard_ratio rate_ratio risk_difference difference_per_1000 "
        "relative_risk_reduction relative_risk_increase number_needed_to_treat p_value total_both events_both "
        "percentage percentage_at_time randomised person_years rate_per_100 rate_per_1000"
    ),
    "questions": ("crude_or_adjusted which_test_gave_p"),
}

NOW = {
    "quantities": QUANTITIES,
    "bases": BASES,
    "tests": TEST_KINDS,
    "risk kinds": RISK_KINDS,
    "total kinds": TOTAL_KINDS,
    "verdicts": VERDICTS,
    "readings": READINGS,
    "findings": FINDINGS,
    "reasons": REASONS,
    "notes": NOTE_SLUGS,
    "consequences": CONSEQUENCES,
    "figures": tuple(FIGURES),
    "questions": tuple(QUESTIONS),
}


def test_nothing_released_is_missing() -> None:
    for kind, released in RELEASED.items():
        assert set(released.split()) <= set(NOW[kind]), kind


def test_findings_keep_their_order() -> None:
    """The first that holds is the finding, so their order is a promise."""
    assert tuple(RELEASED["findings"].split()) == FINDINGS

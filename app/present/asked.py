"""What a reader is asked or told of a passage, by slug."""

from __future__ import annotations

from collections.abc import Mapping

QUESTIONS: Mapping[str, str] = {
    "crude_or_adjusted": "Is the estimate adjusted, stratified or from a model? It fits the counts only if it is.",
    "which_is_comparator": "Which group is the comparator? The one named first is taken as the intervention.",
    "risk_or_rate_ratio": (
        "Is the relative risk a ratio of risks or of rates? It is taken as of risks; choose rate ratio beside it if not."
    ),
    "which_test_gave_p": "Which test gave the P? It and the interval stand on different sides of 0.05.",
}
"""What a reader is asked, by the slug of the question."""

UNREAD_TEXT: Mapping[str, str] = {
    "not_understood": "not understood",
    "planned": "of what was planned",
    "at_baseline": "of people at entry",
}
"""Why a number of a passage was not read, by slug."""

REPAIR_TEXT: Mapping[str, str] = {
    "joined_words": "Words broken at a line’s end were joined.",
    "marks": "Marks lost in copying, such as minus and equals signs, were put back: check the signs.",
    "lost_points": "Decimal points lost in copying were put back: check the decimals.",
}
"""What was put right in the text of a passage before it was read."""

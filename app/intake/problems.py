"""The sentences of refusal: what is wrong with a field, and what would be right."""

from __future__ import annotations

from app.errors import FieldProblem, PrintedProblem
from app.measures.fourfold import LARGEST_TOTAL

_SHOWN = 24  # how much of a refused text is shown back

_SENTENCES: dict[str, tuple[str, str]] = {
    "too_long": ("This is too long to be one number.", "Type the number alone, such as {example}."),
    "not_a_number": ("“{shown}” is not a number.", "Type digits, such as {example}."),
    "several_numbers": (
        "“{shown}” holds more than one number.",
        "Type one number here, such as {example}, and the others in their own boxes.",
    ),
    "negative": ("A negative number cannot stand here.", "Type 0 or more, such as {example}."),
    "percent_sign_on_count": (
        "A percentage stands where people are counted.",
        "Type it under Per cent, or type how many people, such as {example}.",
    ),
    "count_with_decimals": (
        "People are counted whole; “{shown}” has decimals.",
        "Type a whole number such as {example}, or a percentage under Per cent.",
    ),
    "count_too_large": (
        "More people than this program counts in an arm.",
        f"Type at most {LARGEST_TOTAL:,}; check for a digit too many.",
    ),
    "percentage_above_100": (
        "A percentage of people cannot be above 100.",
        "Check the decimal mark; type a number from 0 to 100.",
    ),
    "total_is_zero": ("Nobody was analysed: no risk can be stated.", "Type how many people were analysed, such as {example}."),
    "count_exceeds_total": (
        "{part:,} here are more than the {total:,} analysed.",
        "Check both numbers, and which box each belongs in.",
    ),
    "totals_do_not_add": (
        "{events:,} with and {non_events:,} without make {sum:,}, not {total:,}.",
        "Check the three numbers, or leave one of them empty.",
    ),
    "text_too_long": ("This text is longer than {limit:,} characters.", "Shorten it; it is kept here until then."),
    "passage_too_long": (
        "The passage is longer than {limit:,} characters, and is not read.",
        "Keep the sentences and tables that print the result.",
    ),
    "more_needed": ("{what}", "{how}"),
    "contradicts_counts": (
        "{events:,} of {total:,} is {share}%, not {printed}.",
        "Check the three numbers; the figures below follow the counts.",
    ),
    "no_count_fits": (
        "No whole number of people gives this percentage.",
        "Check the total and the percentage; the note says which counts and totals come near.",
    ),
    "limits_reversed": ("The lower limit {low} is above the upper limit {high}.", "Check both limits and their signs."),
    "which_arm": ("Which arm this number is of is not said.", "Choose the arm under More."),
    "not_a_risk": ("This is not a risk.", "Type it as 8%, 80 per 1000, or a range such as 5 to 10%."),
    "risk_out_of_range": ("A risk lies between 0 and 100%, the lower end first.", "Check the number and its unit."),
    "proportion_typed": (
        "No whole number of people gives this percentage.",
        "If {printed} is a proportion, type it as a percentage, {hundredfold}.",
    ),
}


def problem(field: str, slug: str, **evidence: object) -> FieldProblem:
    """The refusal `slug` of one field, worded from its evidence."""
    message, hint = _SENTENCES[slug]
    return FieldProblem(field, message.format(**evidence), hint.format(**evidence), slug)


def printed_problem(field: str, refused: PrintedProblem, example: str) -> FieldProblem:
    """The refusal of a text that is not a printed number of the kind asked for."""
    shown = "".join(c if c.isprintable() else "\N{REPLACEMENT CHARACTER}" for c in refused.text.strip()[:_SHOWN])
    return problem(field, refused.slug, shown=shown, example=example)

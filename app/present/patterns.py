"""What the pattern page shows: every component once, from one invented outcome of each awkward kind."""

from __future__ import annotations

from dataclasses import dataclass, replace

from app import __version__
from app.appraisal.examples import LEG_ULCER
from app.appraisal.model import AppraisalInput, OutcomeInput
from app.appraisal.run import appraise
from app.present.boxes import ChoiceView, FieldView
from app.present.pages import names_of
from app.present.results import ResultsView, results_view
from app.printed.claims import ARMS, Claim, Quantity
from app.printed.number import read_number


@dataclass(frozen=True, slots=True)
class Pattern:
    """One set of panels under a heading."""

    heading: str
    results: ResultsView


@dataclass(frozen=True, slots=True)
class PatternsView:
    """`patterns/patterns.html`."""

    fields: tuple[FieldView, ...]
    choice: ChoiceView
    patterns: tuple[Pattern, ...]
    version: str


def _claims(*cells: tuple[Quantity, str, str]) -> tuple[Claim, ...]:
    made = []
    for quantity, *texts in cells:
        kind = "percentage" if quantity == "risk" else "count"
        for arm, text in zip(ARMS, texts, strict=True):
            number = read_number(text, kind)  # type: ignore[arg-type]
            made.append(Claim(f"{arm}-{quantity}", quantity, arm, number, "percent" if kind == "percentage" else "people"))
    return tuple(made)


_CASES: tuple[tuple[str, tuple[Claim, ...]], ...] = (
    ("One table, fewer events", _claims(("events", "46", "67"), ("total", "418", "409"))),
    ("Through infinity, more events", _claims(("events", "30", "24"), ("total", "210", "205"))),
    ("Several tables", _claims(("risk", "11", "16"), ("total", "418", "409"))),
    ("Rare events, out of 1000", _claims(("events", "3", "9"), ("total", "2140", "2096"))),
    ("No events in the comparator", _claims(("events", "5", "0"), ("total", "50", "50"))),
    ("No events at all", _claims(("events", "0", "0"), ("total", "40", "40"))),
    ("No count fits", _claims(("risk", "11.3", "16.4"), ("total", "40", "409"))),
)


def patterns_view() -> PatternsView:
    """Every component once."""
    names = replace(names_of(LEG_ULCER, 0), horizon="12 months")
    patterns = tuple(
        Pattern(
            heading, results_view(appraise(AppraisalInput((OutcomeInput(claims, horizon="12 months"),))).outcomes[0], names)
        )
        for heading, claims in _CASES
    )
    return PatternsView(
        fields=(
            FieldView("plain", "Plain box", "46", "46"),
            FieldView("needed", "Box that is needed", "", "418", "One more number is needed.", "Type how many were analysed."),
            FieldView("refused", "Refused box", "abc", "46", "“abc” is not a number.", "Type digits, such as 46.", True),
        ),
        choice=ChoiceView("choice", "Choice", (("a", "first", True), ("b", "second", False))),
        patterns=patterns,
        version=__version__,
    )

"""The boxes of a sheet as a template shows them: label, typed text, where it came from, and what is wrong with it."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from app.appraisal.fields import FIGURES, NUMBER_FIELDS, arm_field, arm_name_field, figure_field, risk_field
from app.appraisal.sheet import FIGURE_LEVELS, TypedArm, TypedFigure, TypedRisk
from app.errors import FieldProblem
from app.present.numerals import fixed
from app.printed.claims import ARMS
from app.printed.number import PrintedNumber


@dataclass(frozen=True, slots=True)
class FieldView:
    """A box: its name, label and typed text, and what is wrong with it or how it was read.

    `source` is the number of the passage it was filled from, 0 if none; `printed` what stands there, where the
    box was put right by hand.
    """

    name: str
    label: str
    value: str
    example: str = ""
    message: str = ""
    hint: str = ""
    refused: bool = False
    focus: bool = False
    source: int = 0
    printed: str = ""


@dataclass(frozen=True, slots=True)
class ChoiceView:
    """A choice: its name and label, and its options as (value, text, chosen)."""

    name: str
    label: str
    options: tuple[tuple[str, str, bool], ...]


@dataclass(frozen=True, slots=True)
class ArmBoxes:
    """The row of boxes of one arm."""

    key: str
    role: str
    shown_name: str
    name: FieldView
    numbers: tuple[FieldView, ...]


@dataclass(frozen=True, slots=True)
class FigureRow:
    """The boxes of one further number that the paper prints."""

    key: str
    legend: str
    kind: ChoiceView
    value: FieldView
    limits: tuple[FieldView, ...]
    level: ChoiceView | None
    more: tuple[ChoiceView, ...]
    label: FieldView
    opened: bool


@dataclass(frozen=True, slots=True)
class RiskRow:
    """The boxes of one group of the reader's patients."""

    key: str
    name: FieldView
    risk: FieldView
    source: FieldView


class Fields:
    """Makes the boxes of one sheet, each with its own problem."""

    def __init__(
        self,
        problems: Iterable[FieldProblem],
        needs: Iterable[FieldProblem],
        read_as: Mapping[str, PrintedNumber],
        sources: Mapping[str, tuple[int, str]],
    ) -> None:
        self._sources = sources
        self._needs = {problem.field: problem for problem in needs}
        self._problems = {problem.field: problem for problem in problems}
        self._read_as = read_as

    def box(self, name: str, label: str, value: str, example: str = "") -> FieldView:
        """One box."""
        refused = self._problems.get(name)
        shown = refused or self._needs.get(name)
        message, hint = (shown.message, shown.hint) if shown else ("", "")
        if shown is None and name in self._read_as:
            read = self._read_as[name]
            hint = f"read as {fixed(float(read.value), read.decimals)}"
        source, printed = self._sources.get(name, (0, value))
        return FieldView(
            name, label, value, example, message, hint, refused is not None, False, source, "" if printed == value else printed
        )

    def arm(self, index: int, outcome: int, name: str, typed: TypedArm) -> ArmBoxes:
        """The row of one arm."""
        role = ARMS[index].capitalize()
        empty = not any(getattr(typed, spec.part) for spec in NUMBER_FIELDS)
        boxes = tuple(
            self.box(
                arm_field(outcome, index, spec.part),
                f"{role}: {spec.label.lower()}",
                getattr(typed, spec.part),
                spec.example if empty else "",
            )
            for spec in NUMBER_FIELDS
        )
        named = self.box(arm_name_field(index), f"Name of the {ARMS[index]} arm", name)
        return ArmBoxes(ARMS[index], role, name.strip() or role, named, boxes)


BASIS_TEXT = {
    "unstated": "not said",
    "crude": "crude (unadjusted)",
    "adjusted": "adjusted",
    "time_to_event": "time to event",
    "clustered": "clusters allowed for",
    "imputed": "missing filled in",
    "matched": "matched",
}
PLACE_TEXT = {"": "not said", "abstract": "abstract", "text": "text", "table": "table", "figure": "figure"}
ARM_TEXT = {"": "not said", "intervention": "intervention", "comparator": "comparator"}
WORD_TEXT = {"": "none", "lower": "lower, fewer", "higher": "higher, more"}
TEST_TEXT = {
    "": "no difference",
    "superiority": "superiority",
    "noninferiority": "non-inferiority",
    "interaction": "interaction",
    "trend": "trend",
    "logrank": "time to event (log-rank)",
}
PART_TEXT = {"": "stands by itself", "component": "one component of it", "category": "one of several that exclude each other"}


def figure_row(fields: Fields, outcome: int, place: int, figure: TypedFigure) -> FigureRow:
    """The row of one further number."""
    kind = FIGURES[figure.kind]

    def name(part: str) -> str:
        return figure_field(outcome, figure.key, part)

    def choice(part: str, label: str, texts: Mapping[str, str], chosen: str) -> ChoiceView:
        return choice_view(name(part), label, texts, chosen)

    more = (
        [choice("basis", "Crude or adjusted", BASIS_TEXT, figure.basis)] if kind.interval or kind.quantity == "p_value" else []
    )
    more += [choice("arm", "Arm", ARM_TEXT, figure.arm)] if kind.per_arm else []
    more += [choice("test", "Test of", TEST_TEXT, figure.test)] if kind.quantity == "p_value" else []
    more += [choice("word", "Word of direction", WORD_TEXT, figure.word)] if kind.interval else []
    more.append(choice("place", "Printed in", PLACE_TEXT, figure.place))
    limits = (
        tuple(fields.box(name(part), label, getattr(figure, part)) for part, label in (("low", "From"), ("high", "To")))
        if kind.interval
        else ()
    )
    return FigureRow(
        key=figure.key,
        legend=f"Further number {place + 1}",
        kind=choice("kind", "The paper also prints", {key: k.label for key, k in FIGURES.items()}, figure.kind),
        value=fields.box(name("value"), "As printed", figure.value, kind.example),
        limits=limits,
        level=choice("level", "Level", {level: f"{level}%" for level in FIGURE_LEVELS}, figure.level) if limits else None,
        more=tuple(more),
        label=fields.box(name("label"), "What the paper calls it", figure.label),
        opened=(kind.per_arm and not figure.arm) or figure.basis != "unstated" or bool(figure.word or figure.test),
    )


def choice_view(name: str, label: str, texts: Mapping[str, str], chosen: str) -> ChoiceView:
    """A choice of texts by value."""
    return ChoiceView(name, label, tuple((value, text, value == chosen) for value, text in texts.items()))


def risk_row(fields: Fields, outcome: int, risk: TypedRisk) -> RiskRow:
    """The row of one group of patients."""

    def box(part: str, label: str, example: str) -> FieldView:
        return fields.box(risk_field(outcome, risk.key, part), label, str(getattr(risk, part)), example)

    return RiskRow(
        risk.key,
        box("name", "Group", "low risk"),
        box("risk", "Risk without it", "8%"),
        box("source", "Where it is from", "clinic register, 2025"),
    )

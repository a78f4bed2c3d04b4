"""One frozen dataclass per template: all that a page shows, as text."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from datetime import datetime

from app.appraisal.fields import FIGURES, NUMBER_FIELDS, arm_field, arm_name_field, figure_field, outcome_field
from app.appraisal.model import Appraisal
from app.appraisal.sheet import CONFIDENCE_LEVELS, FIGURE_LEVELS, MOST_OUTCOMES, Sheet, TypedArm, TypedFigure, TypedOutcome
from app.errors import FieldProblem
from app.present.numerals import fixed
from app.present.results import ResultsView, results_view
from app.present.wording import CAUTIONS, Names
from app.printed.claims import ARMS
from app.printed.number import PrintedNumber


@dataclass(frozen=True, slots=True)
class FieldView:
    """A box: its name, label and typed text, and what is wrong with it or how it was read."""

    name: str
    label: str
    value: str
    example: str = ""
    message: str = ""
    hint: str = ""
    refused: bool = False
    focus: bool = False


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
class TabView:
    """A tab: an outcome, and whether it is the one shown."""

    text: str
    current: bool


@dataclass(frozen=True, slots=True)
class ShelfLine:
    """A sheet in the list of papers."""

    address: str
    title: str
    outcomes: str
    saved: str


@dataclass(frozen=True, slots=True)
class ConflictView:
    """Another window saved this sheet meanwhile; what was typed here lies apart."""

    saved: str
    theirs: str
    mine: str


@dataclass(frozen=True, slots=True)
class SheetView:
    """`sheet/sheet.html` and its fragment: a sheet with its boxes and results."""

    id: str
    revision: int
    writer: str
    shown: int
    heading: str
    invented: bool
    saved: str
    stamp: str
    tabs: tuple[TabView, ...]
    can_add: bool
    title: FieldView
    reference: FieldView
    outcome_name: FieldView
    counted: FieldView
    horizon: FieldView
    event_is: ChoiceView
    follow_up: ChoiceView
    confidence_level: ChoiceView
    design: ChoiceView
    typed: tuple[str, ...]
    also: str
    columns: tuple[str, ...]
    arms: tuple[ArmBoxes, ...]
    figures: tuple[FigureRow, ...]
    trust: ChoiceView | None
    part_of: ChoiceView | None
    results: ResultsView
    cautions: tuple[str, ...]
    conflict: ConflictView | None
    version: str
    own_page: bool


@dataclass(frozen=True, slots=True)
class HomeView:
    """`home/home.html`: an empty sheet, and the list of papers."""

    sheet: SheetView
    shelf: tuple[ShelfLine, ...]
    kept_in: str
    version: str


@dataclass(frozen=True, slots=True)
class ProblemView:
    """`problem.html`: what went wrong with a request, and the way on."""

    title: str
    message: str
    hint: str
    version: str


EVENT_IS_TEXT = {"not_said": "not said", "unwanted": "unwanted", "wanted": "wanted"}
DESIGN_TEXT = {"trial": "trial", "cohort": "cohort", "case_control": "case-control"}
FOLLOW_UP_TEXT = {"not_said": "not said", "fixed": "same fixed time", "varies": "varies or censored"}


def time_text(moment: datetime, now: datetime) -> str:
    """When: "14:02" today, else "3 Feb 2026"."""
    return f"{moment:%H:%M}" if moment.date() == now.date() else f"{moment.day} {moment:%b %Y}"


def names_of(sheet: Sheet, index: int) -> Names:
    """How to name the arms and the event of one outcome in sentences."""
    outcome = sheet.outcomes[index]
    intervention, comparator = (name.strip() for name in sheet.arms[:2])
    counted = outcome.counted.strip() or outcome.name.strip()
    return Names(
        intervention or "the intervention",
        comparator or "the comparator",
        _lower_first(counted) or "the event",
        outcome.horizon.strip(),
        outcome.follow_up == "fixed",
    )


def _lower_first(text: str) -> str:
    """The text with its first letter small, unless it looks like a name or abbreviation."""
    return text[:1].lower() + text[1:] if text[1:2].islower() else text


def shelf_line(sheet_id: str, sheet: Sheet, saved: datetime, now: datetime) -> ShelfLine:
    """A sheet as a line of the list of papers."""
    named = [outcome.name.strip() or outcome.counted.strip() for outcome in sheet.outcomes]
    outcomes = ", ".join(name for name in named if name) or "no outcome named yet"
    return ShelfLine(f"/sheet/{sheet_id}", _heading(sheet), outcomes, time_text(saved, now))


def _heading(sheet: Sheet) -> str:
    return sheet.title.strip() or "Untitled sheet"


def _typed(sheet: Sheet, shown: int) -> tuple[str, ...]:
    """What is typed, as lines for paper, where boxes would cut it."""
    outcome = sheet.outcomes[shown]
    about = [
        outcome.name.strip(),
        f"counted: {outcome.counted.strip()}" if outcome.counted.strip() else "",
        f"event {EVENT_IS_TEXT[outcome.event_is]}",
        f"time: {outcome.horizon.strip()}" if outcome.horizon.strip() else "time not stated",
        f"follow-up {FOLLOW_UP_TEXT[outcome.follow_up]}",
        DESIGN_TEXT[sheet.design],
    ]
    lines = ["; ".join(part for part in about if part)]
    for j, arm in enumerate(outcome.arms):
        numbers = [f"{spec.label.lower()} {value}" for spec in NUMBER_FIELDS if (value := getattr(arm, spec.part).strip())]
        if numbers:
            lines.append(f"{sheet.arms[j].strip() or ARMS[j].capitalize()}: {', '.join(numbers)}")
    lines += [_typed_figure(figure) for figure in outcome.figures if figure.value.strip() or figure.low.strip()]
    return tuple(lines)


def _typed_figure(figure: TypedFigure) -> str:
    """A further number as a line for paper."""
    ends = f" ({figure.low.strip()} to {figure.high.strip()}; {figure.level}%)" if figure.low.strip() else ""
    said = [BASIS_TEXT[figure.basis]] if figure.basis != "unstated" else []
    said += [f"in the {PLACE_TEXT[figure.place]}"] if figure.place else []
    beside = f", {', '.join(said)}" if said else ""
    return f"{FIGURES[figure.kind].label}: {figure.value.strip()}{ends}{beside}"


def _first_name(sheet: Sheet) -> str:
    return sheet.outcomes[0].name.strip() or "Outcome 1"


def _also(sheet: Sheet, shown: int) -> str:
    """The other outcomes of a sheet, for paper that shows one."""
    others = [o.name.strip() or f"outcome {i + 1}" for i, o in enumerate(sheet.outcomes) if i != shown]
    return f"Also on this sheet: {', '.join(others)}." if others else ""


class _Fields:
    """Makes the boxes of one sheet, each with its own problem."""

    def __init__(
        self, problems: Iterable[FieldProblem], needs: Iterable[FieldProblem], read_as: Mapping[str, PrintedNumber]
    ) -> None:
        self._needs = {problem.field: problem for problem in needs}
        self._problems = {problem.field: problem for problem in problems}
        self._read_as = read_as

    def box(self, name: str, label: str, value: str, example: str = "") -> FieldView:
        refused = self._problems.get(name)
        shown = refused or self._needs.get(name)
        message, hint = (shown.message, shown.hint) if shown else ("", "")
        if shown is None and name in self._read_as:
            read = self._read_as[name]
            hint = f"read as {fixed(float(read.value), read.decimals)}"
        return FieldView(name, label, value, example, message, hint, refused is not None)

    def arm(self, index: int, outcome: int, name: str, typed: TypedArm) -> ArmBoxes:
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
PART_TEXT = {"": "stands by itself", "component": "one component of it", "category": "one of several that exclude each other"}


def _figure_row(fields: _Fields, outcome: int, place: int, figure: TypedFigure) -> FigureRow:
    kind = FIGURES[figure.kind]

    def name(part: str) -> str:
        return figure_field(outcome, figure.key, part)

    def choice(part: str, label: str, texts: Mapping[str, str], chosen: str) -> ChoiceView:
        return _choice(name(part), label, texts, chosen)

    more = (
        [choice("basis", "Crude or adjusted", BASIS_TEXT, figure.basis)] if kind.interval or kind.quantity == "p_value" else []
    )
    more += [choice("arm", "Arm", ARM_TEXT, figure.arm)] if kind.per_arm else []
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
        opened=kind.per_arm or figure.basis != "unstated" or bool(figure.word or figure.place or figure.label),
    )


def _choice(name: str, label: str, texts: Mapping[str, str], chosen: str) -> ChoiceView:
    return ChoiceView(name, label, tuple((value, text, value == chosen) for value, text in texts.items()))


def sheet_view(
    sheet: Sheet,
    appraisal: Appraisal,
    *,
    shown: int,
    problems: Iterable[FieldProblem],
    needs: Iterable[FieldProblem],
    read_as: Mapping[str, PrintedNumber],
    sheet_id: str,
    revision: int,
    writer: str,
    saved: datetime | None,
    now: datetime,
    version: str,
    own_page: bool,
    conflict: ConflictView | None = None,
) -> SheetView:
    """The whole page of one sheet, showing one of its outcomes."""
    fields = _Fields(problems, needs, read_as)
    outcome = sheet.outcomes[shown]
    results = results_view(appraisal.outcomes[shown], names_of(sheet, shown))
    tabs = tuple(TabView(o.name.strip() or f"Outcome {i + 1}", i == shown) for i, o in enumerate(sheet.outcomes))
    return SheetView(
        id=sheet_id,
        revision=revision,
        writer=writer,
        shown=shown,
        heading=_heading(sheet),
        invented=sheet.invented,
        saved="Nothing typed yet" if saved is None else f"Saved {time_text(saved, now)}, on this computer only",
        stamp="" if saved is None else f"Saved {saved.day} {saved:%B %Y, %H:%M}; Armslength {version}",
        tabs=tabs,
        can_add=saved is not None and len(sheet.outcomes) < MOST_OUTCOMES,
        title=fields.box("title", "Title of the paper", sheet.title, "Title of the paper"),
        reference=fields.box("reference", "Where it is from", sheet.reference, "Journal and year, or where it is from"),
        outcome_name=replace(
            fields.box(outcome_field(shown, "name"), "Outcome", outcome.name, "Recurrence"),
            focus=shown > 0 and outcome == TypedOutcome(horizon=outcome.horizon, follow_up=outcome.follow_up),
        ),
        counted=fields.box(outcome_field(shown, "counted"), "What is counted (a noun)", outcome.counted, "a recurrence"),
        horizon=fields.box(outcome_field(shown, "horizon"), "Time it refers to", outcome.horizon, "12 months"),
        event_is=_choice(outcome_field(shown, "event_is"), "The event is", EVENT_IS_TEXT, outcome.event_is),
        follow_up=_choice(outcome_field(shown, "follow_up"), "Follow-up", FOLLOW_UP_TEXT, outcome.follow_up),
        confidence_level=_choice(
            "confidence_level", "Confidence level", {level: f"{level}%" for level in CONFIDENCE_LEVELS}, sheet.confidence_level
        ),
        design=_choice("design", "Design", DESIGN_TEXT, sheet.design),
        typed=_typed(sheet, shown),
        also=_also(sheet, shown),
        columns=tuple(spec.label for spec in NUMBER_FIELDS),
        arms=tuple(fields.arm(j, shown, sheet.arms[j], typed) for j, typed in enumerate(outcome.arms)),
        figures=tuple(_figure_row(fields, shown, k, figure) for k, figure in enumerate(outcome.figures)),
        trust=_choice(outcome_field(shown, "trust"), "Go by", {v: t for v, t, _ in results.numbers.trust}, outcome.trust)
        if results.numbers.trust
        else None,
        part_of=_choice(outcome_field(shown, "part_of"), f"Beside “{_first_name(sheet)}” it is", PART_TEXT, outcome.part_of)
        if shown
        else None,
        results=results,
        cautions=CAUTIONS,
        conflict=conflict,
        version=version,
        own_page=own_page,
    )


def home_view(sheet: SheetView, shelf: tuple[ShelfLine, ...], kept_in: str, version: str) -> HomeView:
    """The first page."""
    return HomeView(sheet, shelf, kept_in, version)


def conflict_view(theirs: str, mine: str, saved: str, now: datetime) -> ConflictView:
    """Where the two versions of a sheet lie."""
    return ConflictView(time_text(datetime.fromisoformat(saved), now), f"/sheet/{theirs}", f"/sheet/{mine}")

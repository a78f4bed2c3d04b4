"""One frozen dataclass per template: all that a page shows, as text."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from datetime import datetime

from app.appraisal.fields import FIGURES, NUMBER_FIELDS, outcome_field
from app.appraisal.model import Appraisal
from app.appraisal.sheet import CONFIDENCE_LEVELS, MOST_OUTCOMES, Sheet, TypedArm, TypedFigure, TypedOutcome
from app.errors import FieldProblem
from app.present.balance import BalanceView, balance_view
from app.present.boxes import (
    BASIS_TEXT,
    PART_TEXT,
    PLACE_TEXT,
    ArmBoxes,
    ChoiceView,
    Fields,
    FieldView,
    FigureRow,
    RiskRow,
    choice_view,
    figure_row,
    risk_row,
)
from app.present.passage import PassageView, claim_id, numbering, passage_view
from app.present.patients import PatientsView, patients_view
from app.present.results import ResultsView, results_view
from app.present.verdicts import VERDICT_MARK, VERDICT_TEXT
from app.present.wording import CAUTIONS, Names
from app.printed.claims import ARMS
from app.printed.number import PrintedNumber
from app.reading.read import Reading


@dataclass(frozen=True, slots=True)
class TabView:
    """A tab: an outcome, and whether it is the one shown."""

    text: str
    current: bool
    place: int


@dataclass(frozen=True, slots=True)
class OutcomeLine:
    """An outcome in the list of all: its counts as typed, and how many of its numbers got which verdict."""

    name: str
    current: bool
    arms: tuple[str, ...]
    verdicts: tuple[tuple[str, str, int], ...]


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
    passage: PassageView
    passage_box: FieldView
    arm_order: ChoiceView
    assignable: tuple[tuple[str, str], ...]
    list: tuple[OutcomeLine, ...]
    typed: tuple[str, ...]
    also: str
    columns: tuple[str, ...]
    arms: tuple[ArmBoxes, ...]
    figures: tuple[FigureRow, ...]
    trust: ChoiceView | None
    part_of: ChoiceView | None
    results: ResultsView
    risks: tuple[RiskRow, ...]
    patients: PatientsView | None
    balance: BalanceView | None
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


ORDER_TEXT = {"as_read": "as read: first is the intervention", "exchanged": "the other way round"}
_TABS, _LISTED = 6, 3


def _sources(sheet: Sheet, numbers: Mapping[str, int]) -> dict[str, tuple[int, str]]:
    """Which number of the passage each box was filled from, and with what text."""
    return {f"outcome-{f.outcome}-{f.part}": (numbers[claim_id(f)], f.text) for f in sheet.filled if claim_id(f) in numbers}


def _tabs(sheet: Sheet, shown: int) -> tuple[TabView, ...]:
    """The first few outcomes, and the one shown; the list below has them all."""
    return tuple(
        TabView(o.name.strip() or f"Outcome {i + 1}", i == shown, i)
        for i, o in enumerate(sheet.outcomes)
        if i < _TABS or i == shown
    )


def _list(sheet: Sheet, appraisal: Appraisal, shown: int) -> tuple[OutcomeLine, ...]:
    """All outcomes, a line each, where there are several."""
    if len(sheet.outcomes) < _LISTED:
        return ()
    lines = []
    for i, (typed, found) in enumerate(zip(sheet.outcomes, appraisal.outcomes, strict=True)):
        kinds: Counter[str] = Counter(j.verdict for j in found.check.judgements)
        arms = tuple(_counts(arm) for arm in typed.arms)
        verdicts = tuple((VERDICT_MARK[v], VERDICT_TEXT[v], kinds[v]) for v in VERDICT_MARK if kinds[v])
        lines.append(OutcomeLine(typed.name.strip() or f"Outcome {i + 1}", i == shown, arms, verdicts))
    return tuple(lines)


def _counts(arm: TypedArm) -> str:
    """What is typed of an arm: "46 / 418, 11.0%"."""
    counts = " / ".join(part for part in (arm.events.strip(), arm.total.strip()) if part)
    percentage = arm.percentage.strip().removesuffix("%").strip()
    return ", ".join(part for part in (counts, f"{percentage}%" if percentage else "") if part)


def sheet_view(
    sheet: Sheet,
    appraisal: Appraisal,
    *,
    shown: int,
    problems: Iterable[FieldProblem],
    needs: Iterable[FieldProblem],
    read_as: Mapping[str, PrintedNumber],
    reading: Reading,
    assignable: Mapping[str, str],
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
    numbers = numbering(sheet)
    fields = Fields(problems, needs, read_as, _sources(sheet, numbers))
    outcome = sheet.outcomes[shown]
    results = results_view(appraisal.outcomes[shown], names_of(sheet, shown), numbers)
    tabs = _tabs(sheet, shown)
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
        event_is=choice_view(outcome_field(shown, "event_is"), "The event is", EVENT_IS_TEXT, outcome.event_is),
        follow_up=choice_view(outcome_field(shown, "follow_up"), "Follow-up", FOLLOW_UP_TEXT, outcome.follow_up),
        confidence_level=choice_view(
            "confidence_level", "Confidence level", {level: f"{level}%" for level in CONFIDENCE_LEVELS}, sheet.confidence_level
        ),
        design=choice_view("design", "Design", DESIGN_TEXT, sheet.design),
        passage=passage_view(sheet, reading, appraisal, shown),
        passage_box=fields.box("passage", "Passage", sheet.passage),
        arm_order=choice_view("arm_order", "In the passage, the arm named first is", ORDER_TEXT, sheet.arm_order),
        assignable=tuple(assignable.items()),
        list=_list(sheet, appraisal, shown),
        typed=_typed(sheet, shown),
        also=_also(sheet, shown),
        columns=tuple(spec.label for spec in NUMBER_FIELDS),
        arms=tuple(fields.arm(j, shown, sheet.arms[j], typed) for j, typed in enumerate(outcome.arms)),
        figures=tuple(figure_row(fields, shown, k, figure) for k, figure in enumerate(outcome.figures)),
        trust=choice_view(outcome_field(shown, "trust"), "Go by", {v: t for v, t, _ in results.numbers.trust}, outcome.trust)
        if results.numbers.trust
        else None,
        part_of=choice_view(outcome_field(shown, "part_of"), f"Beside “{_first_name(sheet)}” it is", PART_TEXT, outcome.part_of)
        if shown
        else None,
        results=results,
        risks=tuple(risk_row(fields, shown, risk) for risk in outcome.risks),
        balance=balance_view(sheet, appraisal, f"{sheet.confidence_level}% interval"),
        patients=patients_view(appraisal.outcomes[shown], names_of(sheet, shown)),
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

"""A sheet as typed -> AppraisalInput, with every problem beside it. What is sound goes on regardless."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from decimal import Decimal
from typing import cast

from app.appraisal.fields import (
    FIGURES,
    NUMBER_FIELDS,
    TEXT_LIMIT,
    ArmPart,
    NumberField,
    arm_field,
    arm_name_field,
    figure_field,
    outcome_field,
    risk_field,
)
from app.appraisal.model import AppraisalInput, OutcomeInput
from app.appraisal.sheet import (
    ARM_ORDERS,
    CONFIDENCE_LEVELS,
    DESIGNS,
    EVENT_IS,
    FIGURE_LEVELS,
    FOLLOW_UP,
    MOST_OUTCOMES,
    PART_OF,
    TRUST,
    WORDS,
    ArmOrder,
    Design,
    EventIs,
    FollowUp,
    PartOf,
    Sheet,
    Trust,
    TypedArm,
    TypedFigure,
    TypedOutcome,
    TypedRisk,
)
from app.errors import FieldProblem, PrintedProblem
from app.intake.figures import MOST_FIGURES, read_figure
from app.intake.passage import assigned, fill
from app.intake.problems import printed_problem, problem
from app.intake.risks import MOST_RISKS, read_risk
from app.measures.fourfold import LARGEST_TOTAL
from app.printed.claims import ARMS, BASES, PLACES, TEST_KINDS, Arm, Basis, Claim, Place, TestKind
from app.printed.number import PrintedNumber, read_number
from app.reading.text import MOST
from app.reconstruct.arm import ArmFits, arm_fits

RISK_PARTS = ("name", "risk", "source")


@dataclass(frozen=True, slots=True)
class Gathered:
    """The input that can be appraised, every refused field, and numbers read otherwise than they look."""

    input: AppraisalInput
    problems: tuple[FieldProblem, ...]
    read_as: Mapping[str, PrintedNumber]


def sheet_from_form(form: Mapping[str, str], current: Sheet) -> Sheet:
    """The current sheet with the posted fields in place of its own; what is not posted stays."""

    def text(name: str, old: str) -> str:
        return form.get(name, old)

    def choice(name: str, allowed: tuple[str, ...], old: str) -> str:
        value = form.get(name, old)
        return value if value in allowed else old

    outcomes = []
    for i, outcome in enumerate(current.outcomes):
        arms = tuple(
            TypedArm(**{f.part: text(arm_field(i, j, f.part), getattr(arm, f.part)) for f in NUMBER_FIELDS})
            for j, arm in enumerate(outcome.arms)
        )
        figures = tuple(_figure_from_form(i, figure, choice, text) for figure in outcome.figures)
        outcomes.append(
            TypedOutcome(
                name=text(outcome_field(i, "name"), outcome.name),
                counted=text(outcome_field(i, "counted"), outcome.counted),
                event_is=cast("EventIs", choice(outcome_field(i, "event_is"), EVENT_IS, outcome.event_is)),
                horizon=text(outcome_field(i, "horizon"), outcome.horizon),
                follow_up=cast("FollowUp", choice(outcome_field(i, "follow_up"), FOLLOW_UP, outcome.follow_up)),
                arms=arms,
                figures=figures,
                trust=cast("Trust", choice(outcome_field(i, "trust"), TRUST, outcome.trust)),
                part_of=cast("PartOf", choice(outcome_field(i, "part_of"), PART_OF, outcome.part_of)),
                risks=tuple(
                    TypedRisk(risk.key, *(text(risk_field(i, risk.key, part), getattr(risk, part)) for part in RISK_PARTS))
                    for risk in outcome.risks
                ),
            )
        )
    outcomes = _asked_for(form, outcomes)
    typed = replace(
        current,
        title=text("title", current.title),
        reference=text("reference", current.reference),
        arms=tuple(text(arm_name_field(j), name) for j, name in enumerate(current.arms)),
        outcomes=tuple(outcomes),
        confidence_level=choice("confidence_level", CONFIDENCE_LEVELS, current.confidence_level),
        design=cast("Design", choice("design", DESIGNS, current.design)),
    )
    passage = text("passage", current.passage).replace("\r\n", "\n")
    order = cast("ArmOrder", choice("arm_order", ARM_ORDERS, current.arm_order))
    if (passage, order) != (current.passage, current.arm_order):
        typed = fill(typed, passage, order)
    return assigned(typed, form, place_in(form.get("outcome", "0")))


def _figure_from_form(
    outcome: int,
    figure: TypedFigure,
    choice: Callable[[str, tuple[str, ...], str], str],
    text: Callable[[str, str], str],
) -> TypedFigure:
    def name(part: str) -> str:
        return figure_field(outcome, figure.key, part)

    return TypedFigure(
        key=figure.key,
        kind=choice(name("kind"), tuple(FIGURES), figure.kind),
        value=text(name("value"), figure.value),
        low=text(name("low"), figure.low),
        high=text(name("high"), figure.high),
        level=choice(name("level"), FIGURE_LEVELS, figure.level),
        basis=cast("Basis", choice(name("basis"), BASES, figure.basis)),
        place=cast("Place", choice(name("place"), ("", *PLACES), figure.place)),
        arm=cast("Arm", choice(name("arm"), ("", *ARMS), figure.arm)),
        word=choice(name("word"), WORDS, figure.word),
        label=text(name("label"), figure.label),
        test=cast("TestKind", choice(name("test"), ("", *TEST_KINDS), figure.test)),
    )


def place_in(text: str) -> int:
    """Which outcome a field of a form names; the first where it names none."""
    return int(text) if text.isascii() and text.isdigit() and len(text) < 4 else 0


def _asked_for(form: Mapping[str, str], outcomes: list[TypedOutcome]) -> list[TypedOutcome]:
    """The outcomes with an outcome or a further number added, or a number taken away, where a button asked for it."""
    place = place_in(form.get("outcome", "0"))
    if place >= len(outcomes):
        return outcomes
    if "add-outcome" in form and len(outcomes) < MOST_OUTCOMES:
        last = outcomes[-1]
        return [*outcomes, TypedOutcome(horizon=last.horizon, follow_up=last.follow_up)]
    of = outcomes[place]
    if "add-figure" in form and len(of.figures) < MOST_FIGURES:
        key = str(max((int(f.key) for f in of.figures), default=0) + 1)
        kind = form["add-figure"] if form["add-figure"] in FIGURES else "risk_ratio"
        of = replace(of, figures=(*of.figures, TypedFigure(key, kind)))
    if "add-risk" in form and len(of.risks) < MOST_RISKS:
        of = replace(of, risks=(*of.risks, TypedRisk(str(max((int(r.key) for r in of.risks), default=0) + 1))))
    if "remove-risk" in form:
        of = replace(of, risks=tuple(r for r in of.risks if r.key != form["remove-risk"]))
    if "remove-figure" in form:
        of = replace(of, figures=tuple(f for f in of.figures if f.key != form["remove-figure"]))
    return [*outcomes[:place], of, *outcomes[place + 1 :]]


def _texts(sheet: Sheet) -> list[FieldProblem]:
    named = [("title", sheet.title), ("reference", sheet.reference)]
    named += [(arm_name_field(j), name) for j, name in enumerate(sheet.arms)]
    for i, outcome in enumerate(sheet.outcomes):
        named += [(outcome_field(i, part), getattr(outcome, part)) for part in ("name", "counted", "horizon")]
    found = [problem(name, "text_too_long", limit=TEXT_LIMIT) for name, value in named if len(value) > TEXT_LIMIT]
    if len(sheet.passage) > MOST:
        found.append(problem("passage", "passage_too_long", limit=MOST, length=len(sheet.passage)))
    return found


def _number(name: str, spec: NumberField, typed: str) -> PrintedNumber | FieldProblem:
    try:
        number = read_number(typed, spec.kind)
    except PrintedProblem as refused:
        return printed_problem(name, refused, spec.example)
    if spec.kind == "count" and number.value > LARGEST_TOTAL:
        return problem(name, "count_too_large")
    if spec.kind == "percentage" and number.value > 100:
        return problem(name, "percentage_above_100")
    if spec.part == "total" and number.value == 0:
        return problem(name, "total_is_zero", example=spec.example)
    return number


def _across(outcome: int, arm: int, numbers: Mapping[ArmPart, PrintedNumber]) -> list[FieldProblem]:
    """Problems between the boxes of one arm: parts larger than the whole, parts that do not add up."""
    count = {part: int(number.value) for part, number in numbers.items() if part != "percentage"}
    events, others, total = (count.get(part) for part in ("events", "non_events", "total"))
    if total is None:
        if events == 0 and others == 0:
            return [problem(arm_field(outcome, arm, "events"), "total_is_zero", example="418")]
        return []
    found = [
        problem(arm_field(outcome, arm, part), "count_exceeds_total", part=value, total=total)
        for part, value in (("events", events), ("non_events", others))
        if value is not None and value > total
    ]
    if not found and events is not None and others is not None and events + others != total:
        field = arm_field(outcome, arm, "total")
        found.append(problem(field, "totals_do_not_add", events=events, non_events=others, sum=events + others, total=total))
    return found


_ONE_MORE = "One more number is needed."
_NEEDED: dict[frozenset[str], tuple[ArmPart, str, str]] = {
    frozenset(): ("events", "This arm is still empty.", "Type any two of its numbers."),
    frozenset({"events"}): ("total", _ONE_MORE, "Type how many were analysed, or the percentage."),
    frozenset({"non_events"}): ("total", _ONE_MORE, "Type how many were analysed, or the percentage."),
    frozenset({"total"}): ("events", _ONE_MORE, "Type how many had the event, or the percentage."),
    frozenset({"percentage"}): ("total", _ONE_MORE, "Type how many were analysed, or how many had the event."),
}
_UNBOUNDED: tuple[ArmPart, str, str] = ("total", "These two allow almost any total.", "Type how many were analysed.")


def _advice(outcome: int, arm: int, parts: frozenset[str], fits: ArmFits, typed: TypedArm) -> FieldProblem | None:
    """What one arm still needs, or what does not go together in it; None where it is settled."""
    percentage = arm_field(outcome, arm, "percentage")
    printed = typed.percentage.strip()
    if fits.status in ("nothing", "too_little"):
        part, what, how = _NEEDED.get(parts, _UNBOUNDED)
        return problem(arm_field(outcome, arm, part), "more_needed", what=what, how=how)
    if fits.status == "contradiction" and fits.runs:
        run = fits.runs[0]
        share = f"{Decimal(100 * run.first) / Decimal(run.total):.2f}"
        return problem(percentage, "contradicts_counts", events=run.first, total=run.total, share=share, printed=printed)
    if fits.status == "none_fits":
        value = read_number(printed, "percentage").value
        if 0 < value < 1:
            return problem(percentage, "proportion_typed", printed=printed, hundredfold=f"{100 * value:f}")
        return problem(percentage, "no_count_fits")
    return None


def needs(sheet: Sheet, outcome: int, gathered: Gathered) -> tuple[FieldProblem, ...]:
    """What the arms of one outcome still lack, or what does not go together in them.

    Nothing is asked of a sheet that is empty, nor of an arm that has a refused box.
    """
    typed = sheet.outcomes[outcome].arms
    have = [frozenset(spec.part for spec in NUMBER_FIELDS if getattr(arm, spec.part).strip()) for arm in typed]
    if not any(have):
        return ()
    refused = {problem.field for problem in gathered.problems}
    found = []
    for j, (arm, parts) in enumerate(zip(ARMS, have, strict=False)):
        if any(arm_field(outcome, j, spec.part) in refused for spec in NUMBER_FIELDS):
            continue
        advice = _advice(outcome, j, parts, arm_fits(arm, gathered.input.outcomes[outcome].claims), typed[j])
        if advice is not None:
            found.append(advice)
    return tuple(found)


def gather(sheet: Sheet) -> Gathered:
    """Read every box of a sheet.

    A box that cannot be read makes no claim and one problem; the others go on. Boxes of one arm that
    contradict each other outright make a problem, and that arm no claims.
    """
    problems = _texts(sheet)
    read_as: dict[str, PrintedNumber] = {}
    outcomes = []
    for i, outcome in enumerate(sheet.outcomes):
        claims: list[Claim] = []
        for j, (arm, typed) in enumerate(zip(ARMS, outcome.arms, strict=False)):
            numbers: dict[ArmPart, PrintedNumber] = {}
            mine: list[Claim] = []
            refused = []
            for spec in NUMBER_FIELDS:
                value = getattr(typed, spec.part)
                if not value.strip():
                    continue
                name = arm_field(i, j, spec.part)
                read = _number(name, spec, value)
                if isinstance(read, FieldProblem):
                    refused.append(read)
                    continue
                numbers[spec.part] = read
                if read.grouped:
                    read_as[name] = read
                unit = "percent" if spec.kind == "percentage" else "people"
                mine.append(Claim(name, spec.quantity, arm, read, unit))
            across = _across(i, j, numbers)
            problems += refused + across
            if not across:
                claims += mine
        for figure in outcome.figures:
            claim, refused = read_figure(i, figure, outcome.horizon.strip())
            problems += refused
            claims += [claim] if claim is not None else []
        risks = []
        for typed_risk in outcome.risks:
            risk, refused = read_risk(i, typed_risk)
            problems += refused
            risks += [risk] if risk is not None else []
        outcomes.append(
            OutcomeInput(
                tuple(claims),
                outcome.event_is,
                outcome.horizon.strip(),
                outcome.follow_up,
                int(sheet.confidence_level) / 100,
                sheet.design,
                outcome.trust,
                outcome.part_of,
                tuple(risks),
            )
        )
    return Gathered(AppraisalInput(tuple(outcomes)), tuple(problems), read_as)

"""A passage fills the boxes of a sheet; what a reader has put right by hand stays where it still applies.

Each box that a passage fills keeps the text it was given (`Filled`). When the passage changes it is read anew: a box
that still says what it was given follows the passage; a box that says otherwise was corrected, and keeps its
correction as long as the passage prints the same number there.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Any

from app.appraisal.fields import FIGURES, NUMBER_FIELDS
from app.appraisal.sheet import (
    FIGURE_LEVELS,
    MOST_OUTCOMES,
    ArmOrder,
    Filled,
    Sheet,
    TypedArm,
    TypedFigure,
    TypedOutcome,
)
from app.errors import PrintedProblem
from app.intake.figures import MOST_FIGURES
from app.printed.claims import ARMS, PLACES, Claim, number_kind
from app.printed.number import Kind, PrintedNumber, read_number
from app.reading.read import Reading, ReadOutcome
from app.reading.read import read as read_passage
from app.reading.text import MOST

BY_HAND = -1
"""The row of what a reader assigned by hand."""


@dataclass(frozen=True, slots=True)
class _Cell:
    text: str
    span: tuple[int, int] | None = None


_Slots = dict[str, _Cell]


@lru_cache(maxsize=8)
def reading_of(passage: str) -> Reading:
    """What a passage says; of one that is too long, nothing."""
    return read_passage(passage) if len(passage) <= MOST else Reading((), (), ())


def _typed(number: PrintedNumber, kind: Kind) -> str:
    """A printed number as a box takes it: as printed where it reads back the same, else plainly."""
    text = number.text.strip()
    try:
        back = read_number(text, kind)
    except PrintedProblem:
        return f"{number.value:f}"
    return text if back.value == number.value and back.decimals == number.decimals else f"{number.value:f}"


def _kind_of(claim: Claim) -> str | None:
    """The key of FIGURES that a claim goes to; None if none holds it."""
    for key, kind in FIGURES.items():
        modelled = claim.risk_kind in ("kaplan_meier", "cumulative_incidence")
        unit = "points" if (claim.quantity, claim.unit) == ("risk_difference", "percent") else claim.unit
        if (
            (kind.quantity, kind.unit) == (claim.quantity, unit)
            and kind.per_arm == (claim.arm is not None)
            and (kind.risk_kind == "kaplan_meier") == modelled
            and (kind.total_kind or "randomised") == (claim.total_kind or "randomised")
        ):
            return key
    return None


_BOXES = {"events": "events", "non_events": "non_events", "total": "total", "risk": "percentage"}


def _slots_of(outcome: ReadOutcome, order: ArmOrder) -> _Slots:
    """What one outcome of a passage puts into boxes, by slot: an arm's box, or a part of a further number."""
    slots: _Slots = {}
    if outcome.name:
        slots["name"] = _Cell(outcome.name[:200])
    if outcome.horizon:
        slots["horizon"] = _Cell(outcome.horizon)
    counted: dict[str, int] = {}
    for claim in outcome.claims:
        arm = ARMS.index(claim.arm) if claim.arm is not None else None
        if arm is not None and order == "exchanged":
            arm = 1 - arm
        box = _BOXES.get(claim.quantity)
        plain = claim.unit in ("people", "percent") and claim.risk_kind in (None, "proportion") and claim.total_kind is None
        if box is not None and arm is not None and plain and f"arm-{arm}-{box}" not in slots:
            slots[f"arm-{arm}-{box}"] = _Cell(_typed(claim.said, number_kind(claim.quantity)), claim.span)
            continue
        key = _kind_of(claim)
        if key is None or sum(counted.values()) >= MOST_FIGURES:
            continue
        counted[key] = counted.get(key, 0) + 1
        for part, cell in _figure_parts(claim, arm):
            slots[f"{key}-{counted[key]}/{part}"] = cell
    return slots


def _figure_parts(claim: Claim, arm: int | None) -> Iterator[tuple[str, _Cell]]:
    kind = number_kind(claim.quantity)
    if claim.number is not None:
        sign = "" if claim.operator == "=" else f"{claim.operator} "
        yield "value", _Cell(sign + _typed(claim.number, kind), claim.span)
    if claim.interval is not None:
        for part, limit in zip(("low", "high"), claim.interval.limits, strict=True):
            if limit is not None:
                yield part, _Cell(_typed(limit, kind), claim.interval.span if part == "low" else None)
        level = f"{100 * claim.interval.confidence_level:.1f}".removesuffix(".0")
        yield "level", _Cell(level if level in FIGURE_LEVELS else "95")
    lower = claim.sense in ("lower", "reduction")
    said = {
        "basis": claim.basis if claim.basis != "unstated" else None,
        "arm": ARMS[arm] if arm is not None else None,
        "word": None if claim.sense is None else "lower" if lower else "higher",
        "test": claim.test,
        "place": claim.place,
        "label": re.sub(r"\s+", " ", claim.label or ""),
    }
    for part, text in said.items():
        if text:
            yield part, _Cell(text)


# -- boxes by the name of their part -----------------------------------------------------------------------

_ARM = re.compile(r"arm-([01])-(events|non_events|total|percentage)")
_FIGURE = re.compile(r"figure-(\d{1,4})-([a-z]+)")


def box_text(outcome: TypedOutcome, part: str) -> str | None:
    """What a box of an outcome says; None if there is no such box."""
    arm, figure = _ARM.fullmatch(part), _FIGURE.fullmatch(part)
    if arm:
        return str(getattr(outcome.arms[int(arm[1])], arm[2]))
    if figure:
        return next((str(getattr(f, figure[2])) for f in outcome.figures if f.key == figure[1]), None)
    return str(getattr(outcome, part))


def _with_text(outcome: TypedOutcome, part: str, text: str) -> TypedOutcome:
    arm, figure = _ARM.fullmatch(part), _FIGURE.fullmatch(part)
    if arm:
        arms = list(outcome.arms)
        arms[int(arm[1])] = replace(arms[int(arm[1])], **{arm[2]: text})
        return replace(outcome, arms=tuple(arms))
    if figure:
        changed: dict[str, Any] = {figure[2]: text}
        figures = tuple(replace(f, **changed) if f.key == figure[1] else f for f in outcome.figures)
        return replace(outcome, figures=figures)
    own: dict[str, Any] = {part: text}
    return replace(outcome, **own)


def _blank(part: str) -> str:
    """What a box says that nobody has filled."""
    figure = _FIGURE.fullmatch(part)
    return str(getattr(TypedFigure(""), figure[2])) if figure else ""


# -- filling -------------------------------------------------------------------------------------------------


def fill(sheet: Sheet, passage: str, order: ArmOrder) -> Sheet:
    """The sheet with another passage, or with its arms the other way round, and its boxes filled from it.

    Parameters
    ----------
    sheet : Sheet
        As it stands, the reader's corrections among it.
    passage : str
        As pasted. One longer than `MOST` is kept and not read.
    order : ArmOrder
        Whether the arms of the passage are taken the other way round.
    """
    rows = [_slots_of(outcome, order) for outcome in reading_of(passage).outcomes]
    before: dict[int, list[Filled]] = {}
    for filled in sheet.filled:
        if filled.row != BY_HAND:
            before.setdefault(filled.row, []).append(filled)
    pairs = _paired(rows, before)
    outcomes = list(sheet.outcomes)
    made: list[Filled] = []
    busy = {parts[0].outcome for parts in before.values() if parts}
    for row, slots in enumerate(rows):
        old = before.get(pairs[row], []) if row in pairs else []
        place = old[0].outcome if old else _free_outcome(outcomes, busy)
        if place is None:
            break
        busy.add(place)
        outcomes[place], found = _merged(outcomes[place], place, row, slots, old)
        made += found
    for row, old in before.items():
        if row not in pairs.values() and old:
            outcomes[old[0].outcome], _ = _merged(outcomes[old[0].outcome], old[0].outcome, row, {}, old)
    kept = {filled.outcome for filled in made}
    while len(outcomes) > 1 and outcomes[-1] == TypedOutcome() and len(outcomes) - 1 not in kept:
        outcomes.pop()
    names = reading_of(passage).arm_names[:: -1 if order == "exchanged" else 1]
    earlier = reading_of(sheet.passage).arm_names[:: -1 if sheet.arm_order == "exchanged" else 1]
    arms = tuple(
        new if (new or now == old) and now in ("", old) else now
        for now, new, old in zip(sheet.arms, names, earlier, strict=True)
    )
    by_hand = [moved for f in sheet.filled if f.row == BY_HAND and (moved := _found_again(f, passage)) is not None]
    return replace(sheet, arms=arms, passage=passage, arm_order=order, outcomes=tuple(outcomes), filled=(*made, *by_hand))


def _paired(rows: list[_Slots], before: Mapping[int, list[Filled]]) -> dict[int, int]:
    """Which earlier row each row is: first those that say the same, then those of the same place."""
    said = {row: {(f.slot, f.text) for f in old} for row, old in before.items()}
    pairs: dict[int, int] = {}
    for row, slots in enumerate(rows):
        mine = {(slot, cell.text) for slot, cell in slots.items()}
        for old, theirs in said.items():
            if mine == theirs and old not in pairs.values():
                pairs[row] = old
                break
    for row in range(len(rows)):
        if row not in pairs and row in said and row not in pairs.values():
            pairs[row] = row
    return pairs


def _free_outcome(outcomes: list[TypedOutcome], busy: set[int]) -> int | None:
    """An outcome that nobody has typed into, or a new one at the end; None if there are too many."""
    for place, outcome in enumerate(outcomes):
        if place not in busy and outcome.arms == (TypedArm(), TypedArm()) and not outcome.figures and not outcome.name:
            return place
    if len(outcomes) >= MOST_OUTCOMES:
        return None
    outcomes.append(TypedOutcome())
    return len(outcomes) - 1


def _merged(outcome: TypedOutcome, place: int, row: int, slots: _Slots, old: list[Filled]) -> tuple[TypedOutcome, list[Filled]]:
    """One outcome after its row of the passage is read anew."""
    earlier = {f.slot: f for f in old}
    made: list[Filled] = []
    for slot, was in earlier.items():
        if slot not in slots and box_text(outcome, was.part) == was.text:
            outcome = _with_text(outcome, was.part, _blank(was.part))
    for slot, cell in slots.items():
        previous = earlier.get(slot)
        if previous is not None and box_text(outcome, previous.part) is not None:
            part, now = previous.part, box_text(outcome, previous.part)
            follows = now == previous.text or cell.text != previous.text
        else:
            outcome, part = _box_for(outcome, slot, earlier, made)
            if not part:
                continue
            follows = box_text(outcome, part) == _blank(part)
        if follows:
            outcome = _with_text(outcome, part, cell.text)
        start, end = cell.span or (-1, -1)
        made.append(Filled(place, part, row, slot, cell.text, start, end))
    gone = {f.part.rsplit("-", 1)[0] for f in old} - {f.part.rsplit("-", 1)[0] for f in made}
    figures = tuple(f for f in outcome.figures if f"figure-{f.key}" not in gone or f.value or f.low or f.high)
    return replace(outcome, figures=figures), made


def _box_for(outcome: TypedOutcome, slot: str, earlier: Mapping[str, Filled], made: list[Filled]) -> tuple[TypedOutcome, str]:
    """The box that a slot goes to: its own, a part of a number already there, or a new number's; "" if a reader removed it."""
    if "/" not in slot:
        return outcome, slot
    number, part = slot.split("/")
    for filled in made:
        if filled.slot.startswith(f"{number}/"):
            return outcome, f"{filled.part.rsplit('-', 1)[0]}-{part}"
    if any(s.startswith(f"{number}/") for s in earlier):
        return outcome, ""
    key = str(max((int(f.key) for f in outcome.figures), default=0) + 1)
    figure = TypedFigure(key, kind=number.rsplit("-", 1)[0])
    return replace(outcome, figures=(*outcome.figures, figure)), f"figure-{key}-{part}"


def _found_again(filled: Filled, passage: str) -> Filled | None:
    """Where a number assigned by hand stands in the passage now, nearest to where it stood; None if nowhere."""
    places = [hit.start() for hit in re.finditer(re.escape(filled.text), passage)] if filled.text else []
    if not places:
        return None
    start = min(places, key=lambda place: abs(place - filled.start))
    return replace(filled, start=start, end=start + len(filled.text))


def with_parts(sheet: Sheet, form: Mapping[str, str]) -> Sheet:
    """The sheet with parts of a paper at the end of its passage, each under the name of the place it stands in.

    `only` names one part, else those ticked are taken.
    """
    numbers = [int(name[5:]) for name in form if re.fullmatch(r"take-\d{1,4}", name)]
    if re.fullmatch(r"\d{1,4}", form.get("only", "")):
        numbers = [int(form["only"])]
    parts = [sheet.passage.rstrip()]
    for number in sorted(numbers):
        text, place = form.get(f"text-{number}", "").strip(), form.get(f"place-{number}", "")
        tag = f"[{place.capitalize()}] " if place in PLACES and place != "table" else ""
        parts.append(f"{tag}{text}" if text else "")
    return fill(sheet, "\n\n".join(part for part in parts if part).replace("\r\n", "\n"), sheet.arm_order)


# -- by hand ---------------------------------------------------------------------------------------------------

_ASSIGNED = re.compile(r"assign-(\d{1,6})-(\d{1,6})")
ASSIGNABLE: dict[str, str] = {
    **{f"arm-{j}-{f.part}": f"{arm}: {f.label.lower()}" for j, arm in enumerate(ARMS) for f in NUMBER_FIELDS},
    **{key: kind.label for key, kind in FIGURES.items() if not kind.per_arm},
}
"""What a number that was not read can be assigned to, and what that is called."""


def assigned(sheet: Sheet, form: Mapping[str, str], outcome: int) -> Sheet:
    """The sheet with the numbers that a reader assigned by hand put into boxes of one outcome."""
    for name, target in form.items():
        found = _ASSIGNED.fullmatch(name)
        if found is None or target not in ASSIGNABLE or not 0 <= outcome < len(sheet.outcomes):
            continue
        start, end = int(found[1]), int(found[2])
        text = sheet.passage[start:end]
        if not text or any(f.start == start for f in sheet.filled):
            continue
        typed, part = sheet.outcomes[outcome], target
        if target in FIGURES:
            if len(typed.figures) >= MOST_FIGURES:
                continue
            key = str(max((int(f.key) for f in typed.figures), default=0) + 1)
            typed, part = replace(typed, figures=(*typed.figures, TypedFigure(key, kind=target))), f"figure-{key}-value"
        typed = _with_text(typed, part, text)
        outcomes = (*sheet.outcomes[:outcome], typed, *sheet.outcomes[outcome + 1 :])
        filled = Filled(outcome, part, BY_HAND, f"hand-{start}", text, start, end)
        sheet = replace(sheet, outcomes=outcomes, filled=(*sheet.filled, filled))
    return sheet

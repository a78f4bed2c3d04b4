"""JSON claims -> outcomes of claims, or every problem at once."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal, InvalidOperation
from typing import Any, Literal, cast

from app.errors import FieldProblem, PrintedProblem
from app.intake.body import Body
from app.intake.problems import printed_problem, problem
from app.measures.fourfold import LARGEST_TOTAL
from app.printed.claims import (
    ARMS,
    BASES,
    OPERATORS,
    PER_ARM,
    PLACES,
    QUANTITIES,
    RISK_KINDS,
    SENSES,
    TEST_KINDS,
    TOTAL_KINDS,
    Arm,
    Claim,
    PrintedInterval,
    Quantity,
    default_unit,
    number_kind,
    unit_factor,
)
from app.printed.number import LONGEST, PrintedNumber, read_number
from app.reading.read import Reading, read
from app.reading.text import MOST
from app.reconstruct.across import Belonging, Kind

MOST_CLAIMS = 400
MOST_OUTCOMES = 60
_CLAIM = [
    "id",
    "quantity",
    "arm",
    "printed",
    "value",
    "unit",
    "operator",
    "interval",
    "basis",
    "sense",
    "test",
    "sides",
    "risk_kind",
    "total_kind",
    "outcome",
    "horizon",
    "place",
    "span",
    "label",
]
_INTERVAL = ["low", "high", "low_value", "high_value", "confidence_level", "kind"]
_EXAMPLES: dict[str, str] = {"count": "46", "percentage": "11.0", "decimal": "0.67", "signed": "-5.4"}
_TEXT_LIMIT = 400


@dataclass(frozen=True, slots=True)
class NamedOutcome:
    """The claims of one outcome as a request names it."""

    name: str | None
    horizon: str | None
    claims: tuple[Claim, ...]


@dataclass(frozen=True, slots=True)
class CheckInput:
    """The outcomes of a paper, and how they belong together."""

    outcomes: tuple[NamedOutcome, ...]
    belongings: tuple[Belonging, ...]
    reading: Reading | None = None


def _optional(body: Body, field: str, allowed: tuple[str, ...]) -> str | None:
    return body.choice(field, allowed) if body.has(field) else None


def _text(body: Body, field: str) -> str | None:
    value = body.given.get(field)
    if value is None:
        return None
    if not isinstance(value, str) or len(value) > _TEXT_LIMIT:
        body.add(field, f"A text of at most {_TEXT_LIMIT} characters is needed.", "Shorten it.", "not_a_text")
        return None
    return value


def _number(body: Body, field: str, value_field: str, quantity: Quantity) -> PrintedNumber | None:
    """A printed number: by its text, or by its plain value where the text is a word."""
    printed, value = body.given.get(field), body.given.get(value_field)
    if printed is None and value is None:
        return None
    if not isinstance(printed, str) or (value is not None and not isinstance(value, str)):
        body.add(field, "The number as printed is needed, as text.", 'Give text, such as "0.67".', "not_a_text")
        return None
    kind = number_kind(quantity)
    try:
        read = read_number(printed, kind)
    except PrintedProblem as refused:
        plain = _plain(value)
        if plain is not None and refused.slug == "not_a_number" and len(printed) <= LONGEST:
            return PrintedNumber(printed, plain, max(0, -int(plain.as_tuple().exponent)))
        found = printed_problem(field, refused, _EXAMPLES[kind])
        body.add(field, found.message, found.hint, found.slug)
        return None
    if abs(read.value) > LARGEST_TOTAL:
        found = problem(field, "count_too_large")
        body.add(field, found.message, found.hint, found.slug)
        return None
    if abs(read.decimals) > LONGEST:
        body.add(field, "More decimals than any paper prints.", "Check the power of ten.", "too_long")
        return None
    return read


def _plain(value: str | None) -> Decimal | None:
    try:
        found = Decimal(value) if value is not None and len(value) <= LONGEST else None
    except InvalidOperation:
        return None
    return found if found is not None and found.is_finite() and abs(found.adjusted()) < LONGEST else None


def _interval(body: Body, quantity: Quantity) -> PrintedInterval | None:
    if not body.has("interval"):
        return None
    inner = body.inner("interval", _INTERVAL, '{"low": "0.47", "high": "0.95"}')
    if not inner.given:
        return None
    low, high = (_number(inner, end, f"{end}_value", quantity) for end in ("low", "high"))
    if low is None and high is None:
        inner.add("low", "An interval needs a limit.", 'Give "low", "high" or both.', "missing_field")
        return None
    if low is not None and high is not None and low.exact > high.exact:
        inner.add(
            "low", f"The lower limit {low.text} is above the upper limit {high.text}.", "Check both limits.", "limits_reversed"
        )
        return None
    level = inner.confidence_level()
    kind = cast("Literal['confidence', 'credible']", inner.choice("kind", ("confidence", "credible"), "confidence"))
    return PrintedInterval(low, high, level, kind, level_assumed=not inner.has("confidence_level"))


def _span(body: Body) -> tuple[int, int] | None:
    value = body.given.get("span")
    if value is None:
        return None
    if not (isinstance(value, list) and len(value) == 2 and all(isinstance(x, int) and not isinstance(x, bool) for x in value)):
        body.add("span", "Two whole numbers are needed.", "Give [start, end].", "not_a_span")
        return None
    start, end = value
    if not 0 <= start <= end <= 10**6:
        body.add("span", "A span starts before it ends.", "Give [start, end] within the passage.", "not_a_span")
        return None
    return start, end


def _claim(body: Body, place: int) -> Claim | None:
    quantity = body.choice("quantity", QUANTITIES)
    before = len(body.problems)
    arm = cast("Arm | None", _optional(body, "arm", ARMS))
    if arm is None and quantity in PER_ARM and quantity not in ("events", "total"):
        body.add("arm", "Which arm is not said.", 'Give "intervention" or "comparator".', "missing_field")
    number = _number(body, "printed", "value", quantity)
    interval = _interval(body, quantity)
    bare = (
        number is None and quantity in PER_ARM and quantity != "total"
    )  # a total may be a range; the others need their number
    if (bare or (number is None and interval is None)) and len(body.problems) == before:
        body.add("printed", "This number is missing.", 'Give it as printed, such as "0.67".', "missing_field")
    unit = _text(body, "unit") or default_unit(quantity)
    if unit_factor(unit) is None:
        body.add(
            "unit",
            "This unit is not known.",
            'Give "percent", "points", "proportion", "people" or such as "per_1000".',
            "unknown_choice",
        )
    sides = body.given.get("sides")
    if sides not in (None, 1, 2) or isinstance(sides, bool):
        body.add("sides", "A test has one side or two.", "Give 1 or 2.", "unknown_choice")
    if number is not None:
        _in_range(body, quantity, number, unit)
    key = _text(body, "id")
    return Claim(
        id=key or f"claim-{place}",
        quantity=quantity,
        arm=arm if quantity in PER_ARM else None,
        number=number,
        unit=unit,
        operator=body.choice("operator", OPERATORS, "="),
        interval=interval,
        basis=body.choice("basis", BASES, "unstated"),
        sense=_optional(body, "sense", SENSES),  # type: ignore[arg-type]
        test=_optional(body, "test", TEST_KINDS),  # type: ignore[arg-type]
        sides=sides,
        risk_kind=_optional(body, "risk_kind", RISK_KINDS),  # type: ignore[arg-type]
        total_kind=_optional(body, "total_kind", TOTAL_KINDS),  # type: ignore[arg-type]
        outcome=_text(body, "outcome"),
        horizon=_text(body, "horizon"),
        place=_optional(body, "place", PLACES),  # type: ignore[arg-type]
        span=_span(body),
        label=_text(body, "label"),
    )


def _in_range(body: Body, quantity: Quantity, number: PrintedNumber, unit: str) -> None:
    factor = unit_factor(unit)
    refusals: list[tuple[bool, str]] = [
        (quantity == "risk" and factor is not None and number.exact * factor > 1, "percentage_above_100"),
        (quantity in ("total", "person_time") and number.exact == 0, "total_is_zero"),
    ]
    for refused, slug in refusals:
        if refused:
            found = problem("printed", slug, example="418")
            body.add("printed", found.message, found.hint, found.slug)


def claims_input(given: Any) -> CheckInput:
    """Read the body of /check.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("claims", "passage", "totals", "belongings"))
    if body.has("passage") and not body.has("claims"):
        return _from_passage(body)
    if body.has("passage"):
        body.add("passage", "A passage and claims are both given.", "Give one of them.", "unknown_field")
    claims = [c for i, inner in enumerate(body.each("claims", _CLAIM, MOST_CLAIMS)) if (c := _claim(inner, i)) is not None]
    totals = _totals(body)
    ids: set[str] = set()
    for i, claim in enumerate(claims):
        if claim.id in ids:
            body.problems.append(
                FieldProblem(f"claims[{i}].id", "This id is used twice.", "Give each claim its own.", "id_used_twice")
            )
        ids.add(claim.id)
    names = list(dict.fromkeys(c.outcome for c in claims))
    if len(names) > MOST_OUTCOMES:
        body.add("claims", f"More than {MOST_OUTCOMES} outcomes.", "Send them in parts.", "too_many_outcomes")
    belongings = _belongings(body, names) if body.has("belongings") else ()
    body.finish()
    return CheckInput(tuple(_outcome(name, [c for c in claims if c.outcome == name], totals) for name in names), belongings)


def passage_of(body: Body) -> str:
    """The passage of a body; empty where it is refused."""
    passage = body.given.get("passage")
    if not isinstance(passage, str):
        body.add("passage", "A passage is needed, as text.", "Give the sentences as they were copied.", "missing_field")
    elif len(passage) > MOST:
        body.add("passage", f"The passage is longer than {MOST:,} characters.", "Send it in parts.", "too_long")
    else:
        return passage
    return ""


def _from_passage(body: Body) -> CheckInput:
    """The outcomes that a passage prints, with the paper's totals where it prints none."""
    passage, totals = passage_of(body), _totals(body)
    if body.has("belongings"):
        body.add("belongings", "Outcomes are named by claims only.", "Give claims, or leave this out.", "unknown_field")
    body.finish()
    found = read(passage)
    outcomes = [_outcome(o.name, list(o.claims), totals) for o in found.outcomes]
    return CheckInput(tuple(outcomes), (), found)


def read_input(given: Any) -> Reading:
    """Read the body of /read.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("passage",))
    passage = passage_of(body)
    body.finish()
    return read(passage)


def _belongings(body: Body, names: list[str | None]) -> tuple[Belonging, ...]:
    """Which outcomes are components of one, and which exclude each other, by their names."""
    found = []
    for inner in body.each("belongings", ("kind", "whole", "parts"), MOST_OUTCOMES):
        kind: Kind = inner.choice("kind", ("components", "categories"))
        whole, parts = inner.given.get("whole"), inner.given.get("parts")
        named = isinstance(parts, list) and all(isinstance(part, str) and part in names for part in parts)
        if not named or not parts:
            inner.add("parts", "Names of outcomes are needed.", "Give the names that the claims give.", "unknown_choice")
        elif kind == "components" and (not isinstance(whole, str) or whole not in names):
            inner.add(
                "whole", "The name of the whole outcome is needed.", "Give the name that the claims give.", "unknown_choice"
            )
        else:
            place = names.index(whole) if kind == "components" else None
            found.append(Belonging(kind, place, tuple(names.index(part) for part in parts)))
    return tuple(found)


def _totals(body: Body) -> dict[Arm, PrintedNumber]:
    if not body.has("totals"):
        return {}
    inner = body.inner("totals", ARMS, '{"intervention": 418, "comparator": 409}')
    found: dict[Arm, PrintedNumber] = {}
    for arm in ARMS:
        if inner.has(arm):
            total = inner.whole(arm, 1)
            if total is not None:
                found[arm] = PrintedNumber(str(total), Decimal(total), 0)
    return found


def _outcome(name: str | None, claims: list[Claim], totals: dict[Arm, PrintedNumber]) -> NamedOutcome:
    """The claims of one outcome, with the paper's totals where it prints none of its own."""
    have = {c.arm for c in claims if c.quantity == "total"}
    added = [
        Claim(f"totals.{arm}", "total", arm, number, "people", outcome=name)
        for arm, number in totals.items()
        if arm not in have
    ]
    horizon = next((c.horizon for c in claims if c.horizon), None)
    return NamedOutcome(name, horizon, (*claims, *added))

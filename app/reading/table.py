"""A table pasted from a page: its header says arms, totals and measure; each row is an outcome."""

from __future__ import annotations

import re
from dataclasses import replace

from app.printed.claims import Arm, Quantity
from app.reading.arms import words_of_arms
from app.reading.columns import table_of_several
from app.reading.grammar import DECIMAL, INTEGER, LABELS, Mark
from app.reading.marks import Estimate
from app.reading.rows import CELL, MEASURE, TOTAL, Row, Table, lines_of, shift
from app.reading.text import Even

_LABELS = [(re.compile(rf"(?<![A-Za-z])(?:{label})(?![A-Za-z])", re.IGNORECASE), quantity) for label, quantity in LABELS]
_P_COLUMN = re.compile(r"(?<![A-Za-z])P(?:[- ]?value)?(?![A-Za-z])", re.IGNORECASE)
_FRACTION = re.compile(rf"(?<![\d.,/])(?P<events>{INTEGER})[ ]*/[ ]*(?P<total>{INTEGER})")
_MOST_RUN = 20_000
_P = re.compile(rf"(?P<operator>[<>=≤≥])?[ ]*(?P<value>{DECIMAL})[ |]*$")


def _row(start: int, line: str, quantity: Quantity | None, *, has_p: bool) -> Row | None:
    cells = list(CELL.finditer(line))[:2]
    if len(cells) < 2:
        cells = list(_FRACTION.finditer(line))[:2]
    if len(cells) < 2:
        return None
    arms = tuple(Mark("cell", start + c.start(), start + c.end(), shift(c, tuple(c.re.groupindex), start)) for c in cells)
    rest, estimate = cells[1].end(), None
    measured = MEASURE.search(line, rest)
    if measured is not None and quantity is not None:
        mark = Mark(
            "cell",
            start + measured.start(),
            start + measured.end(),
            shift(measured, ("value", "low", "high"), start),
            quantity,
        )
        estimate, rest = Estimate(mark, mark), measured.end()
    p_hit = _P.search(line, rest) if has_p else None
    p_value = None
    if p_hit is not None and p_hit.start() >= rest:
        p_value = Mark("p_value", start + p_hit.start(), start + p_hit.end(), shift(p_hit, ("operator", "value"), start))
    return Row(line[: cells[0].start()].strip(" |\t"), arms, estimate, p_value, start)


_RUN_ROW = re.compile(
    rf"[ ](?:(?:CI\)?|P|values?|RR|OR|HR|RD|difference|interval|ratio)[ ]+)*(?P<name>[A-Za-z][A-Za-z ,/\-]{{2,60}}?)(?:,?[ ]+(?:no|n)\.?[ ]*\(%\))?[ ]+{INTEGER}[ ]*(?:/[ ]*{INTEGER})?[ ]*[(\[][ ]*{DECIMAL}[ ]*%?[ ]*[)\]][ ]+"
    rf"{INTEGER}[ ]*(?:/[ ]*{INTEGER})?[ ]*[(\[][ ]*{DECIMAL}[ ]*%?[ ]*[)\]]"
)


def in_rows(passage: Even) -> Even:
    """A table whose rows run together in one line, with a line's end put before each row; offsets stay.

    It is one if two totals are followed by two or more rows of a name and two cells.
    """
    text = passage.text
    totals = list(TOTAL.finditer(text))
    if "\n" in text.strip() or len(totals) < 2 or len(text) > _MOST_RUN:
        return passage
    rows = [hit for hit in _RUN_ROW.finditer(text) if hit.start() >= totals[1].end()]
    between = text[totals[1].end() : rows[-1].start()] if rows else ""
    if len(rows) < 2 or re.search(r"[.;][ ]+[A-Z]|\b(?:was|were|in|had)\b", between):
        return passage
    characters = list(text)
    for hit in rows:
        characters[hit.start("name") - 1] = "\n"
    return replace(passage, text="".join(characters))


def table_of(text: str) -> Table | None:
    """Read even text that is a table; None where its rows hold no two arms."""
    several = table_of_several(text)
    if several is not None:
        return several
    lines = lines_of(text)
    quantity, has_p, header_end = None, False, 0
    rows: list[Row] = []
    for i, (start, line) in enumerate(lines):
        found = _row(start, line, None, has_p=False)
        if found is not None and not TOTAL.search(line):
            header_end = i
            break
    header = " ".join(line for _, line in lines[:header_end])
    offset_header = text[: lines[header_end][0]] if header_end else ""
    for pattern, named in _LABELS:
        if pattern.search(header):
            quantity = named
            break
    has_p = bool(_P_COLUMN.search(header))
    rows = [row for start, line in lines[header_end:] if (row := _row(start, line, quantity, has_p=has_p)) is not None]
    if not rows:
        return None
    hits = list(TOTAL.finditer(offset_header))
    order, assumed = _order_of(offset_header, [hit.end() for hit in hits[:2]])
    totals = {arm: hit.span("total") for arm, hit in zip(order, hits, strict=False)} if len(hits) >= 2 else {}
    return Table(order, assumed, totals, tuple(rows))


def _order_of(header: str, ends: list[int]) -> tuple[tuple[Arm, Arm], bool]:
    """The order of the arms' columns by the words of the header, and whether that is only assumed.

    `ends` are where the totals of the columns end. One arm named alone is of the column it stands in.
    """
    first: tuple[Arm, Arm] = ("intervention", "comparator")
    second: tuple[Arm, Arm] = ("comparator", "intervention")
    places: dict[Arm, int] = {}
    for place, arm in words_of_arms(header):
        places.setdefault(arm, place)
    if len(places) == 2:
        return (first if places["intervention"] < places["comparator"] else second), False
    if not places:
        return first, True
    arm, place = next(iter(places.items()))
    if len(ends) == 2:
        later = place > ends[0]
    else:
        line = header[header.rfind("\n", 0, place) + 1 : place]
        later = len(re.findall(r"[ ]{2,}|[\t|]", line.strip(" |"))) >= 2
    return (first if (arm == "comparator") == later else second), False

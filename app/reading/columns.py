"""Tables with three arms or more: each arm's column against the comparator's, one row of the result for each."""

from __future__ import annotations

import re

from app.printed.claims import ARMS, Arm, Quantity
from app.reading.arms import words_of_arms
from app.reading.grammar import LABELS, Mark
from app.reading.marks import Estimate
from app.reading.rows import CELL, MEASURE, TOTAL, Row, Table, lines_of, shift

_REFERENCE = re.compile(r"(?:1(?:\.0+)?[ ]*)?[(\[]?[ ]*(?:ref(?:erence)?\.?|comparator)[ ]*[)\]]?", re.IGNORECASE)


def table_of_several(text: str) -> Table | None:
    """A table whose rows hold one cell for each of three columns or more; None if this is no such table."""
    lines = lines_of(text)
    cells = [list(CELL.finditer(line)) for _, line in lines]
    widths = [len(found) for found in cells if len(found) >= 2]
    if len(widths) < 2 or min(widths) < 3 or len(set(widths)) > 1:
        return None
    width = widths[0]
    first = next(i for i, found in enumerate(cells) if len(found) == width)
    header = text[: lines[first][0]]
    totals = list(TOTAL.finditer(header))
    if totals and len(totals) != width:
        return None
    names = _names(header, totals)
    reference = _reference(names, [line for _, line in lines], width)
    rows: list[Row] = []
    made: list[int] = []
    for (start, line), found in zip(lines, cells, strict=True):
        if len(found) == width:
            arms = [Mark("cell", start + c.start(), start + c.end(), shift(c, tuple(c.re.groupindex), start)) for c in found]
            name = line[: found[0].start()].strip(" |\t,")
            made = []
            for column in (c for c in range(width) if c != reference):
                spans: dict[Arm, tuple[int, int]] = {}
                if totals:
                    spans = {arm: totals[c].span("total") for arm, c in zip(ARMS, (column, reference), strict=True)}
                of = f"{name}: {names[column]} vs {names[reference]}" if names[column] and names[reference] else name
                made.append(len(rows))
                rows.append(Row(of, (arms[column], arms[reference]), None, None, start, spans))
        elif made and (quantity := _measure_named(line)) is not None:
            for place, estimate in zip(made, _estimates(start, line, quantity), strict=False):
                rows[place] = Row(rows[place].name, rows[place].arms, estimate, None, rows[place].start, rows[place].totals)
    return Table(ARMS, False, {}, tuple(rows)) if rows else None


def _names(header: str, totals: list[re.Match[str]]) -> list[str]:
    """What stands before each total of the header."""
    found, place = [], 0
    for total in totals:
        lead = re.split(r"[\t|\n]|[ ]{2,}", header[place : total.start()].rstrip(" ([,"))[-1]
        found.append(lead.strip(" ()[],|"))
        place = total.end()
    return found + [""] * 20


def _reference(names: list[str], lines: list[str], width: int) -> int:
    """The comparator's column: where "reference" is printed, else where words name it, else the last."""
    for line in lines:
        hits = [hit for hit in _REFERENCE.finditer(line) if "ref" in hit[0].lower()]
        measures = list(MEASURE.finditer(line))
        if hits and len(measures) == width - 1:
            return sum(m.start() < hits[0].start() for m in measures)
    named = [i for i, name in enumerate(names[:width]) if any(arm == "comparator" for _, arm in words_of_arms(name))]
    return named[0] if len(named) == 1 else width - 1


def _measure_named(line: str) -> Quantity | None:
    for label, quantity in LABELS:
        if re.match(rf"[ |\t]*(?:{label})(?![A-Za-z])", line, re.IGNORECASE):
            return quantity
    return None


def _estimates(start: int, line: str, quantity: Quantity) -> list[Estimate]:
    found = []
    label = re.search(r"\(95[ ]*%[ ]*C\.?I\.?\)|95[ ]*%[ ]*C\.?I\.?", line)
    for hit in MEASURE.finditer(line, label.end() if label else 0):
        mark = Mark("cell", start + hit.start(), start + hit.end(), shift(hit, ("value", "low", "high"), start), quantity)
        found.append(Estimate(mark, mark))
    return found

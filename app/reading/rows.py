"""Rows and cells of a pasted table, whatever its columns."""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from app.printed.claims import Arm
from app.reading.grammar import DECIMAL, INTEGER, SIGNED, Mark
from app.reading.marks import Estimate

TOTAL = re.compile(rf"n[ ]*=[ ]*(?P<total>{INTEGER})", re.IGNORECASE)
CELL = re.compile(
    rf"(?<![\d.,/])(?P<events>{INTEGER})(?:[ ]*/[ ]*(?P<total>{INTEGER}))?[ ]*[(\[][ ]*(?P<percent>{DECIMAL})[ ]*%?[ ]*[)\]]"
)
MEASURE = re.compile(
    rf"(?<![\d.,])(?P<value>{SIGNED})[ |\t]*[(\[]?[ ]*(?P<low>{SIGNED})[ ]*(?:to|[-\u2013\u2212,;])[ ]*(?P<high>{SIGNED})[ ]*[)\]]?"
)


@dataclass(frozen=True, slots=True)
class Row:
    """One row: the name before its numbers, and its marks; `totals` where its columns have their own."""

    name: str
    arms: tuple[Mark, ...]
    estimate: Estimate | None
    p_value: Mark | None
    start: int
    totals: dict[Arm, tuple[int, int]] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Table:
    """A table as read: the order of its arms, whether that is said, their totals, and its rows."""

    order: tuple[Arm, Arm]
    assumed: bool
    totals: dict[Arm, tuple[int, int]]
    rows: tuple[Row, ...]


def lines_of(text: str) -> list[tuple[int, str]]:
    """The lines that are not blank, each with its place."""
    found, place = [], 0
    for line in text.split("\n"):
        if line.strip():
            found.append((place, line))
        place += len(line) + 1
    return found


def shift(hit: re.Match[str], names: tuple[str, ...], by: int) -> dict[str, tuple[int, int]]:
    """The places of named groups, moved."""
    parts = {name: hit.span(name) for name in names if hit[name] is not None}
    return {name: (start + by, end + by) for name, (start, end) in parts.items()}

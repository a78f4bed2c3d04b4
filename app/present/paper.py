"""The parts of a paper's pages that print results, as a page shows them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from app.present.verdicts import QUANTITY_TEXT
from app.printed.claims import PLACES
from app.reading.pages import Difference, Part

PLACE_TITLES = {"abstract": "Abstract", "text": "Text", "table": "Tables", "figure": "Figures"}


@dataclass(frozen=True, slots=True)
class PartView:
    """One part: its text, where it stands, and how much of it is read."""

    text: str
    place: str
    page: int
    read: str
    number: int


@dataclass(frozen=True, slots=True)
class PartGroup:
    """The parts of one place."""

    title: str
    parts: tuple[PartView, ...]


@dataclass(frozen=True, slots=True)
class PaperView:
    """`paper/paper.html`: a paper's parts, and what they print differently."""

    id: str
    name: str
    summary: str
    groups: tuple[PartGroup, ...]
    differences: tuple[str, ...]
    version: str


def paper_view(
    sheet_id: str, name: str, parts: Sequence[tuple[Part, int]], differences: Sequence[Difference], version: str
) -> PaperView:
    """The page of a paper; each part with how many numbers were read in it."""
    groups = []
    for place in PLACES:
        mine = tuple(
            PartView(part.text, part.place, part.page, f"{count} {'number' if count == 1 else 'numbers'} read", i)
            for i, (part, count) in enumerate(parts)
            if part.place == place
        )
        if mine:
            groups.append(PartGroup(PLACE_TITLES[place], mine))
    found = f"{len(parts)} {'sentence or table prints' if len(parts) == 1 else 'sentences and tables print'} a result."
    summary = (
        f"{found if parts else 'No printed result was found in its text.'} The file was read on this computer and is not kept."
    )
    lines = tuple(_difference(difference) for difference in differences)
    return PaperView(sheet_id, name or "the paper", summary, tuple(groups), lines, version)


def _difference(found: Difference) -> str:
    """One quantity in two places."""
    arm = f"{found.arm}, " if found.arm else ""
    ends = [f"{shown} in the {place} (page {page})" for place, page, shown in (found.first, found.second)]
    what = f"{arm}{QUANTITY_TEXT[found.quantity]}"
    return f"{what[:1].upper()}{what[1:]}: {' and '.join(ends)}."

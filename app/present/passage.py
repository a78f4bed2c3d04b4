"""The passage as pasted, each number that was read underlined, numbered, and tied to its note in the margin."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

from app.appraisal.model import Appraisal
from app.appraisal.sheet import Filled, Sheet
from app.present.asked import QUESTIONS, REPAIR_TEXT, UNREAD_TEXT
from app.present.verdicts import VERDICT_TEXT
from app.reading.read import Reading

Kind = Literal["text", "mark", "elsewhere", "unread"]


@dataclass(frozen=True, slots=True)
class Piece:
    """A stretch of the passage: plain, a number of the outcome shown, one of another outcome, or one not read."""

    kind: Kind
    text: str
    number: int = 0
    verdict: str = ""
    said: str = ""
    outcome: int = 0
    first: bool = True


@dataclass(frozen=True, slots=True)
class UnreadView:
    """A number that was not read: where, as what it stands there, and why."""

    field: str
    text: str
    why: str


@dataclass(frozen=True, slots=True)
class PassageView:
    """The passage in pieces, the numbers not read, and what is asked about it."""

    text: str
    pieces: tuple[Piece, ...]
    unread: tuple[UnreadView, ...]
    questions: tuple[str, ...]
    repairs: tuple[str, ...]
    exchangeable: bool
    summary: str


_FIGURE = re.compile(r"(figure-\d+)-(?:value|low|high)")


def claim_id(filled: Filled) -> str:
    """The claim that a box of the passage belongs to; an interval rides on its estimate."""
    figure = _FIGURE.fullmatch(filled.part)
    return f"outcome-{filled.outcome}-{figure[1] + '-value' if figure else filled.part}"


def numbering(sheet: Sheet) -> dict[str, int]:
    """The number of each claim that the passage prints, in its order there; one number printed once has one number."""
    found: dict[str, int] = {}
    of_place: dict[int, int] = {}
    for filled in sorted((f for f in sheet.filled if f.start >= 0 and _numbered(f)), key=lambda f: (f.start, f.end)):
        name = claim_id(filled)
        if name not in found:
            found[name] = of_place.setdefault(filled.start, len(of_place) + 1)
    return found


def _numbered(filled: Filled) -> bool:
    return filled.part.startswith("arm-") or bool(_FIGURE.fullmatch(filled.part))


def passage_view(sheet: Sheet, reading: Reading, appraisal: Appraisal, shown: int) -> PassageView:
    """The passage of a sheet, showing one of its outcomes."""
    verdicts = {j.claim.id: j.verdict for outcome in appraisal.outcomes for j in outcome.check.judgements}
    numbers = numbering(sheet)
    places: list[tuple[int, int, Filled | None]] = [(f.start, f.end, f) for f in sheet.filled if f.start >= 0 and _numbered(f)]
    filled = {(start, end) for start, end, _ in places}
    unread = [u for u in reading.unread if not any(s < u.span[1] and u.span[0] < e for s, e in filled)]
    unplaced = [c.span for o in reading.outcomes for c in o.claims if c.span and c.span not in filled]
    places += [(*u.span, None) for u in unread]
    pieces = _pieces(sheet.passage, places, numbers, verdicts, shown)
    return PassageView(
        text=sheet.passage,
        pieces=tuple(pieces),
        unread=tuple(UnreadView(f"assign-{u.span[0]}-{u.span[1]}", u.text, UNREAD_TEXT[u.why]) for u in unread[:40]),
        questions=tuple(QUESTIONS[slug] for slug in reading.questions),
        repairs=tuple(REPAIR_TEXT[slug] for slug in reading.repairs),
        exchangeable="which_is_comparator" in reading.questions or sheet.arm_order == "exchanged",
        summary=_summary(sheet, len(set(numbers.values())), len(unread), len(unplaced)),
    )


def _summary(sheet: Sheet, read: int, unread: int, unplaced: int) -> str:
    if not sheet.passage.strip():
        return ""
    if not read:
        return "No printed result was found in this passage."
    parts = [f"{read} {'number' if read == 1 else 'numbers'} read"]
    if unread:
        parts.append(f"{unread} not read")
    if unplaced:
        parts.append(f"{unplaced} read for which the sheet has no box")
    return "; ".join(parts) + "."


def _pieces(
    passage: str,
    places: Sequence[tuple[int, int, Filled | None]],
    numbers: Mapping[str, int],
    verdicts: Mapping[str, str],
    shown: int,
) -> list[Piece]:
    pieces: list[Piece] = []
    at, seen = 0, set[int]()
    for start, end, filled in sorted(places, key=lambda p: (p[0], p[2] is None or p[2].outcome != shown)):
        if start < at or end > len(passage):
            continue
        if start > at:
            pieces.append(Piece("text", passage[at:start]))
        if filled is None:
            pieces.append(Piece("unread", passage[start:end]))
        else:
            name = claim_id(filled)
            number, verdict = numbers[name], verdicts.get(name, "")
            kind: Kind = "mark" if filled.outcome == shown else "elsewhere"
            pieces.append(
                Piece(
                    kind,
                    passage[start:end],
                    number,
                    verdict,
                    VERDICT_TEXT.get(verdict, ""),
                    filled.outcome,
                    first=number not in seen,
                )
            )
            seen.add(number)
        at = end
    if at < len(passage):
        pieces.append(Piece("text", passage[at:]))
    return pieces

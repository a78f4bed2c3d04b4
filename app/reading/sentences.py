"""Where sentences begin and end."""

from __future__ import annotations

import re
from bisect import bisect_left, bisect_right
from functools import lru_cache
from typing import Literal

_SENTENCE = re.compile(r"(?<=[.;])(?<!vs\.)(?<!v\.)(?<!al\.)\s+(?=[A-Z0-9])|\n")


_REACH = 800  # characters either way: no sentence is longer


@lru_cache(maxsize=4)
def _breaks(text: str) -> tuple[tuple[int, ...], tuple[int, ...]]:
    """Where sentences end, and where the next begin."""
    hits = list(_SENTENCE.finditer(text))
    return tuple(hit.start() for hit in hits), tuple(hit.end() for hit in hits)


def sentence_of(text: str, place: int) -> tuple[int, int]:
    """Start and end of the sentence that holds a place."""
    stops, starts = _breaks(text)
    before = bisect_right(starts, place)
    after = bisect_left(stops, place)
    start, end = starts[before - 1] if before else 0, stops[after] if after < len(stops) else len(text)
    return max(start, place - _REACH), min(end, place + _REACH)


Aside = Literal["planned", "at_baseline"]
_PLANNED = re.compile(
    r"\bpower(?:ed)?\b[^.]*\b(?:detect|show|demonstrate|%)|%[ ]+power\b|\bsample size\b|\b(?:would|to) (?:give|provide|be needed|be required|be declared)\b|"
    r"\bwas to be\b|\bwe (?:assumed|anticipated|estimated|calculated|planned)\b|\balpha (?:of|level|=)|\bexpected (?:event )?rates?\b|"
    r"\banticipated (?:event )?rates?\b",
    re.IGNORECASE,
)
_BASELINE = re.compile(
    r"\b(?:baseline (?:characteristics|demographics|data)|well (?:matched|balanced)|at (?:baseline|entry|enrolment|enrollment|study entry)|mean age|median age|"
    r"median baseline|mean baseline|were (?:women|men|male|female|current smokers|smokers|white|black))\b",
    re.IGNORECASE,
)
_RESULT = re.compile(
    r"\b(?:ratio|relative risk|RR|OR|HR|risk difference|absolute (?:difference|risk reduction)|number needed)\b", re.IGNORECASE
)


def not_results(text: str) -> tuple[tuple[int, int, Aside], ...]:
    """Sentences of what was planned, or of people at entry: their numbers are no results."""
    stops, starts = _breaks(text)
    found: list[tuple[int, int, Aside]] = []
    for start, end in zip((0, *starts), (*stops, len(text)), strict=True):
        if end - start > 3 * _REACH:
            continue
        if _PLANNED.search(text, start, end):
            found.append((start, end, "planned"))
        elif _BASELINE.search(text, start, end) and not _RESULT.search(text, start, end):
            found.append((start, end, "at_baseline"))
        elif (
            found and found[-1][2] == "planned" and re.search(r"\b(?:to be declared|allowing for|assuming)\b", text[start:end])
        ):
            found.append((start, end, "planned"))
    return tuple(found)

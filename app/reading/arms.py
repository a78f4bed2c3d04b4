"""Which arm is meant: words that name an arm, and totals stated beside them."""

from __future__ import annotations

import re

from app.printed.claims import Arm

_COMPARATOR = (
    r"placebo|controls?|comparator|usual[- ]care|usual|standard|conventional|reference|deferred|untreated|unexposed|non-?exposed|"
    r"no treatment|sham|témoin|Kontrollgruppe|Kontrolle|control(?:e)?groep|second method|grupo control"
)
_INTERVENTION = (
    r"active(?:ly)?|intervention|experimental|treatment group|treated|test\b|new\b|exposed|cases|screening|vaccin\w+|actif|"
    r"first method|Intervention\w*|Interventions?gruppe|behandeling|grupo activo|active drug|trial drug"
)
_WORDS = re.compile(
    rf"(?<![A-Za-z-])(?:(?P<comparator>{_COMPARATOR})|(?P<intervention>{_INTERVENTION}))(?![a-z])", re.IGNORECASE
)


def words_of_arms(text: str, offset: int = 0) -> list[tuple[int, Arm]]:
    """Where words name an arm, in order."""
    return [
        (offset + hit.start(), "comparator" if hit["comparator"] else "intervention")
        for hit in _WORDS.finditer(text)
        if hit[0].lower() != "cases" or "controls" in text.lower()
    ]


_TOTAL = re.compile(
    r"(?<![\d.,/%(\[])(?:n[ ]*=[ ]*)?(?P<total>\d{1,3}(?:[,\u2009]\d{3})+|\d{2,6})(?![\d.,]*[\d%/]|[ ]*[%/(\[]|[ ]*of\b)"
)


def totals_in(text: str, taken: bytes) -> dict[Arm, tuple[int, int]]:
    """People of each arm, where a sentence gives both: "152 people on active treatment and 144 on placebo entered".

    A number that a rule has taken is no total. Where an arm is named before the first number, each number is of the
    arm named last before it, else of the arm named next.
    """
    for first, last in _sentences(text):
        hits = [hit for hit in _TOTAL.finditer(text, first, last) if not any(taken[hit.start() : hit.end()])]
        words = words_of_arms(text[first:last], first)
        if len(hits) < 2 or not words:
            continue
        before = words[0][0] < hits[0].start()
        found: dict[Arm, tuple[int, int]] = {}
        for hit in hits:
            near = [w for w in words if w[0] < hit.start()][-1:] if before else [w for w in words if w[0] > hit.start()][:1]
            if near and abs(near[0][0] - hit.start()) < 90 and near[0][1] not in found:
                found[near[0][1]] = hit.span("total")
        if len(found) == 2:
            return found
    return {}


def _sentences(text: str) -> list[tuple[int, int]]:
    ends = [hit.start() for hit in re.finditer(r"[.;](?<!vs\.)(?=\s+[A-Z0-9])|\n", text)] + [len(text)]
    starts = [0, *(end + 1 for end in ends[:-1])]
    return list(zip(starts, ends, strict=True))

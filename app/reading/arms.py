"""Which arm is meant: words that name an arm, and totals stated beside them."""

from __future__ import annotations

import re

from app.printed.claims import ARMS, Arm

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


_ENTERED = re.compile(
    r"\b(?:assigned|allocated|randomi[sz]ed|randomly|received|enrolled|included|analy[sz]ed|entered|underwent|group|arm)\b",
    re.IGNORECASE,
)


def totals_in(text: str, taken: bytes) -> dict[Arm, tuple[int, int]]:
    """People of each arm, where a sentence gives both: "152 people on active treatment and 144 on placebo entered".

    A number that a rule has taken is no total, nor is the sum of two others. Where an arm is named before the first
    number, each number is of the arm named last before it, else of the arm named next. Where words name neither and
    the sentence says how people were assigned, the first is of the intervention, unless only one stands by a word of
    the comparator.
    """
    for first, last in _sentences(text):
        hits = [hit for hit in _TOTAL.finditer(text, first, last) if not any(taken[hit.start() : hit.end()])]
        hits = _without_sum(hits)
        if len(hits) < 2:
            continue
        found = _by_words(words_of_arms(text[first:last], first), hits)
        if len(found) == 2:
            return found
        if (
            len(hits) == 2
            and _ENTERED.search(text, first, last)
            and not re.search(r"[.%]", text[hits[0].end() : hits[1].start()])
        ):
            spans = [h.span("total") for h in hits]
            first_is_comparator = found.get("comparator") == spans[0] or found.get("intervention") == spans[1]
            return dict(zip(("comparator", "intervention") if first_is_comparator else ARMS, spans, strict=True))
    return {}


def _without_sum(hits: list[re.Match[str]]) -> list[re.Match[str]]:
    """Of three numbers, the two that add up to the other."""
    sizes = [int(re.sub(r"\D", "", hit["total"])) for hit in hits]
    if len(hits) == 3:
        for k in range(3):
            if sum(sizes) == 2 * sizes[k]:
                return hits[:k] + hits[k + 1 :]
    return hits


def _by_words(words: list[tuple[int, Arm]], hits: list[re.Match[str]]) -> dict[Arm, tuple[int, int]]:
    """The number of each arm that words name: the one after the word where a word comes first, else the one before it."""
    found: dict[Arm, tuple[int, int]] = {}
    before = bool(words) and words[0][0] < hits[0].start()
    for place, arm in words:
        sides = [h for h in hits if h.start() > place][:1] if before else [h for h in hits if h.start() < place][-1:]
        near = [h for h in sides if abs(h.start() - place) < 90 and h.span("total") not in found.values()]
        if near and arm not in found:
            found[arm] = near[0].span("total")
    return found


def _sentences(text: str) -> list[tuple[int, int]]:
    ends = [hit.start() for hit in re.finditer(r"[.;](?<!vs\.)(?=\s+[A-Z0-9])|\n", text)] + [len(text)]
    starts = [0, *(end + 1 for end in ends[:-1])]
    return list(zip(starts, ends, strict=True))

"""Number by number: a note for each printed number, what is found first."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass, replace

from app.appraisal.sheet import Trust
from app.present.asked import QUESTIONS
from app.present.verdicts import (
    CONSEQUENCE_TEXT,
    NARROW_TEXT,
    QUANTITY_TEXT,
    VERDICT_MARK,
    VERDICT_TEXT,
    because,
    method_name,
    note_sentence,
    printed_text,
    recomputed_text,
    unit_sign,
)
from app.present.wording import Names, either
from app.printed.claims import COUNTS
from app.reconstruct.verdict import CONSEQUENCES, Judgement, OutcomeCheck

_COUNTED = ("no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten")


@dataclass(frozen=True, slots=True)
class NumberNote:
    """One note: what is printed, its verdict and why, and the working.

    `places` are the numbers of the passage that it is about, `place` the same in words.
    """

    what: str
    printed: str
    verdict: str
    mark: str
    text: str
    because: str
    notes: tuple[str, ...]
    working: tuple[str, ...]
    places: tuple[int, ...] = ()
    place: str = ""


@dataclass(frozen=True, slots=True)
class NumbersView:
    """The margin's notes on printed numbers; `contradiction` is empty unless the reader has to choose."""

    summary: str
    contradiction: str
    trust: tuple[tuple[str, str, bool], ...]
    notes: tuple[NumberNote, ...]
    questions: tuple[str, ...]
    narrow: str


def _counted(number: int) -> str:
    return _COUNTED[number] if number < len(_COUNTED) else str(number)


def _summary(check: OutcomeCheck) -> str:
    """How many numbers got which verdict, in one sentence."""
    kinds = Counter(j.verdict for j in check.judgements)
    agree = kinds["agrees"] + kinds["agrees_within_rounding"]
    parts = []
    if agree:
        parts.append(f"{_counted(agree)} {'number is' if agree == 1 else 'numbers are'} consistent with each other")
    if kinds["agrees_under_another_reading"]:
        one = kinds["agrees_under_another_reading"]
        parts.append(f"{_counted(one)} {'agrees' if one == 1 else 'agree'} only under another reading")
    if kinds["does_not_agree"]:
        one = kinds["does_not_agree"]
        parts.append(f"{_counted(one)} {'does' if one == 1 else 'do'} not agree")
    if kinds["cannot_be_checked"]:
        parts.append(f"{_counted(kinds['cannot_be_checked'])} cannot be checked")
    told = "; ".join(parts)
    return f"{told[:1].upper()}{told[1:]}." if told else ""


def _what(judged: Judgement, names: Names) -> str:
    claim = judged.claim
    text = QUANTITY_TEXT[claim.quantity]
    if claim.total_kind == "randomised":
        text = "people randomised"
    return f"{names.row(claim.arm)}: {text}" if claim.arm is not None else text[:1].upper() + text[1:]


def _working(judged: Judgement) -> tuple[str, ...]:
    """What each method or test gives, and which print the number."""
    claim = judged.claim
    if claim.quantity in COUNTS or len(judged.recomputed) < 2:
        return ()
    lines = []
    for found in judged.recomputed:
        prints = ", prints so" if found.prints else ""
        lines.append(f"{method_name(found.method)}: {recomputed_text(claim, found)}{unit_sign(claim)}{prints}")
    return tuple(lines)


def _note(judged: Judgement, names: Names) -> NumberNote:
    consequence = "" if judged.verdict in ("agrees", "agrees_within_rounding") else CONSEQUENCE_TEXT[judged.consequence]
    told = because(judged)
    return NumberNote(
        _what(judged, names),
        printed_text(judged.claim),
        judged.verdict,
        VERDICT_MARK[judged.verdict],
        VERDICT_TEXT[judged.verdict],
        f"{told} {consequence}".strip() if judged.verdict != "cannot_be_checked" else told,
        tuple(note_sentence(note) for note in judged.notes),
        _working(judged),
    )


def _bare(judged: Judgement) -> bool:
    """Whether a count or percentage agrees, with nothing to say of it."""
    return judged.verdict == "agrees" and judged.claim.quantity in (*COUNTS, "risk") and not judged.notes


def _unlinked(judged: Judgement) -> bool:
    return judged.verdict == "cannot_be_checked" and judged.reason == "too_little" and judged.claim.quantity in COUNTS


def _together(judged: list[Judgement], verdict: str, why: str) -> list[NumberNote]:
    """Counts and percentages that need no note each, in one."""
    if not judged:
        return []
    texts = [printed_text(j.claim) for j in judged]
    percent = any(j.claim.quantity == "risk" for j in judged)
    what = "Counts and percentages" if percent else "Counts"
    text = "agree" if verdict == "agrees" else VERDICT_TEXT[verdict]
    return [NumberNote(what, ", ".join(texts), verdict, VERDICT_MARK[verdict], text, why, (), ())]


def _placed(note: NumberNote, judged: list[Judgement], numbers: Mapping[str, int]) -> NumberNote:
    """The note with the numbers that it is about have in the passage."""
    places = tuple(sorted(numbers[j.claim.id] for j in judged if j.claim.id in numbers))
    return replace(note, places=places, place=_in_words(places))


def _in_words(places: tuple[int, ...]) -> str:
    """Numbers as a list of runs: "1–4, 7"."""
    runs: list[list[int]] = []
    for place in places:
        if runs and place == runs[-1][-1] + 1:
            runs[-1].append(place)
        else:
            runs.append([place])
    return ", ".join(str(run[0]) if len(run) == 1 else f"{run[0]}–{run[-1]}" for run in runs)


_VERDICT_ORDER = ("does_not_agree", "agrees_under_another_reading", "agrees", "agrees_within_rounding", "cannot_be_checked")


def numbers_view(check: OutcomeCheck, trust: Trust, names: Names, numbers: Mapping[str, int]) -> NumbersView:
    """The notes of one outcome."""
    bare = [j for j in check.judgements if _bare(j)]
    unlinked = [j for j in check.judgements if _unlinked(j)]
    rest = [j for j in check.judgements if j not in bare and j not in unlinked]
    rest.sort(key=lambda j: (_rank(j.verdict), CONSEQUENCES.index(j.consequence)))
    notes = [_placed(_note(j, names), [j], numbers) for j in rest]
    notes += [_placed(note, bare, numbers) for note in _together(bare, "agrees", "")]
    notes += [
        _placed(note, unlinked, numbers)
        for note in _together(unlinked, "cannot_be_checked", "Nothing else typed bears on them.")
    ]
    tied = [j for j in check.judgements if "contradict_each_other" in j.findings]
    arms = list(dict.fromkeys(names.row(j.claim.arm) for j in tied))
    contradiction = "Counts and percentage contradict each other." if trust and check.set_aside else ""
    if tied:
        contradiction = f"{either(arms)}: counts and percentage contradict each other."
    return NumbersView(
        _summary(check),
        contradiction,
        tuple((value, text, value == trust) for value, text in _TRUST_TEXT.items()) if contradiction else (),
        tuple(notes),
        tuple(QUESTIONS[slug] for slug in check.questions),
        NARROW_TEXT.get(check.tables.narrow_with or "", ""),
    )


_TRUST_TEXT = {
    "": "not chosen: counts for now",
    "counts": "if the counts are right",
    "percentages": "if the percentages are right",
}


def _rank(verdict: str) -> int:
    """Findings first, then other readings, then all else as typed."""
    return min(2, _VERDICT_ORDER.index(verdict))

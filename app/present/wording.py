"""Every sentence a reader sees about results: one per slug, from the evidence."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from app.appraisal.model import Note
from app.appraisal.sheet import EventIs
from app.present.numerals import fixed, people, percentages, ratios, spread
from app.reconstruct.arm import Run

CAUTIONS: tuple[str, ...] = (
    "Averages of one trial’s groups, not a forecast for one person.",
    "Arithmetic cannot judge bias: how people were allocated, followed and reported is for the reader.",
    "An interval carries chance only. One trial is not all the evidence; look for systematic reviews.",
    "Harms are often under-detected in trials. Dose, product information and interactions are outside this program.",
    "For those who appraise trials for their work; not advice to patients. Local guidance and licensed judgement come first.",
)
"""Standing cautions of every sheet, hand-out and export."""

NAIVE = {"varies": "naive: follow-up varies", "not_said": "naive if follow-up varies", "fixed": ""}

DIRECTIONS: Mapping[EventIs, Mapping[str, str]] = {
    "not_said": {"benefit": "for one fewer", "harm": "for one more"},
    "unwanted": {"benefit": "to benefit", "harm": "to harm"},
    "wanted": {"benefit": "to benefit", "harm": "to harm"},
}
"""How a direction of the number needed to treat is said; without benefit and harm until the reader says which is which."""

_LEADING = re.compile(r"^(?:at|within|by|over|after|in|during)\s+", re.IGNORECASE)


_TURNING = frozenset("\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069\u200e\u200f\u061c")


def isolated(text: str) -> str:
    """A typed name as it stands within a sentence: one that runs right to left cannot turn what is around it."""
    plain = "".join(character for character in text if character not in _TURNING)
    turns = any(unicodedata.bidirectional(character) in ("R", "AL", "AN") for character in plain)
    return f"\u2068{plain}\u2069" if turns else plain


@dataclass(frozen=True, slots=True)
class Names:
    """How the sheet names things, with plain words where nothing is typed."""

    intervention: str
    comparator: str
    counted: str
    horizon: str
    fixed_time: bool

    def __post_init__(self) -> None:
        for part in ("intervention", "comparator", "counted", "horizon"):
            object.__setattr__(self, part, isolated(getattr(self, part)))

    def arm(self, key: object) -> str:
        """The name of an arm by its key."""
        return self.intervention if key == "intervention" else self.comparator

    def row(self, key: object) -> str:
        """The name of an arm as it heads a row or a picture."""
        plain = {"the intervention": "Intervention", "the comparator": "Comparator"}
        return plain.get(self.arm(key), self.arm(key))

    def start(self, key: object) -> str:
        """The name of an arm as it begins a sentence."""
        name = self.arm(key)
        return name[:1].upper() + name[1:]

    @property
    def within(self) -> str:
        """The horizon as it ends a clause, with its leading blank; empty if not typed."""
        bare = _LEADING.sub("", self.horizon)
        if not bare:
            return ""
        return f" within {bare}" if self.fixed_time else f" over {bare}"


@dataclass(frozen=True, slots=True)
class NoteText:
    """A note as shown: a headline and its sentences."""

    slug: str
    head: str
    body: str


def either(items: Sequence[str]) -> str:
    """Joined: "a", "a or b", "a, b or c"."""
    return items[0] if len(items) == 1 else f"{', '.join(items[:-1])} or {items[-1]}"


LOWER_HIGHER = (" lower", " higher")
POINTS = (" points lower", " points higher")
PER_CENT = ("% lower", "% higher")
FEWER_MORE = (" fewer", " more")


def signed_spread(values: Sequence[float], texts: Sequence[str], words: tuple[str, str]) -> str:
    """A span of signed values in words that carry the sign: "0.7 to 10.1 lower", "1.2 lower to 3.4 higher".

    `values` (low, high) decide the words, `texts` are their sizes; `words` follow a text as they stand.
    """
    (low, high), (first, last) = values, texts
    if high <= 0 and low < 0:
        return spread((last, first)) + words[0]
    if low >= 0 and high > 0:
        return spread((first, last)) + words[1]
    if low == high == 0:
        return first
    return f"{first}{words[0]} to {last}{words[1]}"


def _people_of(run: Run) -> str:
    return spread([people(run.first), people(run.last)])


def _no_count_fits(evidence: Mapping[str, Any], names: Names) -> tuple[str, str]:
    total = evidence["total"]
    if total is None:
        return (
            "No total fits",
            f"{names.start(evidence['arm'])}: no whole number of people gives this percentage with this count. "
            "Check what was typed first.",
        )
    near = [f"{people(count)} is {percentages([count / total], 2)[0]}%" for count in evidence["nearest"]]
    body = f"{names.start(evidence['arm'])}: no count among {people(total)} rounds to this percentage; {either(near)}."
    if evidence["other_totals"]:
        nearest = sorted(evidence["other_totals"], key=lambda other: abs(other - total))[:4]
        body += f" A total of {either([people(other) for other in sorted(nearest)])} would fit: was another number analysed?"
    if evidence["if_truncated"] is not None:
        body += f" {_people_of(evidence['if_truncated'])} would fit if digits were cut off, not rounded."
    return "No count fits", body + " Check what was typed first."


def _truncated(evidence: Mapping[str, Any], names: Names) -> tuple[str, str]:
    return (
        "More counts if digits were cut off",
        f"{names.start(evidence['arm'])}: {_people_of(evidence['run'])} of {people(evidence['total'])} would print so only "
        "if further digits were cut off instead of rounded. Not used here.",
    )


def _naive(evidence: Mapping[str, Any], _names: Names) -> tuple[str, str]:
    if evidence["follow_up"] == "varies":
        body = (
            "Follow-up varies or people are censored: the figures from counts are naive. "
            "Use risks at a fixed time where the paper gives them."
        )
    else:
        body = (
            "Whether everyone was followed for the same time is not said. If not, the figures from counts are naive: "
            "say it under Follow-up."
        )
    return ("Follow-up varies: naive figures" if evidence["follow_up"] == "varies" else "Follow-up not said"), body


def _odds_part(evidence: Mapping[str, Any], _names: Names) -> tuple[str, str]:
    odds, ratio = (spread(ratios(evidence[key])) for key in ("odds_ratio", "risk_ratio"))
    return (
        "Do not read the odds ratio as a risk ratio",
        f"The event is common enough that the two differ: an odds ratio of {odds} stands beside a risk ratio of {ratio}. "
        "The first speaks of odds only.",
    )


def _no_events(evidence: Mapping[str, Any], names: Names) -> tuple[str, str]:
    first, second = percentages(evidence["upper"], 1)
    level = fixed(100 * evidence["confidence_level"], 0)
    return (
        "No events in either arm",
        "The trial holds no information on the ratio, only an upper limit of each risk: "
        f"{first}% with {names.intervention}, {second}% with {names.comparator} (upper end of the exact two-sided "
        f"{level}% interval). The rule of thumb for a one-sided 95% limit is 3 divided by the number analysed.",
    )


def _fixed(head: str, body: str) -> Callable[[Mapping[str, Any], Names], tuple[str, str]]:
    return lambda _evidence, _names: (head, body)


_NOTES: dict[str, Callable[[Mapping[str, Any], Names], tuple[str, str]]] = {
    "no_count_fits": _no_count_fits,
    "more_if_truncated": _truncated,
    "total_taken_over": lambda evidence, names: (
        "People analysed taken over",
        f"{names.start(evidence['arm'])}: {people(evidence['total'])}, as at the other outcomes of this sheet. Type the number "
        "if it is another here.",
    ),
    "naive_follow_up": _naive,
    "odds_part_from_risk": _odds_part,
    "too_many_tables": lambda evidence, _names: (
        "Too many tables to compute on all",
        f"{people(evidence['count'])} tables fit. The ranges shown come from some of them, spread evenly, and may fall a "
        "little short. Type how many were analysed to narrow them.",
    ),
    "no_events_at_all": _no_events,
    "no_events_in_comparator": _fixed(
        "No events in the comparator",
        "The risk ratio and odds ratio cannot be stated, only a lower limit. No half event is added to the empty cell.",
    ),
    "no_events_in_intervention": _fixed(
        "No events in the intervention arm",
        "The ratios are 0 and only their upper limits inform: none seen is not proof of none. No half event is added to the "
        "empty cell.",
    ),
    "all_have_the_event": _fixed(
        "Everybody has the event",
        "The odds ratio cannot be stated. Of the other methods for the risk ratio, the log interval has no width here.",
    ),
    "wanted_not_said": _fixed(
        "Wanted or unwanted?",
        "Say under “The event is” whether fewer or more of it is better. Until then nothing is called benefit or harm.",
    ),
    "case_control_refuses": _fixed(
        "Case-control: odds ratio only",
        "The numbers of cases and controls were chosen, so these totals hold no risk: no risk difference, "
        "risk ratio, relative reduction or number needed to treat can be had from them. Cases stand as the intervention, "
        "controls as the comparator, the exposed as those with the event.",
    ),
    "time_not_stated": _fixed(
        "Time not stated", "An absolute difference belongs to a time. Type the time that the counts refer to."
    ),
}

NOTE_SLUGS = frozenset(_NOTES)


def note_text(note: Note, names: Names) -> NoteText:
    """A note in words."""
    head, body = _NOTES[note.slug](note.evidence, names)
    return NoteText(note.slug, head, body)

"""Pasted text made even: one form of each mark, broken words joined, every character still tied to its place."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

MOST = 200_000
"""Longest passage read."""

_MIDDLE_DOTS = "\u00b7\u2022\u2219\u22c5\ua78f\u0387"
_BLANKS = "\u00a0\u2000\u2001\u2002\u2003\u2004\u2005\u2006\u2007\u2008\u200a\u205f\u3000\r"
_NARROW = "\u2009\u202f"
_HYPHENS = "\u2010\u2011\u2012"
_DASHES = "\u2013\u2014\u2015"
_GONE = "\u00ad\u200b\u200c\u200d\ufeff\u2060"
_QUOTES = {"\u2018": "'", "\u2019": "'", "\u201c": '"', "\u201d": '"'}
_BROKEN = re.compile(r"(?<=[A-Za-z])-\n[ ]*(?=[a-z])")
_DECIMAL_COMMA = re.compile(r"(?<![\d.,])\d{1,3},\d{1,2}(?!\d)\s*%|[pP]\s*[=<>]\s*0,\d|(?<!\d)\d,\d{1,2}\s*[-;–]\s*\d,\d")
_ENDLESS = re.compile(r"\d{41,}|[ ]{41,}|[A-Za-z]{61,}")  # no number, gap or word of a paper; rules need not try them
_DECIMAL_POINT = re.compile(r"(?<![\d.])\d+\.(?!\d{3}(?!\d))\d")
_THOUSANDS_POINT = re.compile(r"(?<=\d)\.(?=\d{3}(?!\d))")
_TORN = {
    "\u03ea": "\u2212", "\uf02d": "\u2212", "\u03ed": "=", "\uf03d": "=", "\u03fd": "<", "\uf03c": "<",
    "\u03fe": ">", "\uf03e": ">", "\u03e9": "+", "\uf02b": "+", "\u0545": "\u2264", "\uf0a3": "\u2264",
    "\u0546": "\u2265", "\uf0b3": "\u2265", "\u2424": "\u2212",
}  # fmt: skip
"""Marks that symbol fonts leave behind when text is copied out of a page."""
_LOST_POINT = re.compile(r"[pP]\s*[=<>]\s*0 \d{2,4}(?![\d.])")
_WAS_POINT = re.compile(r"(?<![\d.,·])(\d{1,2}) (\d{1,4})(?=[ ]?%|[\])}};,–−-]|\s+to\s|\.?$|\.\s)")

Repair = Literal["joined_words", "marks", "lost_points"]
"""What was put right in text torn from a page."""


@dataclass(frozen=True, slots=True)
class Even:
    """The even text, and for each of its characters the place in the raw text; `ends` one past that place."""

    raw: str
    text: str
    starts: Sequence[int]
    ends: Sequence[int]
    decimal_comma: bool
    repairs: tuple[Repair, ...] = ()

    def span(self, start: int, end: int) -> tuple[int, int]:
        """Where a stretch of the even text stands in the raw text."""
        return self.starts[start], self.ends[end - 1]

    def printed(self, start: int, end: int) -> str:
        """A stretch as it was pasted."""
        first, last = self.span(start, end)
        return self.raw[first:last]


def is_table(text: str) -> bool:
    """Whether text is rows of numbers rather than prose: half its lines, two or more, hold three numbers and few words."""
    lines = [line for line in text.split("\n") if line.strip()]
    rows = [
        line for line in lines if len(re.findall(r"\d+(?:[.,]\d+)?", line)) >= 3 and len(re.findall(r"[a-z]{2,}", line)) <= 8
    ]
    return len(rows) >= 2 and 2 * len(rows) >= len(lines)


def _even_character(character: str) -> str:
    if character in _MIDDLE_DOTS:
        return "\u00b7"
    if character in _BLANKS:
        return " "
    if character == "\t":
        return "  "  # columns stay apart
    if character in _NARROW:
        return "\u2009"
    if character in _HYPHENS:
        return "-"
    if character in _DASHES:
        return "\u2013"
    if character in _GONE:
        return ""
    if character in _QUOTES or character in _TORN:
        return _QUOTES.get(character) or _TORN[character]
    if ord(character) < 128 or character in "\u2212\u2264\u2265\u221e\u2013":
        return character
    plain = unicodedata.normalize("NFKC", character)
    return plain if plain.isprintable() and len(plain) <= 4 else character


def even(raw: str) -> Even:
    """Make text even.

    A hyphen at a line's end within a word goes with the line's end; a middle dot between digits becomes a point, and
    so does a comma where the passage prints decimal commas.
    """
    if raw.isascii() and not _BROKEN.search(raw) and "\t" not in raw and "\r" not in raw:
        return _even(raw, raw, range(len(raw)), range(1, len(raw) + 1))
    characters: list[str] = []
    starts: list[int] = []
    ends: list[int] = []
    skip = {i for found in _BROKEN.finditer(raw) for i in range(found.start(), found.end())}
    for place, character in enumerate(raw):
        if place in skip:
            continue
        for made in _even_character(character):
            characters.append(made)
            starts.append(place)
            ends.append(place + 1)
    return _even(raw, "".join(characters), starts, ends)


def _even(raw: str, text: str, starts: Sequence[int], ends: Sequence[int]) -> Even:
    """The decimal mark and the line ends made even, and lost points put back; none of it moves a character."""
    repairs: list[Repair] = ["joined_words"] if _BROKEN.search(raw) else []
    if any(mark in raw for mark in _TORN):
        repairs.append("marks")
    text = _ENDLESS.sub(lambda run: "\u00a4" * len(run[0]), text)
    if not is_table(text):
        text = text.replace("\n", " ")
    comma = bool(_DECIMAL_COMMA.search(text)) and not _DECIMAL_POINT.search(text)
    text = re.sub(r"(?<=\d)\u00b7(?=\d)|(?<![\w])\u00b7(?=\d)", ".", text)
    if comma:
        text = _THOUSANDS_POINT.sub("\u2009", text)
        text = re.sub(r"(?<=\d),(?=\d)", ".", text)
    elif _LOST_POINT.search(text) and not _DECIMAL_POINT.search(text):
        text = _WAS_POINT.sub(r"\1.\2", text)
        repairs.append("lost_points")
    return Even(raw, text, starts, ends, comma, tuple(repairs))

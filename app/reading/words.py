"""Numbers written as words: "nine", "none", "seventy-five", "two-hundred-fifty"."""

from __future__ import annotations

import re

_UNITS = {
    word: value
    for value, word in enumerate(
        [
            "zero",
            "one",
            "two",
            "three",
            "four",
            "five",
            "six",
            "seven",
            "eight",
            "nine",
            "ten",
            "eleven",
            "twelve",
            "thirteen",
            "fourteen",
            "fifteen",
            "sixteen",
            "seventeen",
            "eighteen",
            "nineteen",
        ]
    )
}
_TENS = {
    word: 10 * (i + 2) for i, word in enumerate(["twenty", "thirty", "forty", "fifty", "sixty", "seventy", "eighty", "ninety"])
}
_ALL = {**_UNITS, **_TENS, "hundred": 100, "none": 0, "no": 0}
_WORD = "|".join(sorted((word for word in _ALL if word not in ("no", "zero")), key=len, reverse=True))

NUMBER_WORD = rf"(?:(?:{_WORD})(?:[- ](?:and[- ])?(?:{_WORD})){{0,5}}(?![- ]?(?:{_WORD})))"
"""Matches a number written as words."""


def value_of(text: str) -> int | None:
    """The number that words write; None if they write none.

    Examples
    --------
    "nine" is 9, "Two-hundred-fifty" 250, "none" 0.
    """
    total, current, seen = 0, 0, False
    for word in re.split(r"[- ]+", text.lower()):
        if word == "and":
            continue
        if word not in _ALL:
            return None
        seen = True
        if word == "hundred":
            current = max(current, 1) * 100
            total, current = total + current, 0
        else:
            current += _ALL[word]
    return total + current if seen else None

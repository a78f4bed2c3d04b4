"""One printed number: the text as typed, its decimal value, and what may stand behind it.

Papers write the decimal mark as a full stop, a comma or a raised dot, group thousands by commas, points,
apostrophes and several kinds of blank, and may leave out the zero before the mark. What a lone separator
means depends on what the number counts: people come whole, so three digits after a mark are a group of
thousands there and decimals anywhere else.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from typing import Literal

from app.errors import PrintedProblem
from app.printed.span import Span

Kind = Literal["count", "percentage", "decimal", "signed"]
"""What a number is: people, a percentage, a number of 0 or more, or one that may be negative."""

LONGEST = 40
"""Longest text read as a number; the largest number papers print is far shorter."""

_RAISED = "\u00b7\u2022\u2219\u22c5\ua78f"
_BLANKS = "\u0020\u00a0\u2007\u2008\u2009\u202f"
_DECIMAL = f"[.,{_RAISED}]"
_GROUPING = f"[.,'\u2019{_BLANKS}]"
_MINUS = "\\-\u2212\u2013"
_SHAPE = re.compile(
    rf"(?P<sign>[{_MINUS}+]?)[{_BLANKS}]*"
    rf"(?P<body>(?:[0-9]{{1,3}}(?:(?P<group>{_GROUPING})[0-9]{{3}}(?:(?P=group)[0-9]{{3}})*)|[0-9]+)?"
    rf"(?:(?P<mark>{_DECIMAL})(?P<decimals>[0-9]*))?)"
)
_FIGURES = re.compile(r"(?<![0-9a-zA-Z])[0-9]+(?![0-9a-zA-Z])")
_SEVERAL = re.compile(rf"(?:[0-9{_BLANKS}{_RAISED}.,/()%=:;]|of|n)+", re.IGNORECASE)  # "46/418 (11.0%)", "71 of 412"
_POWER = re.compile(
    rf"[{_BLANKS}]*(?:[x\u00d7][{_BLANKS}]*10[{_BLANKS}]*\^?|[eE])[{_BLANKS}]*(?P<power>[{_MINUS}]?[0-9]{{1,3}})$"
)
_SUPERSCRIPTS = str.maketrans("\u2070\u00b9\u00b2\u00b3\u2074\u2075\u2076\u2077\u2078\u2079\u207b", "0123456789-")
_PERCENT = re.compile(rf"[{_BLANKS}]*(?:%|\uff05|per cent|percent)$", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class PrintedNumber:
    """A number as printed.

    `text` is what stands there; `value` the same as a decimal in the printed unit, trailing zeros kept;
    `grouped` whether a separator was read as thousands.
    """

    text: str
    value: Decimal
    decimals: int
    grouped: bool = False

    @property
    def exact(self) -> Fraction:
        """The printed value as a fraction, in the printed unit."""
        return Fraction(self.value)

    @property
    def unit_in_last_place(self) -> Fraction:
        """One unit of the last printed digit."""
        return Fraction(10) ** -self.decimals

    def rounds_from(self) -> Span:
        """The true values that print so, under half-up or half-even: the closed half unit either side."""
        half = self.unit_in_last_place / 2
        return Span(self.exact - half, self.exact + half)

    def truncates_from(self) -> Span:
        """The true values that print so when further digits are cut off (towards 0)."""
        away = self.unit_in_last_place
        if self.exact < 0:
            return Span(self.exact - away, self.exact)
        return Span(self.exact, self.exact + away, closed=False)


def _power_of_ten(bare: str) -> tuple[str, int]:
    """The text without a power of ten at its end ("3.2 × 10⁻⁵", "3.2e-5"), and the exponent."""
    found = _POWER.search(bare.translate(_SUPERSCRIPTS))
    if not found:
        return bare, 0
    return bare[: found.start()], int(re.sub(f"[{_MINUS}]", "-", found["power"]))


def read_number(text: str, kind: Kind) -> PrintedNumber:
    """Read one typed or printed number.

    Parameters
    ----------
    text : str
        The number alone; any but a count may carry a per cent sign or the word, or a power of ten.
    kind : "count", "percentage", "decimal" or "signed"
        What it is: decides what a lone separator means, and whether it may be negative.

    Raises
    ------
    PrintedProblem
        `too_long`, `not_a_number`, `several_numbers`, `negative`, `percent_sign_on_count`, `count_with_decimals`.
    """
    if len(text) > LONGEST:
        raise PrintedProblem("too_long", text)
    bare = text.strip(_BLANKS + "\t\r\n")
    without_percent = _PERCENT.sub("", bare)
    if kind == "count" and without_percent != bare:
        raise PrintedProblem("percent_sign_on_count", text)
    without_percent, power = (without_percent, 0) if kind == "count" else _power_of_ten(without_percent)
    found = _SHAPE.fullmatch(without_percent)
    if not found or not any(character.isdigit() for character in found["body"]):
        several = _SEVERAL.fullmatch(bare) and len(_FIGURES.findall(bare)) > 1
        raise PrintedProblem("several_numbers" if several else "not_a_number", text)
    negative = bool(found["sign"]) and found["sign"] != "+"
    if negative and kind != "signed":
        raise PrintedProblem("negative", text)
    body, group, decimals = found["body"], found["group"], found["decimals"]
    if kind != "count" and group in {".", ","} and body.count(group) == 1 and decimals is None:
        # 1,234 as a percentage or ratio is 1.234: there are hardly any of a thousand and more.
        group, decimals = None, body.split(found["group"])[1]
        whole = body.split(found["group"])[0]
    else:
        whole = body if decimals is None else body[: len(body) - len(decimals) - 1]
        if group is not None:
            whole = whole.replace(group, "")
    if kind == "count" and (decimals is not None or (group is not None and body.startswith("0"))):
        raise PrintedProblem("count_with_decimals", text)  # 0.110 is no group of thousands
    value = Decimal(f"{whole or '0'}.{decimals}") if decimals else Decimal(whole or "0")
    value = (-value if negative else value).scaleb(power)
    return PrintedNumber(text, value, len(decimals or "") - power, grouped=group is not None)

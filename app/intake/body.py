"""Reading a JSON body: every field checked, every problem collected, nothing raised until the end."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any, TypeVar

from app.appraisal.sheet import EventIs
from app.errors import FieldProblem, InputProblems
from app.measures.fourfold import LARGEST_TOTAL

_Choice = TypeVar("_Choice", bound=str)
_MISSING = object()

SAID: tuple[EventIs, ...] = ("unwanted", "wanted")
"""What an event may be said to be; JSON takes unwanted where nothing is said."""


def _shown(name: str) -> str:
    return "".join(c if c.isprintable() else "\N{REPLACEMENT CHARACTER}" for c in name[:40])


class Body:
    """One JSON object and the problems found in it so far.

    A field that is missing or wrong is read as None, and the problem noted. `finish` raises them all.
    """

    def __init__(self, given: Any, fields: Sequence[str], problems: list[FieldProblem] | None = None, path: str = "") -> None:
        self.problems: list[FieldProblem] = [] if problems is None else problems
        self.readable = True
        self.path = path
        self.given: dict[str, Any] = given if isinstance(given, dict) else {}
        if not isinstance(given, dict):
            self.add("", "A JSON object is needed.", f"Give {', '.join(fields)}.", "not_an_object")
            self.readable = False  # its missing fields go without saying
        for name in self.given:
            if name not in fields:
                self.add(_shown(name), "This field is not known here.", f"Known are: {', '.join(fields)}.", "unknown_field")

    def add(self, field: str, message: str, hint: str, slug: str) -> None:
        """Note a problem of a field of this object."""
        if not self.readable:
            return
        name = f"{self.path}.{field}" if self.path and field else self.path or field
        self.problems.append(FieldProblem(name, message, hint, slug))

    def finish(self) -> None:
        """Raise what was found.

        Raises
        ------
        InputProblems
            Anything was wrong.
        """
        if self.problems:
            raise InputProblems(self.problems)

    def has(self, field: str) -> bool:
        """Whether the field is given and not null."""
        return self.given.get(field) is not None

    def inner(self, field: str, fields: Sequence[str], example: str) -> Body:
        """An object within this one; empty, its absence noted, where there is none."""
        value = self.given.get(field)
        path = f"{self.path}.{field}" if self.path else field
        if not isinstance(value, dict):
            self.add(field, "This part is missing.", f"Give {example}.", "missing_field")
            return Body({}, fields, [], path)
        return Body(value, fields, self.problems, path)

    def each(self, field: str, fields: Sequence[str], most: int) -> list[Body]:
        """The objects of a list."""
        value = self.given.get(field)
        if not isinstance(value, list) or not 1 <= len(value) <= most:
            self.add(field, f"A list of 1 to {most} is needed.", "Give one object for each.", "missing_field")
            return []
        path = f"{self.path}.{field}" if self.path else field
        return [Body(item, fields, self.problems, f"{path}[{i}]") for i, item in enumerate(value)]

    def whole(self, field: str, least: int = 0) -> int | None:
        """A whole number of people or events; true and "4" are not numbers here."""
        value = self.given.get(field, _MISSING)
        if value is _MISSING:
            self.add(field, "This number is missing.", "Give people as a number, such as 46.", "missing_field")
        elif isinstance(value, bool) or not isinstance(value, int | float):
            self.add(field, "A whole number is needed.", "Give people as a number, such as 46.", "not_a_number")
        elif isinstance(value, float) and (not math.isfinite(value) or value != math.floor(value)):
            self.add(field, "People are counted whole.", "Give a whole number, such as 46.", "not_whole")
        elif value < least:
            slug = "negative" if value < 0 else "total_is_zero"
            self.add(field, f"{least} or more is needed.", "Check the number.", slug)
        elif value > LARGEST_TOTAL:
            self.add(field, "More people than this program counts in an arm.", f"At most {LARGEST_TOTAL}.", "count_too_large")
        else:
            return int(value)
        return None

    def number(self, field: str, low: float, high: float, *, default: float | None = None) -> float | None:
        """A number from `low` to `high`."""
        value = self.given.get(field, _MISSING)
        if value is _MISSING and default is not None:
            return default
        if value is _MISSING:
            self.add(field, "This number is missing.", f"Give a number from {low:g} to {high:g}.", "missing_field")
        elif isinstance(value, bool) or not isinstance(value, int | float) or (isinstance(value, float) and math.isnan(value)):
            self.add(field, "A number is needed.", f"Give a number from {low:g} to {high:g}.", "not_a_number")
        elif not low <= value <= high:
            self.add(field, f"A number from {low:g} to {high:g} is needed.", "Check the number and its unit.", "out_of_range")
        else:
            return float(value)
        return None

    def confidence_level(self) -> float:
        """The two-sided level, 0.95 if not given."""
        return self.number("confidence_level", 0.5, 0.9999, default=0.95) or 0.95

    def choice(self, field: str, allowed: Sequence[_Choice], default: _Choice | None = None) -> _Choice:
        """One of the allowed words."""
        value = self.given.get(field, default)
        for word in allowed:
            if value == word:
                return word
        quoted = " or ".join(f'"{word}"' for word in allowed)
        self.add(field, "This is none of the choices.", f"Give {quoted}.", "unknown_choice")
        return allowed[0]

    def flag(self, field: str) -> bool:
        """True or false, false if not given."""
        value = self.given.get(field, False)
        if not isinstance(value, bool):
            self.add(field, "True or false is needed.", "Give true or false.", "unknown_choice")
            return False
        return value

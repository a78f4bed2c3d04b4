"""The fourfold table: events and totals of two arms, as checked integer arrays."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

Counts = NDArray[np.int64]
Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]

LARGEST_TOTAL = 10**9
"""Largest people per arm: cross products of two totals stay exact in 64-bit integers."""


def whole_numbers(name: str, values: ArrayLike) -> Counts:
    """Counts as int64, refused unless whole, from 0 and at most `LARGEST_TOTAL`; never rounded."""
    array = np.asarray(values)
    if array.dtype.kind == "b" or array.dtype.kind not in "iuf":
        raise TypeError(f"{name} must be whole numbers, got {array.dtype}")
    if array.dtype.kind == "f" and not bool(np.all(np.isfinite(array) & (array == np.floor(array)))):
        raise ValueError(f"{name} must be whole numbers")
    if bool(np.any(array < 0)) or bool(np.any(array > LARGEST_TOTAL)):
        raise ValueError(f"{name} must lie between 0 and {LARGEST_TOTAL}")
    return array.astype(np.int64)


@dataclass(frozen=True, slots=True, eq=False)
class Fourfold:
    """Events and totals of two arms, broadcast to one shape.

    Parameters
    ----------
    events_intervention, total_intervention, events_comparator, total_comparator : array of int
        People with the event, and all people, per arm [0 to 1e9]. Any shapes that broadcast.

    Raises
    ------
    TypeError
        A count is not a number.
    ValueError
        A count is negative, fractional or above 1e9, a total is 0, or events exceed their total.
    """

    events_intervention: Counts
    total_intervention: Counts
    events_comparator: Counts
    total_comparator: Counts

    def __init__(
        self,
        events_intervention: ArrayLike,
        total_intervention: ArrayLike,
        events_comparator: ArrayLike,
        total_comparator: ArrayLike,
    ) -> None:
        names = ("events_intervention", "total_intervention", "events_comparator", "total_comparator")
        given = (events_intervention, total_intervention, events_comparator, total_comparator)
        arrays = np.broadcast_arrays(*(whole_numbers(n, v) for n, v in zip(names, given, strict=True)))
        for events, total in ((0, 1), (2, 3)):
            if bool(np.any(arrays[total] < 1)):
                raise ValueError(f"{names[total]} must be at least 1")
            if bool(np.any(arrays[events] > arrays[total])):
                raise ValueError(f"{names[events]} must not exceed {names[total]}")
        for name, array in zip(names, arrays, strict=True):
            object.__setattr__(self, name, array)

    @property
    def shape(self) -> tuple[int, ...]:
        """Shape shared by the four counts."""
        return self.events_intervention.shape

    @property
    def determinant(self) -> Floats:
        """Events times other total, crosswise, subtracted in exact integers: the sign of the effect."""
        a, n1, c, n2 = self._integers()
        return np.asarray(a * n2 - c * n1, dtype=np.float64)

    @property
    def risk_intervention(self) -> Floats:
        """Risk in the intervention arm [0 to 1]."""
        return np.asarray(self.events_intervention / self.total_intervention)

    @property
    def risk_comparator(self) -> Floats:
        """Risk in the comparator arm [0 to 1]."""
        return np.asarray(self.events_comparator / self.total_comparator)

    def _integers(self) -> tuple[Counts, Counts, Counts, Counts]:
        return (self.events_intervention, self.total_intervention, self.events_comparator, self.total_comparator)

    def floats(self) -> tuple[Floats, Floats, Floats, Floats]:
        """The four counts (a, n1, c, n2) as floats, for formulas."""
        a, n1, c, n2 = (np.asarray(x, dtype=np.float64) for x in self._integers())
        return a, n1, c, n2

    def blocks(self, size: int) -> Iterator[Fourfold]:
        """The tables as 1-d arrays of at most `size`, not checked again."""
        flat = [np.ravel(x) for x in self._integers()]
        names = ("events_intervention", "total_intervention", "events_comparator", "total_comparator")
        for first in range(0, flat[0].size, size):
            block = object.__new__(Fourfold)
            for name, column in zip(names, flat, strict=True):
                object.__setattr__(block, name, column[first : first + size])
            yield block

    def swapped(self) -> Fourfold:
        """The same tables with the arms exchanged."""
        a, n1, c, n2 = self._integers()
        return Fourfold(c, n2, a, n1)

    def complement(self) -> Fourfold:
        """The same tables counting those without the event."""
        a, n1, c, n2 = self._integers()
        return Fourfold(n1 - a, n1, n2 - c, n2)

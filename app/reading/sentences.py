"""Where sentences begin and end."""

from __future__ import annotations

import re
from bisect import bisect_left, bisect_right
from functools import lru_cache

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

"""Figures are read back as pictures: marks are counted, text alternatives say the same numbers."""

from __future__ import annotations

import math
import re
from itertools import pairwise

import pytest
from bs4 import BeautifulSoup, Tag
from hypothesis import given
from hypothesis import strategies as st

from app.present.figures.icons import icon_array
from app.present.figures.strip import Marks, strip


def _counts(svg: str) -> dict[str, int]:
    soup = BeautifulSoup(svg, "html.parser")
    return {str(path["class"][0]): len(_places(str(path["d"]))) for path in soup.select("path")}


def _places(d: str) -> list[tuple[float, float]]:
    """(y, x) of the middle of each person, followed along the path: a head begins at the middle, a body ends it."""
    places = []
    x = y = 0.0
    for kind, dx, dy in re.findall(r"([Mm])(-?[\d.]+)[ ]?(-?[\d.]+)", d):
        if kind == "M":
            x, y = float(dx), float(dy)
        else:
            x, y = x + float(dx), y + float(dy)
        if (dx, dy) == ("0", "-7.4"):  # to the top of a head
            places.append((round(y + 7.4, 3), round(x, 3)))
    return places


@given(st.data(), st.sampled_from([100, 1000]), st.booleans())
def test_everybody_is_drawn_once_in_reading_order(data: st.DataObject, out_of: int, more: bool) -> None:
    event = data.draw(st.integers(0, out_of))
    net = data.draw(st.integers(0, out_of - event))
    svg = str(icon_array(event, net, more=more, out_of=out_of, arm="intervention", description="d"))
    counts = _counts(svg)
    wanted = {"with-event": event, "net-more" if more else "net-fewer": net, "no-event": out_of - event - net}
    assert counts == {name: count for name, count in wanted.items() if count}
    paths = BeautifulSoup(svg, "html.parser").select("path")
    places = [place for path in paths for place in _places(str(path["d"]))]
    assert len(places) == len(set(places)) == out_of
    assert places == sorted(places)


def test_array_has_its_words() -> None:
    svg = BeautifulSoup(
        str(icon_array(11, 5, more=False, out_of=100, arm="intervention", description='a "b" <c>')), "html.parser"
    ).svg
    assert isinstance(svg, Tag)
    assert svg["role"] == "img"
    assert svg["aria-label"] == 'a "b" <c>'
    assert svg["class"] == ["people", "intervention", "of-100"]


def _marks(low: float, high: float, *, log: bool) -> Marks:
    return Marks((0.8, 0.8), low, high, 1.0 if log else 0.0, log, lambda v, _step: f"{v:g}", "words")


def _x(svg: str, name: str) -> tuple[float, float]:
    line = BeautifulSoup(svg, "html.parser").select_one(f".{name}")
    assert line is not None
    return float(str(line["x1"])), float(str(line["x2"]))


def test_strip_runs_from_lower_left_to_higher_right() -> None:
    for log in (False, True):
        svg = str(strip(_marks(0.5, 1.2, log=log)))
        low, high = _x(svg, "limits")
        assert 10 < low < high < 230
        no_effect, _ = _x(svg, "no-effect")
        assert (low < no_effect < high) if log else (no_effect < low)


@pytest.mark.parametrize(("low", "high", "arrows"), [(0.5, math.inf, 1), (0.0, 2.0, 1), (0.0, math.inf, 2), (0.5, 2.0, 0)])
def test_open_end_has_an_arrow(low: float, high: float, arrows: int) -> None:
    svg = BeautifulSoup(str(strip(_marks(low, high, log=True))), "html.parser")
    assert len(svg.select(".arrow")) == arrows


def test_undefined_interval_draws_no_limits() -> None:
    svg = BeautifulSoup(str(strip(_marks(math.nan, math.nan, log=True))), "html.parser")
    assert not svg.select(".limits")


@given(st.floats(1e-5, 1e5), st.floats(1e-5, 1e5), st.floats(1e-5, 1e5), st.booleans())
def test_ticks_never_overprint(a: float, b: float, c: float, log: bool) -> None:
    low, estimate, high = sorted((a, b, c))
    marks = Marks((estimate, estimate), low, high, 1.0 if log else 0.0, log, lambda v, _step: f"{v:g}", "words")
    svg = BeautifulSoup(str(strip(marks)), "html.parser")
    places = sorted(float(str(text["x"])) for text in svg.select("text"))
    assert places
    assert all(after - before >= 30 for before, after in pairwise(places))

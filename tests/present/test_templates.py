"""What a template shows is what its dataclass declares: undefined names fail, unused fields are found."""

from __future__ import annotations

import dataclasses
import re

import pytest

from app.appraisal.examples import LEG_ULCER
from app.appraisal.sheet import Sheet
from app.errors import FieldProblem
from app.present import balance, boxes, effects, pages, paper, passage, patients, people, results, wording
from app.present.assets import asset_folder
from app.present.patterns import patterns_view
from app.present.templating import environment, render, static_address
from app.settings import Settings

VIEWS = [
    boxes.FieldView,
    boxes.ChoiceView,
    boxes.ArmBoxes,
    boxes.FigureRow,
    boxes.RiskRow,
    balance.BalanceRow,
    balance.BalanceView,
    patients.CarriedRow,
    patients.CarriedGroup,
    patients.PatientsView,
    passage.Piece,
    passage.UnreadView,
    passage.PassageView,
    paper.PartView,
    paper.PartGroup,
    paper.PaperView,
    pages.OutcomeLine,
    pages.TabView,
    pages.ShelfLine,
    pages.ConflictView,
    pages.SheetView,
    pages.HomeView,
    pages.ProblemView,
    effects.MeasureView,
    effects.OtherInterval,
    results.ArmRow,
    results.TablesView,
    results.PView,
    results.ResultsView,
    people.PeopleView,
    people.ArrayView,
    people.KeyLine,
    wording.NoteText,
]
NOT_FOR_SHOW = {"ArmBoxes.shown_name"}


def _templates() -> str:
    return "".join(path.read_text() for path in asset_folder("templates").rglob("*.html"))


@pytest.mark.parametrize("view", VIEWS, ids=lambda v: v.__name__)
def test_every_declared_field_is_shown(view: type) -> None:
    text = _templates()
    unused = [
        field.name
        for field in dataclasses.fields(view)
        if not re.search(rf"[\w\]]\.{field.name}\b", text) and f"{view.__name__}.{field.name}" not in NOT_FOR_SHOW
    ]
    assert not unused


def test_pattern_page_renders() -> None:
    assert render("patterns/patterns.html", patterns_view()).count('class="measure"') == 6 * 5 - 4


def test_everything_is_escaped_whatever_the_ending() -> None:
    made = environment().from_string("{{ view }}")
    assert made.render(view="<script>'\"&") == "&lt;script&gt;&#39;&#34;&amp;"


def test_static_address_carries_a_digest() -> None:
    assert re.fullmatch(r"/static/sheet\.js\?[0-9a-f]{12}", static_address("sheet.js"))


def test_example_says_that_it_is_invented() -> None:
    assert LEG_ULCER.invented
    assert not Sheet().invented


def test_settings_place_the_shelf_in_the_data_folder(tmp_path: object) -> None:
    settings = Settings(tmp_path)  # type: ignore[arg-type]
    assert settings.shelf_path.parent == tmp_path


def test_problem_page_renders() -> None:
    problem = FieldProblem("f", "What.", "How.", "slug")
    page = render("problem.html", pages.ProblemView("Title", problem.message, problem.hint, "1"))
    assert "<h1>Title</h1>" in page
    assert "What. How." in page

"""Docstrings, bibliography and documents say what they must."""

from __future__ import annotations

import ast
import importlib
import inspect
import pkgutil
import re
from collections.abc import Callable
from pathlib import Path

import pytest

import app.measures
from app import __version__
from app.measures.registry import (
    EFFECT_METHODS,
    RATE_EFFECTS,
    RATE_METHODS,
    RATE_TESTS,
    RISK_METHODS,
    STRATA_METHODS,
    STRATA_TESTS,
    TESTS,
    everything,
)
from app.sources import SOURCES

ROOT = Path(__file__).parents[1]
MODULES = [
    importlib.import_module(f"app.measures.{found.name}")
    for found in pkgutil.iter_modules(app.measures.__path__)
    if not found.ispkg
]
METHODS = [
    function
    for module in MODULES
    for name, function in inspect.getmembers(module, inspect.isfunction)
    if function.__module__ == module.__name__ and not name.startswith("_")
]
REGISTERED: list[Callable[..., object]] = [
    *(row.interval for rows in (RISK_METHODS, EFFECT_METHODS, RATE_METHODS, RATE_EFFECTS) for row in rows),
    *(row.log_p for row in TESTS),
    *(row.p for row in RATE_TESTS),
    *(row.pooled for row in STRATA_METHODS),
    *(row.test for row in STRATA_TESTS),
]


@pytest.mark.parametrize("method", REGISTERED, ids=lambda f: f.__name__)
def test_registered_function_names_its_source(method: object) -> None:
    document = inspect.getdoc(method) or ""
    assert "References\n----------" in document


@pytest.mark.parametrize("function", METHODS, ids=lambda f: f.__name__)
def test_reference_keys_are_in_the_bibliography(function: object) -> None:
    document = inspect.getdoc(function) or ""
    cited = document.partition("References\n----------\n")[2].split("\n\n")[0]
    keys = re.findall(r"\b[a-z]+(?:_[a-z]+)*_\d{4}(?:_[a-z]+)?\b", cited)
    assert set(keys) <= set(SOURCES)


def test_every_source_is_cited() -> None:
    text = "".join(path.read_text() for path in (ROOT / "app").rglob("*.py") if path.name != "sources.py")
    assert not [key for key in SOURCES if key not in text]


def test_every_registered_source_is_known() -> None:
    used = {key for row in everything() for key in row.sources}
    assert used <= set(SOURCES)


def test_every_public_function_has_a_docstring() -> None:
    bare = []
    for path in (ROOT / "app").rglob("*.py"):
        bare += [
            f"{path.name}: {node.name}"
            for node in ast.parse(path.read_text()).body
            if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef)
            and not node.name.startswith("_")
            and not ast.get_docstring(node)
        ]
    assert not bare


def test_changes_begin_with_this_version() -> None:
    changes = (ROOT / "DEVELOPERS.md").read_text().partition("## Changes\n")[2]
    assert re.search(r"^### (\S+)", changes, re.MULTILINE)[1] == __version__  # type: ignore[index]


def test_top_level_is_what_it_is_meant_to_be() -> None:
    meant = {
        "README.md", "DEVELOPERS.md", "pyproject.toml", "app", "templates", "static", "tests", "LICENSE", "requirements.lock",
    }  # fmt: skip
    found = {path.name for path in ROOT.iterdir() if not path.name.startswith(".")}
    assert found == meant


@pytest.mark.parametrize("name", ["README.md", "DEVELOPERS.md"])
def test_documents_name_only_files_that_exist(name: str) -> None:
    text = (ROOT / name).read_text()
    named = re.findall(r"`((?:app|tests|templates|static)/[\w./-]+)`", text)
    assert not [path for path in named if not (ROOT / path).exists()]

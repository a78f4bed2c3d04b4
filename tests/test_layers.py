"""Imports go down only, and outside libraries stay in their rooms (DEVELOPERS.md, Rooms)."""

from __future__ import annotations

import ast
from pathlib import Path

APP = Path(__file__).parents[1] / "app"

LAYERS: dict[str, int] = {
    "errors": 0,
    "settings": 0,
    "sources": 0,
    "measures": 1,
    "printed": 1,
    "reading": 2,
    "reconstruct": 2,
    "transport": 2,
    "appraisal": 3,
    "shelf": 4,
    "present": 4,
    "intake": 4,
    "web": 5,
    "api": 5,
    "server": 6,
    "cli": 7,
}
"""The floor of each package. 0 may be imported by all; packages on one floor never meet."""

OUTSIDE: dict[str, set[str]] = {
    "numpy": {"measures", "reconstruct", "transport", "appraisal"},
    "scipy": {"measures"},
    "sqlite3": {"shelf"},
    "jinja2": {"present"},
    "markupsafe": {"present"},
    "latex2mathml": {"present"},
    "fastapi": {"web", "api", "server"},
    "starlette": {"web", "api", "server"},
    "pypdfium2": {"reading"},
    "pydantic": {"api"},
    "uvicorn": {"cli"},
    "typer": {"cli"},
    "platformdirs": {"cli"},
}
"""Which rooms may import a library."""


def _imports(path: Path) -> set[str]:
    """Absolute names of everything a module imports."""
    package = path.relative_to(APP.parent).with_suffix("").parts
    found: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found.update(alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            base = list(package[: len(package) - node.level]) if node.level else []
            module = ".".join(base + ([node.module] if node.module else []))
            found.add(module)
            found.update(f"{module}.{alias.name}" for alias in node.names)
    return found


def _room(path: Path) -> str:
    return path.relative_to(APP).parts[0].removesuffix(".py")


def _modules() -> list[Path]:
    return [path for path in APP.rglob("*.py") if path.parent != APP or path.stem not in ("__init__", "__main__")]


def test_every_package_has_a_floor() -> None:
    assert {_room(path) for path in _modules()} == set(LAYERS)


def test_imports_go_down_only() -> None:
    upward = []
    for path in _modules():
        room = _room(path)
        for name in _imports(path):
            parts = name.split(".")
            if parts[0] == "app" and len(parts) > 1 and parts[1] in LAYERS and parts[1] != room:
                other = parts[1]
                if LAYERS[other] >= LAYERS[room] or (LAYERS[room] == 0):
                    upward.append(f"{path.relative_to(APP)} imports {name}")
    assert not upward


def test_outside_libraries_stay_in_their_rooms() -> None:
    strays = []
    for path in _modules():
        for name in _imports(path):
            library = name.split(".")[0]
            if library in OUTSIDE and _room(path) not in OUTSIDE[library]:
                strays.append(f"{path.relative_to(APP)} imports {name}")
            if name.startswith("scipy.stats"):
                strays.append(f"{path.relative_to(APP)} imports {name}: too slow at start")
    assert not strays


def test_modules_stay_short() -> None:
    long = {str(path.relative_to(APP)): lines for path in _modules() if (lines := len(path.read_text().splitlines())) > 400}
    assert not long

"""The wheel holds templates and static files and serves them away from the checkout."""

from __future__ import annotations

import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
SERVE = """
import sys
from pathlib import Path
from starlette.testclient import TestClient
from app.server.application import create_app
from app.settings import Settings
import app
assert Path(app.__file__).is_relative_to(sys.argv[1]), app.__file__
with TestClient(create_app(Settings(Path(sys.argv[2]))), base_url="http://127.0.0.1") as client:
    print(*(client.get(p).status_code for p in ("/", "/static/armslength.css", "/healthz")))
"""


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("wheel")
    command = [sys.executable, "-m", "hatchling", "build", "-t", "wheel", "-d", str(folder)]
    subprocess.run(command, cwd=ROOT, check=True, capture_output=True)
    return next(folder.glob("*.whl"))


def test_wheel_holds_its_assets_and_no_tests(wheel: Path) -> None:
    names = set(zipfile.ZipFile(wheel).namelist())
    for folder in ("templates", "static"):
        meant = {f"app/_assets/{path.relative_to(ROOT)}" for path in (ROOT / folder).rglob("*") if path.is_file()}
        assert meant <= names
    assert not [name for name in names if name.startswith("tests/")]
    assert any(name.endswith("licenses/LICENSE") for name in names)


def test_wheel_serves_away_from_the_checkout(wheel: Path, tmp_path: Path) -> None:
    site = tmp_path / "site"
    zipfile.ZipFile(wheel).extractall(site)
    command = [
        sys.executable,
        "-c",
        f"import sys; sys.path.insert(0, {str(site)!r})\n{SERVE}",
        str(site),
        str(tmp_path / "shelf"),
    ]
    done = subprocess.run(command, cwd=tmp_path, check=True, capture_output=True, text=True)
    assert done.stdout == "200 200 200\n"

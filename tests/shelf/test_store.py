from __future__ import annotations

import sqlite3
import stat
from dataclasses import replace
from datetime import UTC, datetime
from pathlib import Path

import pytest

from app.appraisal.sheet import Sheet
from app.errors import NotOnShelf, SaveConflict, ShelfBusy, ShelfTooNew
from app.shelf.migrations import MIGRATIONS, SCHEMA, migrate, schema_of
from app.shelf.store import Kept, Shelf

NOW = datetime(2026, 1, 2, 3, 4, 5, tzinfo=UTC)


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    made = Shelf(tmp_path / "deep" / "shelf.sqlite3")
    made.open()
    return made


def save(shelf: Shelf, title: str, revision: int, writer: str) -> Kept:
    return shelf.save("a" * 12, Sheet(title=title), revision, writer, now=NOW, version="0")


def test_saved_is_loaded(shelf: Shelf) -> None:
    kept = save(shelf, "One", 0, "w")
    assert (kept.revision, shelf.load("a" * 12)) == (1, kept)
    assert [line.sheet.title for line in shelf.all()] == ["One"]


def test_error_unknown_sheet(shelf: Shelf) -> None:
    with pytest.raises(NotOnShelf, match="^There is no sheet at this address on this computer.$"):
        shelf.load("b" * 12)


def test_a_page_behind_only_itself_is_no_conflict(shelf: Shelf) -> None:
    save(shelf, "One", 0, "w")
    save(shelf, "Two", 1, "w")
    assert save(shelf, "Three", 1, "w").revision == 3


def test_error_a_page_behind_another(shelf: Shelf) -> None:
    save(shelf, "One", 0, "first")
    save(shelf, "Two", 1, "second")
    with pytest.raises(SaveConflict, match="^This sheet was changed in another window since this page was opened.$"):
        save(shelf, "Three", 1, "first")
    assert shelf.load("a" * 12).sheet.title == "Two"


def test_files_are_the_owners_alone(shelf: Shelf) -> None:
    assert stat.S_IMODE(shelf.path.stat().st_mode) == 0o600
    assert stat.S_IMODE(shelf.path.parent.stat().st_mode) == 0o700


def test_saves_are_synchronous_and_logged_ahead(shelf: Shelf) -> None:
    with shelf._connection() as connection:
        assert connection.execute("PRAGMA journal_mode").fetchone()[0] == "wal"
        assert connection.execute("PRAGMA synchronous").fetchone()[0] == 2


def test_error_newer_schema_is_not_touched(shelf: Shelf) -> None:
    connection = sqlite3.connect(shelf.path)
    connection.execute(f"PRAGMA user_version = {SCHEMA + 1}")
    connection.close()
    before = shelf.path.read_bytes()
    with pytest.raises(ShelfTooNew, match="was written by a newer version of Armslength"):
        Shelf(shelf.path).open()
    assert shelf.path.read_bytes() == before


def test_error_foreign_file(tmp_path: Path) -> None:
    path = tmp_path / "shelf.sqlite3"
    path.write_text("not a database, and long enough to be looked at as one " * 40)
    with pytest.raises(ShelfBusy, match="file is not a database"):
        Shelf(path).open()


def test_error_folder_that_cannot_be_made(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    with pytest.raises(ShelfBusy, match="Not a directory|File exists"):
        Shelf(tmp_path / "file" / "shelf.sqlite3").open()


def test_failed_migration_leaves_the_step_before(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    connection = sqlite3.connect(tmp_path / "x.sqlite3", isolation_level=None)
    migrate(connection)
    broken = (*MIGRATIONS, ("ALTER TABLE sheet ADD COLUMN extra TEXT", "THIS IS NOT SQL"))
    monkeypatch.setattr("app.shelf.migrations.MIGRATIONS", broken)
    monkeypatch.setattr("app.shelf.migrations.SCHEMA", len(broken))
    with pytest.raises(sqlite3.OperationalError):
        migrate(connection)
    columns = [row[1] for row in connection.execute("PRAGMA table_info(sheet)")]
    assert (schema_of(connection), "extra" in columns) == (len(MIGRATIONS), False)
    connection.close()


def test_every_schema_so_far_opens(tmp_path: Path) -> None:
    """Each schema leaves a frozen dump in tests/samples; opening one brings it to the current schema."""
    samples = sorted((Path(__file__).parents[1] / "samples").glob("shelf-*.sql"))
    assert [path.name for path in samples] == [f"shelf-{v}.sql" for v in range(1, SCHEMA + 1)]
    for sample in samples:
        path = tmp_path / f"{sample.stem}.sqlite3"
        connection = sqlite3.connect(path)
        connection.executescript(sample.read_text())
        connection.close()
        opened = Shelf(path)
        opened.open()
        assert [replace(kept.sheet, outcomes=()).title for kept in opened.all()] == [
            "Nurse-led compression review after a healed leg ulcer"
        ]

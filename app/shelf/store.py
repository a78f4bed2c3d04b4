"""Saving and finding sheets. Inputs are stored, never results."""

from __future__ import annotations

import sqlite3
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from app.appraisal.codec import decode, encode
from app.appraisal.sheet import Sheet
from app.errors import NotOnShelf, SaveConflict, ShelfBusy, ShelfTooNew
from app.shelf.migrations import SCHEMA, migrate, schema_of


@dataclass(frozen=True, slots=True)
class Kept:
    """A sheet on the shelf: its address, its revision, and when it was saved."""

    id: str
    revision: int
    saved: datetime
    sheet: Sheet


class Shelf:
    """The sheets of one data directory.

    One connection per use, so that any thread may call it. Write-ahead logging with synchronous FULL:
    what was acknowledged survives a killed process.
    """

    def __init__(self, path: Path) -> None:
        self.path = path

    def open(self) -> None:
        """Make the folder and the file where missing, and bring the schema up to date.

        Raises
        ------
        ShelfTooNew
            The file was written by a newer version; it is not touched.
        ShelfBusy
            The folder or the file cannot be used.
        """
        try:
            self.path.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
            self.path.touch(mode=0o600, exist_ok=True)
        except OSError as refused:
            raise ShelfBusy(f"{refused.strerror} ({self.path})") from refused
        with self._connection() as connection:
            found = schema_of(connection)
            if found > SCHEMA:
                raise ShelfTooNew(str(self.path), found, SCHEMA)
            connection.execute("PRAGMA journal_mode = WAL")
            migrate(connection)

    @contextmanager
    def _connection(self) -> Iterator[sqlite3.Connection]:
        connection = None
        try:
            connection = sqlite3.connect(self.path, timeout=5.0, isolation_level=None)
            connection.execute("PRAGMA synchronous = FULL")
            yield connection
        except sqlite3.Error as refused:
            raise ShelfBusy(str(refused)) from refused
        finally:
            if connection is not None:
                connection.close()

    def save(self, sheet_id: str, sheet: Sheet, revision: int, writer: str, *, now: datetime, version: str) -> Kept:
        """Keep a sheet as typed, and give back what was kept.

        `revision` is the one the page last knew (0 for a sheet not yet on the shelf), `writer` the
        page's own token. A page that is behind only itself is no conflict.

        Raises
        ------
        SaveConflict
            Another page has saved a newer revision.
        """
        document = encode(sheet)
        saved = now.isoformat(timespec="seconds")
        with self._connection() as connection:
            connection.execute("BEGIN IMMEDIATE")
            row = connection.execute("SELECT revision, writer, saved FROM sheet WHERE id = ?", (sheet_id,)).fetchone()
            if row is not None and row[0] != revision and row[1] != writer:
                connection.execute("ROLLBACK")
                raise SaveConflict(sheet_id, row[2])
            following = 1 if row is None else row[0] + 1
            connection.execute(
                "INSERT INTO sheet (id, revision, writer, saved, app_version, document) VALUES (?, ?, ?, ?, ?, ?) "
                "ON CONFLICT (id) DO UPDATE SET revision = excluded.revision, writer = excluded.writer, "
                "saved = excluded.saved, app_version = excluded.app_version, document = excluded.document",
                (sheet_id, following, writer, saved, version, document),
            )
            connection.execute("COMMIT")
        return Kept(sheet_id, following, now, sheet)

    def load(self, sheet_id: str) -> Kept:
        """The sheet of an address.

        Raises
        ------
        NotOnShelf
            There is none.
        """
        with self._connection() as connection:
            row = connection.execute("SELECT revision, saved, document FROM sheet WHERE id = ?", (sheet_id,)).fetchone()
        if row is None:
            raise NotOnShelf(sheet_id)
        return Kept(sheet_id, row[0], datetime.fromisoformat(row[1]), decode(row[2]))

    def all(self) -> tuple[Kept, ...]:
        """Every sheet, the last saved first."""
        with self._connection() as connection:
            rows = connection.execute("SELECT id, revision, saved, document FROM sheet ORDER BY saved DESC, id").fetchall()
        return tuple(Kept(row[0], row[1], datetime.fromisoformat(row[2]), decode(row[3])) for row in rows)

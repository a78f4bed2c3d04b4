"""Ordered migrations of the shelf. One transaction each; a released one is never edited."""

from __future__ import annotations

import sqlite3

MIGRATIONS: tuple[tuple[str, ...], ...] = (
    (
        """
        CREATE TABLE sheet (
            id TEXT PRIMARY KEY,
            revision INTEGER NOT NULL,
            writer TEXT NOT NULL,
            saved TEXT NOT NULL,
            app_version TEXT NOT NULL,
            document TEXT NOT NULL
        ) STRICT
        """,
    ),
)

SCHEMA = len(MIGRATIONS)


def schema_of(connection: sqlite3.Connection) -> int:
    """The schema version a database file says it has."""
    return int(connection.execute("PRAGMA user_version").fetchone()[0])


def migrate(connection: sqlite3.Connection) -> None:
    """Bring a database to the current schema; a failed step leaves the step before it whole."""
    for version in range(schema_of(connection), SCHEMA):
        connection.execute("BEGIN IMMEDIATE")
        try:
            if schema_of(connection) == version:  # another server may have done it meanwhile
                for statement in MIGRATIONS[version]:
                    connection.execute(statement)
                connection.execute(f"PRAGMA user_version = {version + 1}")
            connection.execute("COMMIT")
        except BaseException:
            connection.execute("ROLLBACK")
            raise

"""Settings of one run, frozen. Only the command line and the tests make them."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

DEFAULT_PORT = 8714


@dataclass(frozen=True, slots=True)
class Settings:
    """Where the shelf lies, and what the server allows.

    `body_limit` is in bytes, `upload_limit` that of a PDF. `patterns` mounts the pattern page, for the tests only.
    """

    data_dir: Path
    body_limit: int = 3_000_000
    upload_limit: int = 60_000_000
    patterns: bool = False

    @property
    def shelf_path(self) -> Path:
        """The database file."""
        return self.data_dir / "shelf.sqlite3"

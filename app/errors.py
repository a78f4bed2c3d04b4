"""The exception tree. Each class composes its own sentence; the edges give it a status or exit code.

ArmslengthError
|-- PrintedProblem       a text is not a printed number of the kind asked for (printed)
|-- InputProblems        everything refused in one input, all at once (intake)
|-- NotOnShelf           no sheet of that id (shelf)
|-- SaveConflict         the sheet was changed elsewhere since it was read (shelf)
|-- ShelfTooNew          the database was written by a newer version (shelf)
`-- ShelfBusy            the database stayed locked (shelf)
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass


class ArmslengthError(Exception):
    """Base of every error that the program raises on purpose."""


class PrintedProblem(ArmslengthError):
    """A text is not a number of the kind asked for; `slug` says why, intake words it."""

    def __init__(self, slug: str, text: str) -> None:
        super().__init__(f"{slug}: {text[:40]!r}")
        self.slug = slug
        self.text = text


@dataclass(frozen=True, slots=True)
class FieldProblem:
    """One refused field: what is wrong, what would be right, and a slug that never changes."""

    field: str
    message: str
    hint: str
    slug: str


class InputProblems(ArmslengthError):
    """Everything that was refused in one input."""

    def __init__(self, problems: Iterable[FieldProblem]) -> None:
        self.problems = tuple(problems)
        super().__init__("; ".join(f"{p.field}: {p.message}" for p in self.problems))


class UnreadablePages(ArmslengthError):
    """A PDF that gives no text: `slug` says why."""

    def __init__(self, slug: str) -> None:
        self.slug = slug
        super().__init__(slug)


class NotOnShelf(ArmslengthError):
    """No sheet has this id."""

    def __init__(self, sheet_id: str) -> None:
        super().__init__("There is no sheet at this address on this computer.")
        self.sheet_id = sheet_id


class SaveConflict(ArmslengthError):
    """The sheet on the shelf is newer than the one that was changed, and another page wrote it."""

    def __init__(self, sheet_id: str, saved: str) -> None:
        super().__init__("This sheet was changed in another window since this page was opened.")
        self.sheet_id = sheet_id
        self.saved = saved


class ShelfTooNew(ArmslengthError):
    """The database was written by a newer version of the program."""

    def __init__(self, path: str, found: int, known: int) -> None:
        super().__init__(
            f"The shelf {path} was written by a newer version of Armslength (schema {found}; this version "
            f"knows up to {known}). It has not been touched. Install the newer version to open it."
        )


class ShelfBusy(ArmslengthError):
    """The database could not be used: locked, unreadable, or its folder refused."""

    def __init__(self, why: str) -> None:
        super().__init__(f"The shelf could not be used: {why}. What you typed is still on the page.")

"""The desk: a sheet as typed goes through intake, appraisal and present to become a view.

Routes call these four steps; nothing here decides a figure or a word.
"""

from __future__ import annotations

import secrets
from collections.abc import Mapping
from dataclasses import dataclass, replace
from datetime import datetime
from pathlib import Path

from app import __version__
from app.appraisal.run import appraise
from app.appraisal.sheet import MOST_OUTCOMES, Sheet
from app.errors import NotOnShelf, SaveConflict
from app.intake.passage import ASSIGNABLE, reading_of, with_parts
from app.intake.sheet import gather, needs, place_in, sheet_from_form
from app.present.pages import ConflictView, HomeView, SheetView, conflict_view, home_view, sheet_view, shelf_line
from app.present.paper import PaperView, paper_view
from app.reading.pages import differences, parts_of
from app.shelf.store import Kept, Shelf

_ID_BYTES = 6


def fresh_id() -> str:
    """A random address of a sheet, or token of a page."""
    return secrets.token_hex(_ID_BYTES)


def _is_id(text: str) -> bool:
    return len(text) == 2 * _ID_BYTES and all(character in "0123456789abcdef" for character in text)


@dataclass(frozen=True, slots=True)
class Posted:
    """The form of a sheet as posted."""

    fields: Mapping[str, str]

    @property
    def revision(self) -> int:
        """The revision the page last knew; 0 if it says none."""
        text = self.fields.get("revision", "0")
        return int(text) if text.isascii() and text.isdigit() and len(text) < 10 else 0

    @property
    def writer(self) -> str:
        """The page's token, or a new one if it sends none that can be one."""
        text = self.fields.get("writer", "")
        return text if _is_id(text) else fresh_id()

    @property
    def shown(self) -> int:
        """The outcome the page is to show: the one asked for, the one just added, or the same."""
        if "add-outcome" in self.fields:
            return MOST_OUTCOMES
        return place_in(self.fields.get("show", self.fields.get("outcome", "0")))


@dataclass(frozen=True, slots=True)
class Desk:
    """What the routes of one server share."""

    shelf: Shelf
    kept_in: Path

    def _now(self) -> datetime:
        return datetime.now().astimezone()

    def _view(
        self,
        sheet: Sheet,
        sheet_id: str,
        shown: int,
        *,
        kept: Kept | None,
        writer: str,
        own_page: bool,
        conflict: ConflictView | None = None,
    ) -> SheetView:
        shown = min(shown, len(sheet.outcomes) - 1)
        gathered = gather(sheet)
        return sheet_view(
            sheet,
            appraise(gathered.input),
            shown=shown,
            problems=gathered.problems,
            needs=needs(sheet, shown, gathered),
            read_as=gathered.read_as,
            reading=reading_of(sheet.passage),
            assignable=ASSIGNABLE,
            sheet_id=sheet_id,
            revision=kept.revision if kept else 0,
            writer=writer,
            saved=kept.saved if kept else None,
            now=self._now(),
            version=__version__,
            own_page=own_page,
            conflict=conflict,
        )

    def home(self) -> HomeView:
        """The first page: an empty sheet ready to type into, and the papers."""
        sheet = self._view(Sheet(), fresh_id(), 0, kept=None, writer=fresh_id(), own_page=False)
        lines = tuple(shelf_line(kept.id, kept.sheet, kept.saved, self._now()) for kept in self.shelf.all())
        return home_view(sheet, lines, str(self.kept_in), __version__)

    def open(self, sheet_id: str, shown: int) -> SheetView:
        """A sheet from the shelf."""
        kept = self._load(sheet_id)
        return self._view(kept.sheet, sheet_id, shown, kept=kept, writer=fresh_id(), own_page=True)

    def _load(self, sheet_id: str) -> Kept:
        if not _is_id(sheet_id):
            raise NotOnShelf(sheet_id)
        return self.shelf.load(sheet_id)

    def save(self, sheet_id: str, posted: Posted) -> tuple[SheetView, bool]:
        """Keep what a page posts, and give back its view and whether it met a conflict.

        A page that another has overtaken keeps its text under its own token, so neither is lost.
        """
        if not _is_id(sheet_id):
            raise NotOnShelf(sheet_id)
        try:
            current = self.shelf.load(sheet_id).sheet
        except NotOnShelf:
            current = Sheet()
        sheet = sheet_from_form(posted.fields, current)
        writer = posted.writer
        try:
            kept = self._keep(sheet_id, sheet, posted.revision, writer)
            conflict = None
        except SaveConflict as met:
            kept = self._keep(writer, sheet, posted.revision, writer)
            conflict = conflict_view(sheet_id, writer, met.saved, self._now())
        view = self._view(sheet, sheet_id, posted.shown, kept=kept, writer=writer, own_page=True, conflict=conflict)
        # A page in conflict stays as old as it was: its next save is set aside like this one.
        return (replace(view, revision=posted.revision) if conflict else view), conflict is not None

    def paper(self, sheet_id: str, name: str, data: bytes) -> PaperView:
        """The parts of a PDF that print results; nothing of it is kept."""
        if not _is_id(sheet_id):
            raise NotOnShelf(sheet_id)
        parts = parts_of(data)
        counted = [(part, sum(len(o.claims) for o in reading_of(part.text).outcomes)) for part in parts]
        return paper_view(sheet_id, name, counted, differences(parts), __version__)

    def take(self, sheet_id: str, posted: Posted) -> int:
        """Put parts of a paper at the end of a sheet's passage, and give back the outcome they begin."""
        if not _is_id(sheet_id):
            raise NotOnShelf(sheet_id)
        try:
            kept = self.shelf.load(sheet_id)
            sheet, revision = kept.sheet, kept.revision
        except NotOnShelf:
            sheet, revision = Sheet(), 0
        taken = with_parts(sheet, posted.fields)
        self._keep(sheet_id, taken, revision, fresh_id())
        new = [f.outcome for f in taken.filled if f.start >= len(sheet.passage)]
        return min(new, default=0)

    def _keep(self, sheet_id: str, sheet: Sheet, revision: int, writer: str) -> Kept:
        return self.shelf.save(sheet_id, sheet, revision, writer, now=self._now(), version=__version__)

    def add_example(self, sheet: Sheet) -> str:
        """Put an invented example on the shelf and give back its address."""
        sheet_id = fresh_id()
        self._keep(sheet_id, sheet, 0, fresh_id())
        return sheet_id

"""The pages of a PDF as text in reading order, cut into abstract, text and tables, and the parts that print results."""

from __future__ import annotations

import re
import threading
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import pypdfium2

from app.errors import UnreadablePages
from app.printed.claims import Claim, Place
from app.reading.read import read

MOST_PAGES = 150
_LEAST_CHARACTERS = 40  # on average a page; fewer is a scan
_ONE_AT_A_TIME = threading.Lock()  # the library is not safe to use from two threads


@dataclass(frozen=True, slots=True)
class Part:
    """A stretch of a paper that prints results: its page, counted from 1, where it stands, and its text."""

    page: int
    place: Place
    text: str


@dataclass(frozen=True, slots=True)
class _Fragment:
    """A run of text on one line."""

    left: float
    right: float
    bottom: float
    top: float
    text: str


@dataclass(frozen=True, slots=True)
class _Block:
    """Lines that belong together: prose, or rows of a table."""

    page: int
    table: bool
    text: str


def parts_of(data: bytes) -> tuple[Part, ...]:
    """The parts of a paper that print results, in reading order.

    Parameters
    ----------
    data : bytes
        The file.

    Raises
    ------
    UnreadablePages
        The file is no PDF, is locked, holds no text, or has more than `MOST_PAGES` pages.
    """
    return tuple(_results(_blocks(data)))


def _blocks(data: bytes) -> list[_Block]:
    with _ONE_AT_A_TIME:
        try:
            document = pypdfium2.PdfDocument(data)
        except pypdfium2.PdfiumError as refused:
            locked = "password" in str(refused).lower()
            raise UnreadablePages("pages_locked" if locked else "pages_broken") from refused
        try:
            if len(document) > MOST_PAGES:
                raise UnreadablePages("too_many_pages")
            blocks = [block for number in range(len(document)) for block in _page(document, number)]
        except pypdfium2.PdfiumError as refused:
            raise UnreadablePages("pages_broken") from refused
        finally:
            document.close()
    if sum(len(block.text) for block in blocks) < _LEAST_CHARACTERS:
        raise UnreadablePages("pages_without_text")
    return blocks


def _page(document: pypdfium2.PdfDocument, number: int) -> list[_Block]:
    page = document[number]
    try:
        rows = _rows(_fragments(page.get_textpage()))
        return [_Block(number + 1, table, text) for table, text in _in_order(rows, page.get_width() / 2)]
    finally:
        page.close()


def _fragments(text: pypdfium2.PdfTextPage) -> list[_Fragment]:
    found = []
    for i in range(text.count_rects()):
        left, bottom, right, top = text.get_rect(i)
        said = re.sub(r"\s+", " ", text.get_text_bounded(left - 0.5, bottom - 0.5, right + 0.5, top + 0.5)).strip()
        if said:
            found.append(_Fragment(left, right, bottom, top, said))
    return found


def _rows(fragments: Sequence[_Fragment]) -> list[list[_Fragment]]:
    """Fragments of one height side by side, from the top of the page down; those nearly touching are one."""
    rows: list[list[_Fragment]] = []
    for fragment in sorted(fragments, key=lambda f: -(f.top + f.bottom)):
        middle = (fragment.top + fragment.bottom) / 2
        if rows and any(other.bottom <= middle <= other.top for other in rows[-1]):
            rows[-1].append(fragment)
        else:
            rows.append([fragment])
    return [_joined(sorted(row, key=lambda f: f.left)) for row in rows]


def _joined(row: list[_Fragment]) -> list[_Fragment]:
    found = [row[0]]
    for fragment in row[1:]:
        last = found[-1]
        gap = fragment.left - last.right
        if gap > 0.9 * (last.top - last.bottom):
            found.append(fragment)
            continue
        space = " " if gap > 0.08 * (last.top - last.bottom) and not last.text.endswith(" ") else ""
        bottom, top = min(last.bottom, fragment.bottom), max(last.top, fragment.top)
        found[-1] = _Fragment(last.left, fragment.right, bottom, top, f"{last.text}{space}{fragment.text}")
    return found


def _in_order(rows: list[list[_Fragment]], middle: float) -> Iterator[tuple[bool, str]]:
    """Blocks of a page: what runs across it as it comes, columns one after the other, tables row by row."""
    across = [any(f.left < middle - 8 and f.right > middle + 8 for f in row) for row in rows]
    both = [
        not a and any(f.right <= middle + 8 for f in row) and any(f.left >= middle - 8 for f in row)
        for a, row in zip(across, rows, strict=True)
    ]
    in_columns = sum(both) >= 4 and sum(len(row) == 2 for row, b in zip(rows, both, strict=True) if b) >= 0.5 * sum(both)
    left: list[list[_Fragment]] = []
    right: list[list[_Fragment]] = []
    for row, crosses in zip(rows, across, strict=True):
        wide = crosses or len(row) >= 4
        if in_columns and not wide:
            left.append([f for f in row if f.left < middle - 8])
            right.append([f for f in row if f.left >= middle - 8])
            continue
        if left or right:
            yield from _column(left)
            yield from _column(right)
            left, right = [], []
        left.append(row)
        if not in_columns:
            continue
        yield from _column(left)
        left = []
    yield from _column(left)
    yield from _column(right)


def _column(rows: list[list[_Fragment]]) -> Iterator[tuple[bool, str]]:
    """Rows of one column as prose and tables: rows of three cells or more are a table's."""
    lines: list[str] = []
    table = False
    for row in (row for row in rows if row):
        cells = len(row) >= 3
        if lines and cells != table:
            yield table, "\n".join(lines)
            lines = []
        table = cells
        lines.append("\t".join(f.text for f in row) if cells else " ".join(f.text for f in row))
    if lines:
        yield table, "\n".join(lines)


# -- what prints results ------------------------------------------------------------------------------------

_ABSTRACT = re.compile(r"^\s*(?:abstract|summary)\b", re.IGNORECASE | re.MULTILINE)
_BODY = re.compile(r"^\s*(?:\d\.?\s*)?(?:introduction|methods|patients and methods)\s*$", re.IGNORECASE | re.MULTILINE)
_END = re.compile(r"^\s*(?:references|bibliography)\s*$", re.IGNORECASE | re.MULTILINE)
_SENTENCE = re.compile(r"(?<=[.?!])(?<!vs\.)(?<!al\.)(?<!Fig\.)(?<!no\.)\s+(?=[A-Z])")


def _results(blocks: list[_Block]) -> Iterator[Part]:
    place: Place = "text"
    ended = False
    for block in _merged(blocks):
        if block.table:
            if read(block.text).outcomes:
                yield Part(block.page, "table", block.text)
            continue
        for piece in re.split(r"\n(?=\s*(?:\d\.?\s*)?[A-Z][A-Za-z ]{3,30}\n)", block.text):
            ended = ended or bool(_END.match(piece))
            if ended:
                break
            if _ABSTRACT.match(piece):
                place = "abstract"
            elif _BODY.match(piece.split("\n")[0]):
                place = "text"
            for sentence in _sentences(piece):
                if re.search(r"\d.*\d", sentence) and read(sentence).outcomes:
                    yield Part(block.page, place, sentence)


def _merged(blocks: list[_Block]) -> Iterator[_Block]:
    """Prose that runs on over columns and pages as one block; rows of a table as one table."""
    held: _Block | None = None
    for block in blocks:
        if held is not None and held.table == block.table:
            unfinished = not block.table and not re.search(r"[.?!]\s*$", held.text)
            if held.page == block.page or unfinished:
                held = _Block(held.page, held.table, f"{held.text}\n{block.text}")
                continue
        if held is not None:
            yield held
        held = block
    if held is not None:
        yield held


_HEADING = re.compile(r"^\s*(?:\d\.?\s*)?[A-Z][A-Za-z ]{2,30}\n(?=\s*[A-Z])")


def _sentences(piece: str) -> list[str]:
    piece = _HEADING.sub("", piece)
    even = re.sub(r"(?<=[a-z])-\n(?=[a-z])", "", piece)
    return [sentence.strip() for sentence in _SENTENCE.split(re.sub(r"\s*\n\s*", " ", even)) if sentence.strip()]


# -- the same quantity in several places ----------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class Difference:
    """One quantity printed otherwise in two places that share other numbers."""

    quantity: str
    arm: str | None
    first: tuple[Place, int, str]
    second: tuple[Place, int, str]


_Said = dict[tuple[str, str | None], tuple[str, str]]
_SHARED = 3


def differences(parts: Sequence[Part]) -> tuple[Difference, ...]:
    """Quantities that abstract, text and tables print differently for what is, by its other numbers, one outcome."""
    said = [(part, _said(outcome.claims)) for part in parts[:_MOST_COMPARED] for outcome in read(part.text).outcomes]
    found = []
    for i, (one, first) in enumerate(said):
        for other, second in said[i + 1 :]:
            both = [key for key in first if key in second]
            unlike = [key for key in both if first[key][0] != second[key][0]]
            if one.place == other.place or len(both) - len(unlike) < _SHARED or not unlike or len(unlike) > 2:
                continue
            for key in unlike:
                ends = (one.place, one.page, first[key][1]), (other.place, other.page, second[key][1])
                found.append(Difference(key[0], key[1], *ends))
    return tuple(dict.fromkeys(found))


_MOST_COMPARED = 60


def _said(claims: Sequence[Claim]) -> _Said:
    """Each quantity that is printed once, as a number and as printed; the interval is compared with its estimate."""
    found: _Said = {}
    for claim in claims:
        if claim.number is None:
            continue
        limits = [f"{limit.value.normalize()}" for limit in claim.interval.limits if limit] if claim.interval else []
        texts = [limit.text for limit in claim.interval.limits if limit] if claim.interval else []
        shown = claim.number.text + (f" ({' to '.join(texts)})" if texts else "")
        found.setdefault((claim.quantity, claim.arm), (" ".join([f"{claim.number.value.normalize()}", *limits]), shown))
    return found

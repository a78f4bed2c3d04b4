"""A paper's pages: columns one after the other, tables row by row, and clear refusals."""

from __future__ import annotations

import io

import pypdf
import pytest

from app.errors import UnreadablePages
from app.reading.pages import Part, differences, parts_of
from tests.reading.papers_maker import ABSTRACT, ADMISSION, IRRITATION, RECURRENCE, ROWS, pdf


def test_sentences_and_tables_that_print_results_in_reading_order() -> None:
    table = "\n".join("\t".join(row) for row in ROWS)
    assert parts_of(pdf()) == (
        Part(1, "abstract", ABSTRACT),
        Part(1, "text", RECURRENCE),
        Part(1, "text", IRRITATION),
        Part(1, "text", ADMISSION),
        Part(2, "table", table),
    )


def test_what_places_print_differently_is_said() -> None:
    found = differences(parts_of(pdf()))
    assert [(d.quantity, d.first, d.second) for d in found] == [
        ("risk_ratio", ("abstract", 1, "0·67 (0·47 to 0·95)"), ("text", 1, "0.76 (0.47 to 0.95)")),
        ("risk_ratio", ("text", 1, "0.76 (0.47 to 0.95)"), ("table", 2, "0.67 (0.47 to 0.95)")),
    ]


def test_one_column() -> None:
    source = f'#set page(paper: "a4")\n#lorem(80) {RECURRENCE} #lorem(80)'
    assert [part.text for part in parts_of(pdf(source))] == [RECURRENCE]


def _locked() -> bytes:
    writer = pypdf.PdfWriter(clone_from=io.BytesIO(pdf()))
    writer.encrypt("secret", algorithm="RC4-128")
    made = io.BytesIO()
    writer.write(made)
    return made.getvalue()


def _long() -> bytes:
    writer = pypdf.PdfWriter()
    for _ in range(151):
        writer.add_blank_page(100, 100)
    made = io.BytesIO()
    writer.write(made)
    return made.getvalue()


@pytest.mark.parametrize(
    ("data", "slug"),
    [
        (b"", "pages_broken"),
        (b"not a PDF at all", "pages_broken"),
        (pdf()[: len(pdf()) // 3], "pages_broken"),
        (_locked(), "pages_locked"),
        (pdf("#set page(width: 10cm, height: 10cm)\n#rect(width: 3cm)"), "pages_without_text"),
        (_long(), "too_many_pages"),
    ],
    ids=["empty", "text", "cut", "locked", "no text", "long"],
)
def test_error_in_file(data: bytes, slug: str) -> None:
    with pytest.raises(UnreadablePages) as refused:
        parts_of(data)
    assert refused.value.slug == slug

"""Opening a paper and bringing its parts to a sheet."""

from __future__ import annotations

import pytest
from bs4 import BeautifulSoup
from starlette.testclient import TestClient

from tests.reading.papers_maker import ABSTRACT, IRRITATION, pdf

SHEET = "/sheet/0123456789ab"


def opened(client: TestClient, data: bytes, name: str = "paper.pdf") -> BeautifulSoup:
    answer = client.post(f"{SHEET}/paper", files={"paper": (name, data, "application/pdf")})
    return BeautifulSoup(answer.text, "html.parser")


def test_a_paper_shows_what_it_prints_and_where_it_differs(client: TestClient) -> None:
    page = opened(client, pdf(), "<trial>.pdf")
    assert page.h1 is not None
    assert page.h1.text == "What <trial>.pdf prints"
    assert [h.text for h in page.select("h2")] == [
        "Printed differently in different places",
        "Abstract",
        "Text",
        "Tables",
    ]
    assert (
        page.select("li")[0].text
        == "Risk ratio: 0·67 (0·47 to 0·95) in the abstract (page 1) and 0.76 (0.47 to 0.95) in the text (page 1)."
    )


def test_parts_are_brought_to_the_sheet(client: TestClient) -> None:
    form = {"text-0": ABSTRACT, "place-0": "abstract", "text-2": IRRITATION, "place-2": "text", "take-0": "1", "take-2": "1"}
    answer = client.post(f"{SHEET}/take", data=form, follow_redirects=False)
    assert (answer.status_code, answer.headers["location"]) == (303, f"{SHEET}?outcome=0")
    page = BeautifulSoup(client.get(SHEET).text, "html.parser")
    assert page.select_one("#passage").text.strip() == f"[Abstract] {ABSTRACT}\n\n[Text] {IRRITATION}"  # type: ignore[union-attr]
    assert [tab.text for tab in page.select(".tabs button")] == ["Recurrence", "Skin irritation", "Add an outcome"]
    more = client.post(f"{SHEET}/take", data={**form, "only": "2"}, follow_redirects=False)
    assert more.headers["location"] == f"{SHEET}?outcome=2"


@pytest.mark.parametrize(
    ("data", "message"),
    [
        (b"no PDF", "This file could not be read as a PDF. Open it elsewhere and copy the passage instead."),
        (
            pdf("#set page(width: 10cm, height: 10cm)\n#rect(width: 3cm)"),
            "This PDF holds pictures of pages and no text. Have its text recognised first, or type the numbers.",
        ),
    ],
)
def test_error_in_paper(client: TestClient, data: bytes, message: str) -> None:
    assert opened(client, data).select("p")[0].text == message


def test_error_in_form(client: TestClient) -> None:
    answer = client.post(f"{SHEET}/paper", data={"paper": "not a file"})
    assert answer.status_code == 422
    assert "No file was chosen. Choose a PDF and send it again." in answer.text
    assert client.post("/sheet/nowhere/paper", files={"paper": ("a.pdf", pdf(), "application/pdf")}).status_code == 404
    assert client.post("/sheet/nowhere/take", data={"only": "1"}).status_code == 404

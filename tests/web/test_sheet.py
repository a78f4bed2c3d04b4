"""Pages over the test client: without script, and the fragments that htmx asks for."""

from __future__ import annotations

import re

import pytest
from bs4 import BeautifulSoup, Tag
from httpx2 import Response
from starlette.testclient import TestClient

PARTIAL = {"HX-Request": "true", "HX-Request-Type": "partial"}
ONE = "0123456789ab"


def soup_of(response: Response) -> BeautifulSoup:
    return BeautifulSoup(response.text, "html.parser")


def form_of(soup: BeautifulSoup) -> tuple[str, dict[str, str]]:
    """The address and fields of the sheet's form, as a browser would send them."""
    form = soup.select_one("#sheet-form")
    assert form is not None
    fields = {str(box["name"]): str(box.get("value", "")) for box in form.select("input[name]")}
    for choice in form.select("select"):
        chosen = choice.select_one("option[selected]")
        assert chosen is not None
        fields[str(choice["name"])] = str(chosen["value"])
    return str(form["action"]), fields


def text(soup: BeautifulSoup | Tag, selector: str) -> str:
    found = soup.select_one(selector)
    assert found is not None, selector
    return " ".join(found.get_text(" ", strip=True).split())


def test_first_page_explains_itself_and_is_ready(client: TestClient) -> None:
    soup = soup_of(client.get("/"))
    assert text(soup, "h1") == "The fourfold table behind what the paper prints"
    assert text(soup, "button") == "Open an invented example"
    action, fields = form_of(soup)
    assert re.fullmatch(r"/sheet/[0-9a-f]{12}", action)
    assert fields["outcome-0-arm-0-events"] == ""
    assert client.get(action).status_code == 404  # nothing is kept before something is typed


def test_the_whole_way_without_script(client: TestClient) -> None:
    action, fields = form_of(soup_of(client.get("/")))
    typed = {
        "title": "A trial of shoes",
        "arm-0-name": "Shoes",
        "outcome-0-arm-0-events": "46",
        "outcome-0-arm-0-total": "418",
        "outcome-0-arm-1-percentage": "16.4",
        "outcome-0-arm-1-total": "409",
    }
    answer = client.post(action, data={**fields, **typed}, follow_redirects=False)
    assert (answer.status_code, answer.headers["location"]) == (303, f"{action}?outcome=0")
    soup = soup_of(client.get(answer.headers["location"]))
    assert text(soup, "h1") == "A trial of shoes"
    assert text(soup, "#measure-risk_ratio .value") == "0.67"
    assert form_of(soup)[1]["outcome-0-arm-1-percentage"] == "16.4"
    listed = soup_of(client.get("/")).select_one(".papers a")
    assert listed is not None
    assert (listed["href"], listed.get_text()) == (action, "A trial of shoes")


def test_fragment_is_the_same_as_the_page(client: TestClient) -> None:
    action, fields = form_of(soup_of(client.get("/")))
    fields |= {"outcome-0-arm-0-events": "46", "outcome-0-arm-0-total": "418"}
    fragment = client.post(action, data=fields, headers=PARTIAL)
    assert fragment.headers["HX-Replace-Url"] == f"{action}?outcome=0"
    assert fragment.text.lstrip().startswith('<main id="sheet"')
    whole = soup_of(client.get(action)).select_one("#sheet")
    part = soup_of(fragment).select_one("#sheet")
    assert whole is not None
    assert part is not None
    for soup in (whole, part):
        for hidden in soup.select("input[name=writer]"):
            hidden.decompose()
    assert str(part) == str(whole)


def test_example_opens_with_one_click(client: TestClient) -> None:
    soup = soup_of(client.post("/example"))
    assert text(soup, ".invented") == "Invented example: no such trial was done."
    assert [tab.get_text() for tab in soup.select(".tabs button")] == ["Recurrence", "Skin irritation", "Add an outcome"]
    assert text(soup, "#measure-number_needed_to_treat .value") == "19 to benefit"


def test_outcomes_are_tabs_and_can_be_added(client: TestClient) -> None:
    first = client.post("/example")
    address = str(first.url).partition("?")[0]
    second = soup_of(client.get(f"{address}?outcome=1"))
    assert text(second, "#measure-number_needed_to_treat .value").endswith("to harm")
    action, fields = form_of(second)
    added = client.post(action, data={**fields, "title": "Typed before adding", "add-outcome": "1"})
    assert str(added.url).endswith("?outcome=2")
    soup = soup_of(added)
    assert form_of(soup)[1]["title"] == "Typed before adding"
    assert form_of(soup)[1]["outcome-2-horizon"] == "12 months"
    assert text(soup, ".tabs .on") == "Outcome 3"


def test_bad_box_keeps_its_text_and_the_rest_alive(client: TestClient) -> None:
    action, fields = form_of(soup_of(client.post("/example")))
    answer = client.post(action, data={**fields, "outcome-0-arm-0-events": "4<b>6"}, headers=PARTIAL)
    assert answer.status_code == 200
    soup = soup_of(answer)
    box = soup.select_one("#outcome-0-arm-0-events")
    assert box is not None
    assert (box["value"], box["aria-invalid"]) == ("4<b>6", "true")
    assert text(soup, f"#{box['aria-describedby']}") == "With the event: “4<b>6” is not a number. Type digits, such as 46."
    assert text(soup, ".summary") == "One table fits."  # the ratio and its interval settle what the refused box leaves open


@pytest.mark.parametrize(
    "bad", ["x" * 2000, "\x00", "٣", "10" * 12, "<img src=x onerror=alert(1)>", "{{7*7}}", "-0", "1e9", "\ufffe"]
)
def test_any_box_may_hold_anything(client: TestClient, bad: str) -> None:
    action, fields = form_of(soup_of(client.post("/example")))
    boxes = [name for name in fields if name not in ("revision", "writer", "outcome")]
    answer = client.post(action, data={**fields, **dict.fromkeys(boxes, bad)}, headers=PARTIAL)
    assert answer.status_code == 200
    assert "<img src=x" not in answer.text
    assert client.get(action).status_code == 200
    assert client.get("/").status_code == 200


def test_lone_surrogate_in_a_form_is_kept_as_a_mark(client: TestClient) -> None:
    action, fields = form_of(soup_of(client.post("/example")))
    body = "&".join(f"{name}={value}" for name, value in fields.items() if name in ("writer", "revision")) + "&title=%ED%A0%80"
    headers = {**PARTIAL, "Content-Type": "application/x-www-form-urlencoded"}
    answer = client.post(action, content=body, headers=headers)
    assert answer.status_code == 200
    assert "\ufffd" in form_of(soup_of(answer))[1]["title"]


def test_two_windows_lose_neither(client: TestClient) -> None:
    address = str(client.post("/example").url)
    first, second = (form_of(soup_of(client.get(address))) for _ in range(2))
    assert client.post(first[0], data={**first[1], "title": "First"}, headers=PARTIAL).status_code == 200
    answer = client.post(second[0], data={**second[1], "title": "Second"}, headers=PARTIAL)
    assert answer.status_code == 409
    soup = soup_of(answer)
    mine, theirs = (str(link["href"]) for link in soup.select("#conflict a"))
    assert text(soup, "#conflict").startswith("This sheet was changed in another window at ")
    assert form_of(soup_of(client.get(mine)))[1]["title"] == "Second"
    assert form_of(soup_of(client.get(theirs)))[1]["title"] == "First"
    again = client.post(second[0], data={**second[1], "title": "Second, more"}, headers=PARTIAL)
    assert again.status_code == 409
    assert form_of(soup_of(client.get(mine)))[1]["title"] == "Second, more"
    without_script = client.post(second[0], data={**second[1], "title": "Second, plain"})
    assert without_script.status_code == 409
    assert "<html" in without_script.text


@pytest.mark.parametrize("address", ["/sheet/ffffffffffff", "/sheet/nonsense", "/sheet/..%2f..", "/nowhere"])
def test_unknown_address_is_a_page(client: TestClient, address: str) -> None:
    answer = client.get(address)
    assert answer.status_code == 404
    assert "Back to Papers" in answer.text


def test_odd_outcome_numbers_show_some_outcome(client: TestClient) -> None:
    address = str(client.post("/example").url).partition("?")[0]
    for outcome in ("99", "-1", "x", "9" * 30, "٣"):
        assert client.get(address, params={"outcome": outcome}).status_code == 200


def test_pages_are_not_kept_in_caches(client: TestClient) -> None:
    answer = client.post("/example")
    assert answer.headers["Cache-Control"] == "no-store"
    assert "HX-Request" in answer.headers["Vary"]


def test_a_tab_saves_what_was_typed_before_it_is_shown(client: TestClient) -> None:
    action, fields = form_of(soup_of(client.post("/example")))
    shown = client.post(action, data={**fields, "title": "Typed, then another tab", "show": "1"})
    assert str(shown.url).endswith("?outcome=1")
    assert form_of(soup_of(shown))[1]["title"] == "Typed, then another tab"


def test_a_page_in_conflict_never_overwrites_the_other(client: TestClient) -> None:
    """Also without script, where the answered page is posted again as it stands."""
    action, fields = form_of(soup_of(client.post("/example")))
    client.post(action, data={**fields, "title": "From the first window"})
    mine = {**fields, "writer": "b" * 12, "title": "From the second window"}
    for _ in range(3):
        answer = client.post(action, data=mine)
        assert answer.status_code == 409
        mine = {**form_of(soup_of(answer))[1], "title": "From the second window"}
    assert form_of(soup_of(client.get(action)))[1]["title"] == "From the first window"


def test_only_a_form_is_saved(client: TestClient) -> None:
    answer = client.post("/sheet/0123456789ab", json={"title": "no"})
    assert answer.status_code == 415
    assert client.get("/sheet/0123456789ab").status_code == 404


def test_figures_grow_only_when_asked_and_are_judged(client: TestClient) -> None:
    action, fields = form_of(soup_of(client.post("/example")))
    assert [name for name in fields if name.endswith("-value")] == [f"outcome-0-figure-{k}-value" for k in (1, 2, 3)]
    soup = soup_of(client.post(action, data={**fields, "add-figure": "risk_ratio"}))
    fields = {**form_of(soup)[1], "outcome-0-figure-4-kind": "number_needed_to_treat", "outcome-0-figure-4-value": "19"}
    soup = soup_of(client.post(action, data=fields))
    notes = {text_of(note.select_one(".what")): text_of(note.select_one(".verdict")) for note in soup.select(".number-note")}
    assert notes == {
        "Relative reduction": "↷ another reading",
        "Risk ratio": "✓ agrees",
        "Number needed to treat": "✓ agrees",
        "P": "✓ agrees",
        "Counts and percentages": "✓ agree",
    }
    assert text(soup, ".tally") == ("Seven numbers are consistent with each other; one agrees only under another reading.")
    removed = soup_of(client.post(action, data={**form_of(soup)[1], "remove-figure": "2"}))
    assert [name for name in form_of(removed)[1] if name.endswith("-value")] == [
        f"outcome-0-figure-{k}-value" for k in (1, 3, 4)
    ]


def test_a_figure_that_cannot_be_read_says_so_beside_its_box(client: TestClient) -> None:
    action, fields = form_of(soup_of(client.post("/example")))
    wrong = {**fields, "outcome-0-figure-1-value": "0.67 (0.47", "outcome-0-figure-1-low": "2", "outcome-0-figure-1-high": "1"}
    soup = soup_of(client.post(action, data=wrong))
    assert (
        text(soup, "#outcome-0-figure-1-value-says")
        == "“0.67 (0.47” holds more than one number. Type one number here, such as 0.67, and the others in their own boxes."
    )
    assert (
        text(soup, "#outcome-0-figure-1-low-says")
        == "The lower limit 2 is above the upper limit 1. Check both limits and their signs."
    )


def test_counts_or_percentages_is_the_readers_choice(client: TestClient) -> None:
    action, fields = form_of(soup_of(client.post("/example")))
    for key in ("1", "2", "3"):
        fields = {
            **fields,
            f"outcome-0-figure-{key}-value": "",
            f"outcome-0-figure-{key}-low": "",
            f"outcome-0-figure-{key}-high": "",
        }
    soup = soup_of(client.post(action, data={**fields, "outcome-0-arm-0-percentage": "14.0"}))
    assert text(soup, ".summary") == "No table fits everything typed. The figures follow the counts."
    assert text(soup, ".contradiction p") == (
        "Compression review: counts and percentage contradict each other. Check what was typed first."
    )
    soup = soup_of(client.post(action, data={**form_of(soup)[1], "outcome-0-trust": "percentages"}))
    assert text(soup, ".summary") == (
        "No table fits everything typed. 2 tables fit the rest. Estimates show the range over all of them, intervals the "
        "widest over all."
    )
    assert text(soup, "#outcome-0-trust option[selected]") == "if the percentages are right"


def text_of(tag: object) -> str:
    """The words of a tag, blanks closed up."""
    return " ".join(tag.get_text(" ").split())  # type: ignore[attr-defined]

"""Script off, keyboard alone, axe-core, small screens, and paper."""

from __future__ import annotations

import io
from collections.abc import Iterator

import pytest
from playwright.sync_api import Browser, Page, expect
from pypdf import PdfReader

from tests.browser.sheets import EVENTS, PERCENTAGE, TOTAL, open_example, type_into, violations
from tests.conftest import LiveServer

pytestmark = pytest.mark.browser


@pytest.fixture
def plain(browser: Browser) -> Iterator[Page]:
    context = browser.new_context(java_script_enabled=False, viewport={"width": 1360, "height": 900})
    yield context.new_page()
    context.close()


def test_script_off(plain: Page, live: LiveServer) -> None:
    plain.goto(live.url)
    plain.fill("#title", "Without script")
    for selector, text in ((EVENTS[0], "46"), (TOTAL[0], "418"), (PERCENTAGE[1], "16.4"), (TOTAL[1], "409x")):
        plain.fill(selector, text)
    plain.click("text=Recalculate and save")
    expect(plain.locator(f"{TOTAL[1]}-says")).to_have_text("Analysed: “409x” is not a number. Type digits, such as 418.")
    expect(plain.locator(TOTAL[1])).to_have_value("409x")
    plain.fill(TOTAL[1], "409")
    plain.keyboard.press("Enter")
    expect(plain.locator("#measure-risk_ratio .value")).to_have_text("0.67")
    plain.click("text=Add an outcome")
    expect(plain.locator(".tabs .on")).to_have_text("Outcome 2")
    plain.goto(live.url)
    plain.click(".papers a >> text=Without script")
    expect(plain.locator(EVENTS[0])).to_have_value("46")


def test_keyboard_alone(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    page.keyboard.press("Tab")
    expect(page.locator(".skip")).to_be_focused()
    page.keyboard.press("Enter")
    reached: list[str] = []
    for _ in range(30):
        page.keyboard.press("Tab")
        name = page.evaluate("document.activeElement.name || ''")
        reached.append(name)
        if name == "outcome-0-arm-0-events":
            break
    assert reached[-1] == "outcome-0-arm-0-events"
    for text, tabs in (("46", 2), ("418", 3), ("67", 2), ("409", 0)):
        page.keyboard.type(text)
        for _ in range(tabs):
            page.keyboard.press("Tab")
    expect(page.locator("#measure-risk_ratio .value")).to_have_text("0.67")
    expect(page.locator(TOTAL[1])).to_be_focused()  # new panels do not take the focus away
    page.locator("#outcome-0-event_is").focus()
    page.keyboard.press("ArrowDown")
    expect(page.locator("#measure-number_needed_to_treat .value")).to_have_text("19 to benefit")
    page.keyboard.press("ArrowDown")
    expect(page.locator("#measure-number_needed_to_treat .value")).to_have_text("18 to harm")
    page.locator("#measure-risk_ratio summary").focus()
    page.keyboard.press("Enter")
    expect(page.locator("#measure-risk_ratio dl")).to_be_visible()


def test_focus_is_shown(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    page.keyboard.press("Tab")
    page.keyboard.press("Tab")
    width = page.evaluate("getComputedStyle(document.activeElement).outlineWidth")
    assert width == "3px"


@pytest.mark.parametrize("width", [1360, 390])
def test_axe_finds_nothing(page: Page, live: LiveServer, width: int) -> None:
    page.set_viewport_size({"width": width, "height": 900})
    page.goto(live.url)
    assert not violations(page)
    open_example(page, live.url)
    assert not violations(page)
    type_into(page, (EVENTS[0], "abc"), (PERCENTAGE[1], "11.3"), (TOTAL[1], "40"))
    assert not violations(page)
    for address in ("/patterns", "/methods"):
        page.goto(f"{live.url}{address}")
        assert not violations(page)
    page.expected_faults = ("404",)  # type: ignore[attr-defined]
    page.goto(f"{live.url}/sheet/ffffffffffff")
    assert not violations(page)


@pytest.mark.parametrize("width", [320, 390, 820, 1360, 2560])
def test_nothing_runs_out_of_the_window(page: Page, live: LiveServer, width: int) -> None:
    page.set_viewport_size({"width": width, "height": 900})
    open_example(page, live.url)
    assert page.evaluate("document.documentElement.scrollWidth") <= width
    type_into(page, (EVENTS[0], "3"), (TOTAL[0], "2140"))
    assert page.evaluate("document.documentElement.scrollWidth") <= width


def _pages(page: Page) -> list[str]:
    data = page.pdf(prefer_css_page_size=True)
    return [sheet.extract_text() for sheet in PdfReader(io.BytesIO(data)).pages]


def test_a_sheet_prints_on_one_page(page: Page, live: LiveServer) -> None:
    open_example(page, live.url)
    (text,) = _pages(page)
    for part in ("Nurse-led compression review", "Invented example", "5.4 points lower", "Cautions", "Armslength 0."):
        assert part in text


def test_a_sheet_with_notes_and_a_thousand_people_prints_on_one_page(page: Page, live: LiveServer) -> None:
    open_example(page, live.url)
    page.select_option("#outcome-0-follow_up", "varies")
    type_into(page, (EVENTS[0], "3"), (TOTAL[0], "2140"), (EVENTS[1], "9"), (TOTAL[1], "2096"), (PERCENTAGE[1], ""))
    expect(page.locator(".people.of-1000")).to_have_count(2)
    assert len(_pages(page)) == 1


def test_arms_differ_without_colour(page: Page, live: LiveServer) -> None:
    """Solid and hollow markers, solid and outlined people: shapes, not only hues."""
    open_example(page, live.url)
    widths = page.evaluate(
        "['.marker.intervention', '.marker.comparator'].map(s => getComputedStyle(document.querySelector(s)).borderTopWidth)"
    )
    assert widths[0] != widths[1]
    fills = page.evaluate(
        "['with-event', 'net-fewer', 'no-event'].map(c => getComputedStyle(document.querySelector('.people.intervention .' + c)).fill)"
    )
    assert len(set(fills)) == 3

"""What a person does on a sheet, in a real browser."""

from __future__ import annotations

import re

import pytest
from playwright.sync_api import Browser, Page, expect

from tests.browser.sheets import EVENTS, NON_EVENTS, PERCENTAGE, TOTAL, open_example, type_counts, type_into
from tests.conftest import LiveServer

pytestmark = pytest.mark.browser

RISK_DIFFERENCE = "#measure-risk_difference"
NEEDED = "#measure-number_needed_to_treat"


def test_typing_counts_changes_every_panel(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    expect(page.locator("#results section")).to_have_count(0)
    type_counts(page, "46", "418", "67", "409")
    expect(page).to_have_url(re.compile(r"/sheet/[0-9a-f]{12}\?outcome=0$"))
    expect(page.locator("#saved")).to_contain_text("Saved")
    panels = {
        ".fourfold tbody tr:nth-child(1) td:nth-child(2)": ("46", "30"),
        f"{RISK_DIFFERENCE} .value": ("5.4 points lower", "9.2 points lower"),
        f"{NEEDED} .value": ("19 for one fewer", "11 for one fewer"),
        "#measure-risk_ratio .value": ("0.67", "0.438"),
        "#measure-relative_risk_reduction .value": ("33%", "56%"),
        "#measure-odds_ratio .value": ("0.63", "0.395"),
        ".array.intervention li:nth-child(1) b": ("11", "7"),
    }
    for selector, (before, _) in panels.items():
        expect(page.locator(selector)).to_have_text(before)
    strip = page.locator(f"{RISK_DIFFERENCE} .strip").inner_html()
    type_into(page, (EVENTS[0], "30"))
    for selector, (_, after) in panels.items():
        expect(page.locator(selector)).to_have_text(after)
    assert page.locator(f"{RISK_DIFFERENCE} .strip").inner_html() != strip
    expect(page.locator(".p-values")).to_contain_text("P<0.001 by N − 1 chi-squared")


def test_percentages_with_one_fitting_table(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_into(page, (PERCENTAGE[0], "11·0"), (TOTAL[0], "418"), (PERCENTAGE[1], "16,4 %"), (TOTAL[1], "409"))
    expect(page.locator(".summary")).to_have_text("One table fits.")
    expect(page.locator(".in-words")).to_have_text(
        "46 of 418 with the intervention had the event. 67 of 409 with the comparator had the event."
    )


def test_percentages_with_several_fitting_tables(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_into(page, (PERCENTAGE[0], "11"), (TOTAL[0], "418"), (PERCENTAGE[1], "16"), (TOTAL[1], "409"))
    expect(page.locator(".summary")).to_have_text(
        "20 tables fit. Estimates show the range over all of them, intervals the widest over all."
    )
    expect(page.locator(".fourfold tbody tr:nth-child(1) td:nth-child(2)")).to_have_text("44 to 48")
    expect(page.locator("#measure-risk_ratio .value")).to_have_text("0.64 to 0.73")
    expect(page.locator("#note-more_if_truncated").first).to_be_visible()


def test_percentage_that_no_count_fits(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_into(page, (PERCENTAGE[0], "11.3"), (TOTAL[0], "40"))
    expect(page.locator("#note-no_count_fits")).to_contain_text(
        "no count among 40 rounds to this percentage; 4 is 10.00% or 5 is 12.50%."
    )
    expect(page.locator("#note-no_count_fits")).to_contain_text("would fit: was another number analysed?")


def test_other_pairs_of_numbers(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_into(page, (EVENTS[0], "46"), (NON_EVENTS[0], "372"), (PERCENTAGE[1], "16.4"), (EVENTS[1], "67"))
    expect(page.locator(".fourfold tbody tr:nth-child(1) td:nth-child(4)")).to_have_text("418")
    expect(page.locator(".fourfold tbody tr:nth-child(2) td:nth-child(4)")).to_have_text("408 to 409")


def test_interval_through_infinity(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_counts(page, "30", "210", "24", "205")
    expect(page.locator(f"{NEEDED} .interval")).to_contain_text("25 for one fewer … ∞ … 10 for one more")
    expect(page.locator(f"{RISK_DIFFERENCE} .interval")).to_contain_text("4.0 lower to 9.2 higher")


def test_a_thousand_people_where_a_hundred_would_hide(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_counts(page, "46", "418", "67", "409")
    expect(page.locator("#out-of")).to_contain_text("Out of 100 ")
    type_counts(page, "3", "2140", "9", "2096")
    expect(page.locator("#out-of")).to_contain_text("Out of 1000 ")
    expect(page.locator(".people.of-1000")).to_have_count(2)


def test_wanted_follow_up_and_level(page: Page, live: LiveServer) -> None:
    open_example(page, live.url)
    page.select_option("#outcome-0-event_is", "wanted")
    expect(page.locator(f"{NEEDED} .value")).to_have_text("18 to harm")
    page.select_option("#outcome-0-follow_up", "varies")
    expect(page.locator(f"{RISK_DIFFERENCE} .naive")).to_have_text("naive: follow-up varies")
    page.select_option("#confidence_level", "99")
    expect(page.locator("#measure-risk_ratio .interval")).to_contain_text("0.43 to 1.06")
    expect(page.locator(".fourfold thead th").last).to_have_text("99% interval")


def test_other_methods_open_and_stay_open_while_typing(page: Page, live: LiveServer) -> None:
    open_example(page, live.url)
    page.click("#measure-risk_ratio summary")
    expect(page.locator("#measure-risk_ratio dl")).to_contain_text("log (Katz)")
    type_into(page, (EVENTS[0], "40"))
    expect(page.locator("#measure-risk_ratio dl")).to_be_visible()


def test_fast_typing_meets_no_conflict_and_loses_nothing(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    statuses: list[int] = []
    page.on("response", lambda r: statuses.append(r.status) if r.request.method == "POST" else None)
    typed = {
        "#title": "Typed without a pause, to the last letter",
        EVENTS[0]: "46",
        TOTAL[0]: "418",
        EVENTS[1]: "67",
        TOTAL[1]: "409",
    }
    for selector, text in typed.items():
        page.locator(selector).press_sequentially(text, delay=12)
    for selector, text in typed.items():
        expect(page.locator(selector)).to_have_value(text)
    expect(page.locator("#measure-risk_ratio .value")).to_have_text("0.67")
    assert set(statuses) == {200}
    page.reload()
    for selector, text in typed.items():
        expect(page.locator(selector)).to_have_value(text)


def test_what_was_typed_just_before_leaving_is_kept(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_into(page, (EVENTS[0], "4"))
    address = page.url
    page.fill("#title", "Left at once")
    page.goto(live.url)
    page.wait_for_timeout(300)
    page.goto(address)
    expect(page.locator("#title")).to_have_value("Left at once")


def test_a_reload_in_the_middle_of_typing_shows_what_was_typed(page: Page, live: LiveServer) -> None:
    """The page is asked for before its last words are sent: it used to show the text before them."""
    open_example(page, live.url)
    page.fill("#title", "")
    page.locator("#title").press_sequentially("ABCDEFGHIJ", delay=5)
    page.reload()
    expect(page.locator("#title")).to_have_value("ABCDEFGHIJ")
    page.wait_for_load_state("networkidle")
    type_into(page, (EVENTS[0], "45"))
    expect(page.locator("#conflict")).to_have_count(0)
    expect(page.locator("#title")).to_have_value("ABCDEFGHIJ")


def test_answer_to_an_earlier_key_never_overwrites_a_later_one(page: Page, live: LiveServer) -> None:
    """Slow answers: each is held back while the next box is typed."""
    page.goto(live.url)

    def late(route: object) -> None:
        page.wait_for_timeout(400)
        route.continue_()  # type: ignore[attr-defined]

    page.route("**/sheet/*", late)
    page.locator(EVENTS[0]).press_sequentially("4", delay=10)
    page.wait_for_timeout(200)
    page.locator(EVENTS[0]).press_sequentially("6", delay=10)
    page.locator(TOTAL[0]).press_sequentially("418", delay=150)
    page.wait_for_timeout(1500)
    page.unroute("**/sheet/*")
    type_into(page, (EVENTS[1], "67"))
    expect(page.locator(EVENTS[0])).to_have_value("46")
    expect(page.locator(TOTAL[0])).to_have_value("418")
    page.reload()
    expect(page.locator(EVENTS[0])).to_have_value("46")
    expect(page.locator(TOTAL[0])).to_have_value("418")


def test_two_windows_are_told_and_lose_neither(page: Page, live: LiveServer) -> None:
    page.expected_faults = ("409",)  # type: ignore[attr-defined]
    open_example(page, live.url)
    other = page.context.new_page()
    other.goto(page.url)
    type_into(other, (EVENTS[0], "40"))
    type_into(page, (EVENTS[0], "30"))
    expect(page.locator("#conflict")).to_contain_text("This sheet was changed in another window")
    expect(page.locator(EVENTS[0])).to_have_value("30")
    other.goto(f"{live.url}{page.locator('#conflict a').first.get_attribute('href')}")
    expect(other.locator(EVENTS[0])).to_have_value("30")


def test_a_server_that_is_gone_is_said(page: Page, live: LiveServer) -> None:
    page.expected_faults = ("Failed to load resource", "Failed to fetch", "net::")  # type: ignore[attr-defined]
    open_example(page, live.url)
    page.route("**/sheet/*", lambda route: route.abort())
    page.fill(EVENTS[0], "45")
    expect(page.locator("#not-saved")).to_be_visible()
    expect(page.locator(EVENTS[0])).to_have_value("45")
    page.unroute("**/sheet/*")
    type_into(page, (EVENTS[0], "44"))
    expect(page.locator("#not-saved")).to_be_hidden()


BAD = [
    ("50000", "With the event: 50,000 here are more than the 418 analysed. Check both numbers, and which box each belongs in."),
    ("-3", "With the event: A negative number cannot stand here. Type 0 or more, such as 46."),
    (
        "4.5",
        "With the event: People are counted whole; “4.5” has decimals. Type a whole number such as 46, or a percentage under Per cent.",
    ),
    ("", "With the event: One more number is needed. Type how many had the event, or the percentage."),
    ("many", "With the event: “many” is not a number. Type digits, such as 46."),
    (
        "101%",
        "With the event: A percentage stands where people are counted. Type it under Per cent, or type how many people, such as 46.",
    ),
    (
        "1000000000000",
        "With the event: More people than this program counts in an arm. Type at most 1,000,000,000; check for a digit too many.",
    ),
    ("9" * 2000, "With the event: This is too long to be one number. Type the number alone, such as 46."),
    ("<b onclick=x>46</b>", "With the event: “<b onclick=x>46</b>” is not a number. Type digits, such as 46."),
    ("NaN", "With the event: “NaN” is not a number. Type digits, such as 46."),
]


@pytest.fixture(scope="module")
def bad_page(browser: Browser, live: LiveServer) -> Page:
    made = browser.new_page(viewport={"width": 1360, "height": 900})
    open_example(made, live.url)
    return made


@pytest.mark.parametrize(("typed", "says"), BAD)
def test_error_beside_the_field(bad_page: Page, typed: str, says: str) -> None:
    type_into(bad_page, (EVENTS[0], typed))
    expect(bad_page.locator(f"{EVENTS[0]}-says")).to_have_text(says)
    expect(bad_page.locator(EVENTS[0])).to_have_value(typed)
    expect(bad_page.locator(".fourfold tbody")).to_contain_text("Usual care")
    described = bad_page.locator(EVENTS[0]).get_attribute("aria-describedby")
    assert described == f"{EVENTS[0][1:]}-says"


def test_error_in_other_boxes(page: Page, live: LiveServer) -> None:
    open_example(page, live.url)
    type_into(page, (TOTAL[0], "0"), (PERCENTAGE[1], "164"))
    expect(page.locator(f"{TOTAL[0]}-says")).to_have_text(
        "Analysed: Nobody was analysed: no risk can be stated. Type how many people were analysed, such as 418."
    )
    expect(page.locator(f"{PERCENTAGE[1]}-says")).to_have_text(
        "Per cent: A percentage of people cannot be above 100. Check the decimal mark; type a number from 0 to 100."
    )
    expect(page.locator("[aria-invalid=true]")).to_have_count(2)
    type_into(page, (TOTAL[0], "418"), (PERCENTAGE[1], "16.4"))
    expect(page.locator("[aria-invalid=true]")).to_have_count(0)
    expect(page.locator("#measure-risk_ratio .value")).to_have_text("0.67")

"""What a person does with the further numbers of a paper: adds them, sees them judged, chooses, takes them away."""

from __future__ import annotations

from playwright.sync_api import Page, expect

from tests.browser.sheets import EVENTS, PERCENTAGE, TOTAL, answered, open_example, type_counts, type_into, violations
from tests.conftest import LiveServer

ADD = "button[name=add-figure]"


def figure(key: int, part: str) -> str:
    return f"#outcome-0-figure-{key}-{part}"


def note(page: Page, what: str) -> str:
    """Verdict and reason of the note headed so."""
    found = page.locator(".number-note", has=page.locator(".what", has_text=what)).first
    return " | ".join(found.locator(f".{part}").first.inner_text() for part in ("printed", "verdict", "because"))


def test_a_number_is_added_judged_and_taken_away(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_counts(page, "46", "418", "67", "409")
    page.click(ADD)
    expect(page.locator(figure(1, "value"))).to_be_visible()
    type_into(page, (figure(1, "value"), "0.67"), (figure(1, "low"), "0.47"), (figure(1, "high"), "0.95"))
    assert note(page, "Risk ratio") == (
        "0.67 (0.47 to 0.95; 95%) | ✓ agrees | 0.672 (0.474 to 0.953) by log (Katz); the same by Miettinen–Nurminen score and others."
    )
    type_into(page, (figure(1, "low"), "0.67"), (figure(1, "high"), "0.95"), (figure(1, "value"), "0.47"))
    assert note(page, "Risk ratio").split(" | ")[1] == "≠ does not agree"
    page.click(ADD)
    page.select_option(figure(2, "kind"), "p_value")
    expect(page.locator(figure(2, "low"))).to_have_count(0)
    type_into(page, (figure(2, "value"), "P<0.05"))
    assert note(page, "P").startswith("P < 0.05 | ✓ agrees | By N − 1 chi-squared")
    page.locator("#figure-1 summary").click()
    page.click("#figure-1 button[name=remove-figure]")
    expect(page.locator(figure(1, "value"))).to_have_count(0)
    expect(page.locator(figure(2, "value"))).to_have_value("P<0.05")
    page.reload()
    expect(page.locator(figure(2, "value"))).to_have_value("P<0.05")


def test_ratio_and_percentages_find_the_counts(page: Page, live: LiveServer) -> None:
    """No count is typed at all: totals, percentages without decimals, and a ratio with its interval."""
    page.goto(live.url)
    type_into(page, (TOTAL[0], "418"), (PERCENTAGE[0], "11"), (TOTAL[1], "409"), (PERCENTAGE[1], "16"))
    expect(page.locator(".summary")).to_contain_text("tables fit.")
    many = int(page.locator(".summary").inner_text().split()[0])
    page.click(ADD)
    type_into(page, (figure(1, "value"), "0.672"), (figure(1, "low"), "0.474"), (figure(1, "high"), "0.953"))
    expect(page.locator(".summary")).to_have_text("One table fits.")
    assert many > 1
    assert page.locator(".fourfold tbody td").first.inner_text() == "46"


def test_the_reader_chooses_between_counts_and_percentages(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    type_counts(page, "46", "418", "67", "409")
    type_into(page, (PERCENTAGE[0], "14.0"))
    expect(page.locator(".contradiction")).to_contain_text("counts and percentage contradict each other")
    expect(page.locator(".summary")).to_have_text("No table fits everything typed. The figures follow the counts.")
    with page.expect_response(answered):
        page.select_option("#outcome-0-trust", "percentages")
    expect(page.locator(".summary")).to_contain_text("No table fits everything typed.")
    expect(page.locator("#outcome-0-trust")).to_have_value("percentages")


def test_numbers_by_keyboard_and_for_all(page: Page, live: LiveServer) -> None:
    open_example(page, live.url)
    page.locator(ADD).focus()
    page.keyboard.press("Enter")
    expect(page.locator(figure(4, "value"))).to_be_visible()
    page.locator(figure(4, "value")).focus()
    page.keyboard.type("0.63")
    expect(page.locator(".number-note .printed", has_text="0.63").first).to_be_visible()
    expect(page.locator(figure(4, "value"))).to_be_focused()
    for width in (1360, 320):
        page.set_viewport_size({"width": width, "height": 900})
        assert not violations(page)
        assert page.evaluate("document.documentElement.scrollWidth") <= width


def test_a_tab_keeps_the_last_keys_typed(page: Page, live: LiveServer) -> None:
    open_example(page, live.url)
    page.fill(EVENTS[0], "47")
    page.click("#tab-1")
    expect(page.locator(".tabs .on")).to_have_text("Skin irritation")
    expect(page.locator("#conflict")).to_have_count(0)
    page.click("#tab-0")
    expect(page.locator(EVENTS[0])).to_have_value("47")
    page.click("#add-outcome")
    expect(page.locator(".tabs .on")).to_have_text("Outcome 3")
    expect(page.locator("#outcome-2-name")).to_be_focused()

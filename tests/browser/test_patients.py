"""What a person does with a starting risk, by keyboard alone."""

from __future__ import annotations

from playwright.sync_api import Page, expect

from tests.browser.sheets import answered, open_example, type_into, violations
from tests.conftest import LiveServer


def test_a_starting_risk_by_keyboard(page: Page, live: LiveServer) -> None:
    open_example(page, live.url)
    page.locator("button[name=add-risk]").focus()
    with page.expect_response(answered):
        page.keyboard.press("Enter")
    page.locator("#outcome-0-risk-1-risk").focus()
    with page.expect_response(answered):
        page.keyboard.type("8%")
    expect(page.locator(".carried tbody").nth(1).locator("tr").nth(1)).to_have_text(
        "risk ratio5.4%26 fewer4 to 42 fewer39 to benefit"
    )
    expect(page.locator(".fan")).to_be_visible()
    assert violations(page) == []
    type_into(page, ("#outcome-0-risk-1-risk", "80"), ("#outcome-0-risk-1-risk", "120%"))
    expect(page.locator("#outcome-0-risk-1-risk-says")).to_contain_text("A risk lies between 0 and 100%")
    page.reload()
    expect(page.locator("#outcome-0-risk-1-risk")).to_have_value("120%")
    with page.expect_response(answered):
        page.locator("button[name=remove-risk]").click()
    expect(page.locator(".risk")).to_have_count(0)

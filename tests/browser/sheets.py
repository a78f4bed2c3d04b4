"""What the browser tests share: opening a sheet, typing, and waiting for what was typed to be answered."""

from __future__ import annotations

from pathlib import Path

from playwright.sync_api import Page, Response, expect

AXE = (Path(__file__).parents[1] / "vendor" / "axe-4.14.1.min.js").read_text(encoding="utf-8")

EVENTS, NON_EVENTS, TOTAL, PERCENTAGE = (
    [f"#outcome-0-arm-{arm}-{part}" for arm in (0, 1)] for part in ("events", "non_events", "total", "percentage")
)


def answered(response: Response) -> bool:
    """Whether a response is the answer to a save."""
    return response.request.method == "POST" and "/sheet/" in response.url


def type_into(page: Page, *pairs: tuple[str, str]) -> None:
    """Type into boxes one after the other, then wait for the answer to the last."""
    with page.expect_response(answered):
        for selector, text in pairs:
            page.fill(selector, text)
    page.wait_for_load_state("networkidle")


def open_example(page: Page, url: str) -> None:
    """Open the invented example as a sheet of its own."""
    page.goto(url)
    page.click("text=Open an invented example")
    expect(page.locator("#both-ways")).to_be_visible()


def type_counts(page: Page, a: str, n1: str, c: str, n2: str) -> None:
    """Type the four counts."""
    type_into(page, (EVENTS[0], a), (TOTAL[0], n1), (EVENTS[1], c), (TOTAL[1], n2))


def violations(page: Page) -> list[str]:
    """What axe-core finds, as rule and places; the targets named in the design are WCAG 2.2 A and AA."""
    page.evaluate(AXE)
    found = page.evaluate("axe.run(document, {resultTypes: ['violations']})")
    return [f"{rule['id']}: {[node['target'] for node in rule['nodes']][:3]}" for rule in found["violations"]]

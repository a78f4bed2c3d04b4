"""What a person does with a passage: pastes it, sees its numbers marked, goes to a note and back, answers, corrects."""

from __future__ import annotations

from playwright.sync_api import Page, expect

from tests.browser.sheets import EVENTS, PERCENTAGE, TOTAL, answered, type_into, violations
from tests.conftest import LiveServer
from tests.reading.papers_maker import pdf

PASSAGE = (
    "Ulcers recurred in 46 of 418 participants (11·0%) with compression review and 67 of 409 (16·4%) with usual care, a 67% "
    "reduction (relative risk 0·67, 95% CI 0·47 to 0·95; P=0·024). In all 854 took part."
)
TABLE = (
    "Outcome\tReview (n=418)\tUsual care (n=409)\tRR (95% CI)\tP\n"
    "Recurrence\t46 (11.0)\t67 (16.4)\t0.67 (0.47 to 0.95)\t0.024\n"
    "Skin irritation\t31 (7.4)\t12 (2.9)\t2.53 (1.32 to 4.85)\t0.004\n"
    "Admission\t9 (2.2)\t14 (3.4)\t0.63 (0.28 to 1.44)\t0.27\n"
)


def paste(page: Page, url: str, passage: str) -> None:
    page.goto(url)
    with page.expect_response(answered):
        page.fill("#passage", passage)
    page.wait_for_load_state("networkidle")


def test_paste_see_the_marks_and_click_through(page: Page, live: LiveServer) -> None:
    paste(page, live.url, PASSAGE)
    expect(page.locator(".passage .mark sup")).to_have_count(9)
    for box, text in ((EVENTS[0], "46"), (TOTAL[0], "418"), (PERCENTAGE[1], "16·4")):
        expect(page.locator(box)).to_have_value(text)
    expect(page.locator("#arm-0-name")).to_have_value("compression review")
    expect(page.locator(".mark.agrees_under_another_reading")).to_have_text("677 another reading")
    page.click("#mark-7")
    assert page.url.endswith("#note-7")
    expect(page.locator(".number-note:has(#note-7) .because")).to_contain_text("It is the ratio as a percentage")
    page.click(".number-note:has(#note-7) .place")
    assert page.url.endswith("#mark-7")
    expect(page.locator(".number-note .place").last).to_have_text("In the passage: 1–6")
    assert violations(page) == []


def test_correct_by_hand_and_change_the_passage(page: Page, live: LiveServer) -> None:
    paste(page, live.url, PASSAGE)
    type_into(page, (EVENTS[0], "47"))
    expect(page.locator(".arm.intervention .said")).to_contain_text("corrected by hand; the passage prints 46.")
    expect(page.locator("#passage-read")).to_contain_text("46")
    page.locator(".pasted summary").click()
    type_into(page, ("#passage", PASSAGE.replace("0·024", "0·03")))
    expect(page.locator(EVENTS[0])).to_have_value("47")
    expect(page.locator("#outcome-0-figure-3-value")).to_have_value("0·03")
    page.reload()
    expect(page.locator(EVENTS[0])).to_have_value("47")
    expect(page.locator("#passage")).to_have_value(PASSAGE.replace("0·024", "0·03"))


def test_answer_a_question(page: Page, live: LiveServer) -> None:
    paste(page, live.url, "Falls: 46 of 418 (11.0%) on Monday wards and 67 of 409 (16.4%) on Tuesday wards.")
    expect(page.locator(".left .question")).to_have_text(
        "Which group is the comparator? The one named first is taken as the intervention. Assumed until answered."
    )
    with page.expect_response(answered):
        page.select_option("#arm_order", "exchanged")
    expect(page.locator(EVENTS[0])).to_have_value("67")


def test_assign_a_number_that_was_not_read(page: Page, live: LiveServer) -> None:
    paste(page, live.url, PASSAGE)
    expect(page.locator(".passage .unread")).to_have_text("854")
    page.locator(".assign summary").click()
    with page.expect_response(answered):
        page.select_option(".assign select", "total_both")
    expect(page.locator(".passage .unread")).to_have_count(0)
    expect(page.locator("#outcome-0-figure-4-value")).to_have_value("854")
    expect(page.locator(".passage .mark").last).to_contain_text("854")


def test_a_table_becomes_a_list_of_outcomes(page: Page, live: LiveServer) -> None:
    paste(page, live.url, TABLE)
    rows = page.locator(".outcomes tbody tr")
    expect(rows).to_have_count(3)
    expect(rows.nth(1)).to_contain_text("31 / 418, 7.4%")
    rows.nth(2).locator("button").click()
    expect(page.locator("#outcome-2-arm-0-events")).to_have_value("9")
    page.set_viewport_size({"width": 320, "height": 700})
    assert page.evaluate("document.documentElement.scrollWidth <= innerWidth")
    assert violations(page) == []


def test_without_script(page: Page, live: LiveServer) -> None:
    context = page.context.browser.new_context(java_script_enabled=False)  # type: ignore[union-attr]
    plain = context.new_page()
    plain.goto(live.url)
    plain.fill("#passage", PASSAGE)
    plain.click("text=Recalculate and save")
    expect(plain.locator(".passage .mark sup")).to_have_count(9)
    expect(plain.locator(EVENTS[0])).to_have_value("46")
    context.close()


def test_drop_a_paper_and_pick_a_sentence(page: Page, live: LiveServer) -> None:
    page.goto(live.url)
    data = page.evaluate_handle(
        """(bytes) => { const given = new DataTransfer();
        given.items.add(new File([new Uint8Array(bytes)], "trial.pdf", {type: "application/pdf"})); return given; }""",
        list(pdf()),
    )
    with page.expect_navigation():
        page.dispatch_event("#sheet", "drop", {"dataTransfer": data})
    expect(page.locator("h1")).to_have_text("What trial.pdf prints")
    assert violations(page) == []
    page.locator(".part", has_text="Skin irritation occurred").locator("button").click()
    expect(page.locator(EVENTS[0])).to_have_value("31")
    expect(page.locator("#passage-read")).to_contain_text("[Text] Skin irritation")

"""Typing to fresh panels, start to first page, page weight; in Chromium and over loopback."""

from __future__ import annotations

import gzip
import os
import shutil
import subprocess
import sys
import tempfile
import time
import urllib.request
from collections.abc import Iterator
from pathlib import Path
from statistics import median, quantiles

from playwright.sync_api import Page, sync_playwright

from tests.browser.sheets import EVENTS, open_example
from tests.conftest import LiveServer, serving

_EDITS = 50
_DELAY = 150.0
_ROOT = Path(__file__).parents[2]
_EMPTY = """
import scipy.special, uvicorn
from fastapi import FastAPI
from fastapi.responses import HTMLResponse
app = FastAPI(docs_url=None, redoc_url=None)
app.get("/", response_class=HTMLResponse)(lambda: "<p>empty</p>")
uvicorn.run(app, port=PORT, log_level="critical")
"""


def _edits(page: Page) -> list[float]:
    """Milliseconds from the last input event to the new panel in the document, less the typing delay."""
    script = """([box, text]) => new Promise(done => {
      const field = document.querySelector(box), old = document.querySelector('#measure-risk_ratio .value').textContent;
      const start = performance.now();
      const watch = new MutationObserver(() => {
        if (document.querySelector('#measure-risk_ratio .value').textContent !== old) {
          watch.disconnect(); requestAnimationFrame(() => done(performance.now() - start));
        }});
      watch.observe(document.querySelector('#sheet'), {subtree: true, childList: true, characterData: true});
      field.value = text; field.dispatchEvent(new Event('input', {bubbles: true}));
    })"""
    taken = []
    for edit in range(_EDITS):
        taken.append(page.evaluate(script, [EVENTS[0], str(20 + 3 * edit)]) - _DELAY)
        page.wait_for_timeout(60)
    return taken


def _first_page(command: list[str], address: str) -> float:
    process = subprocess.Popen(command, cwd=_ROOT, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
    start = time.perf_counter()
    try:
        while True:
            try:
                with urllib.request.urlopen(address, timeout=5) as answer:
                    answer.read()
                return time.perf_counter() - start
            except OSError:
                time.sleep(0.005)
    finally:
        process.kill()
        process.wait()


def _starts() -> tuple[float, float]:
    ours, empty = [], []
    for i in range(7):
        with tempfile.TemporaryDirectory() as data:
            port = 18_714 + 2 * i
            command = [sys.executable, "-m", "app", "--no-open", "--port", str(port), "--data", data]
            ours.append(_first_page(command, f"http://127.0.0.1:{port}/"))
            code = _EMPTY.replace("PORT", str(port + 1))
            empty.append(_first_page([sys.executable, "-c", code], f"http://127.0.0.1:{port + 1}/"))
    return median(ours), median(empty)


def _weight(live: LiveServer, page: Page) -> tuple[int, int, int]:
    """Bytes over the wire and requests of a first load of the example, and the gzipped answer to an edit."""
    sizes: list[int] = []
    page.on("requestfinished", lambda request: sizes.append(request.sizes()["responseBodySize"]))
    open_example(page, live.url)
    address = page.url
    context = page.context.browser.new_context()  # type: ignore[union-attr]
    first = context.new_page()
    first.on("requestfinished", lambda request: loaded.append(request.sizes()["responseBodySize"]))
    loaded: list[int] = []
    first.goto(address)
    first.wait_for_load_state("networkidle")
    with first.expect_response(lambda r: r.request.method == "POST") as answer:
        first.fill(EVENTS[0], "45")
    edit = len(gzip.compress(answer.value.body(), 5))
    context.close()
    return sum(loaded), len(loaded), edit


def rows() -> Iterator[tuple[str, str]]:
    """The page's figures."""
    path = os.environ.get("ARMSLENGTH_CHROMIUM") or shutil.which("chromium")
    with tempfile.TemporaryDirectory() as data, serving(Path(data)) as live, sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=path, args=["--no-sandbox"])
        page = browser.new_page(viewport={"width": 1360, "height": 900})
        loaded, requests, edit = _weight(live, page)
        taken = _edits(page)
        browser.close()
    yield f"typing to fresh panels beyond the delay, median of {_EDITS}", f"{median(taken):10.0f} ms"
    yield "  95th percentile", f"{quantiles(taken, n=20)[-1]:10.0f} ms"
    yield "first load of a sheet, bytes over the wire", f"{loaded:10,} in {requests} requests"
    yield "answer to an edit, gzipped", f"{edit:10,} bytes"
    ours, empty = _starts()
    yield "start to first page, median of 7", f"{ours * 1000:10.0f} ms"
    yield (
        "  an empty FastAPI page that imports scipy.special",
        f"{empty * 1000:10.0f} ms ({ours / empty:.2f} of ours to theirs)",
    )

"""Fixtures: an application on a shelf of its own, a client, a live server, and one browser."""

from __future__ import annotations

import os
import shutil
import socket
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

import pytest
import uvicorn
from hypothesis import settings as hypothesis_settings
from playwright.sync_api import Browser, Page, sync_playwright
from starlette.testclient import TestClient

from app.server.application import create_app
from app.settings import Settings

BASE = "http://127.0.0.1"

hypothesis_settings.register_profile("suite", deadline=None, derandomize=True, print_blob=False)
hypothesis_settings.load_profile("suite")


@pytest.fixture
def client(tmp_path: Path) -> Iterator[TestClient]:
    """A client of an application with an empty shelf; faults of the program are raised."""
    with TestClient(create_app(Settings(tmp_path, patterns=True)), base_url=BASE) as made:
        yield made


@dataclass(frozen=True)
class LiveServer:
    """A server on loopback: its address and the folder of its shelf."""

    url: str
    data: Path


@contextmanager
def serving(data: Path) -> Iterator[LiveServer]:
    """Serve an application from a thread on a free port."""
    bound = socket.socket()
    bound.bind(("127.0.0.1", 0))
    config = uvicorn.Config(
        create_app(Settings(data, patterns=True)), log_level="critical", proxy_headers=False, timeout_graceful_shutdown=1
    )
    server = uvicorn.Server(config)
    thread = threading.Thread(target=server.run, kwargs={"sockets": [bound]}, daemon=True)
    thread.start()
    while not server.started:
        if not thread.is_alive():
            raise RuntimeError("the server did not start")
        thread.join(0.01)
    try:
        yield LiveServer(f"http://127.0.0.1:{bound.getsockname()[1]}", data)
    finally:
        server.should_exit = True
        thread.join(10)
        bound.close()


@pytest.fixture(scope="session")
def live(tmp_path_factory: pytest.TempPathFactory) -> Iterator[LiveServer]:
    """One live server for the browser tests; each opens sheets of its own."""
    with serving(tmp_path_factory.mktemp("shelf")) as server:
        yield server


@pytest.fixture(scope="session")
def browser() -> Iterator[Browser]:
    """One Chromium."""
    path = os.environ.get("ARMSLENGTH_CHROMIUM") or shutil.which("chromium") or shutil.which("chromium-browser")
    if path is None:
        raise RuntimeError("no Chromium found: `bash tests/run` installs it, or set ARMSLENGTH_CHROMIUM")
    with sync_playwright() as playwright:
        started = playwright.chromium.launch(executable_path=path, args=["--no-sandbox"])
        yield started
        started.close()


@pytest.fixture
def page(browser: Browser) -> Iterator[Page]:
    """A page 1360 wide, which fails the test on any script error or refused resource."""
    context = browser.new_context(viewport={"width": 1360, "height": 900})
    made = context.new_page()
    faults: list[str] = []
    made.on("pageerror", lambda error: faults.append(str(error)))
    made.on("console", lambda message: faults.append(message.text) if message.type == "error" else None)
    yield made
    context.close()
    expected = getattr(made, "expected_faults", ())
    unexpected = [fault for fault in faults if not any(part in fault for part in expected)]
    assert not unexpected

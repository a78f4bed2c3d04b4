"""Who may ask, how much, and the headers of every reply; the odd ones over raw sockets."""

from __future__ import annotations

import socket
from pathlib import Path
from urllib.parse import urlsplit

import pytest
from starlette.testclient import TestClient

from app.server import application, guard
from app.server.application import create_app
from app.settings import Settings
from tests.conftest import BASE, LiveServer

HEADERS = {name.lower() for name in guard._HEADERS}
JSON = {"Content-Type": "application/json"}


def raw(live: LiveServer, text: str | bytes) -> str:
    """Send bytes as they are and give back all that comes."""
    parts = urlsplit(live.url)
    with socket.create_connection((parts.hostname or "", parts.port or 0), timeout=10) as connection:
        connection.sendall(text.encode() if isinstance(text, str) else text)
        received = b""
        while chunk := connection.recv(65536):
            received += chunk
    return received.decode("utf-8", "replace")


@pytest.mark.parametrize("host", ["127.0.0.1", "localhost", "LOCALHOST", "127.0.0.1:8714", "[::1]:80"])
def test_own_names_are_answered(client: TestClient, host: str) -> None:
    assert client.get("/healthz", headers={"Host": host}).status_code == 200


@pytest.mark.parametrize(
    "host",
    [
        "evil.example",
        "127.0.0.1.evil.example",
        "localhost.",
        "127.0.0.1@evil.example",
        "evil.example:80",
        "127.0.0.1/x",
        "x:y:z",
        "",
        "127.0.0.1:port",
    ],
)
def test_other_names_are_not(client: TestClient, host: str) -> None:
    answer = client.get("/healthz", headers={"Host": host})
    assert answer.status_code == 400
    assert "This server answers only to this computer’s own name." in answer.text


def test_no_host_and_two_hosts_are_refused(live: LiveServer) -> None:
    assert " 400 " in raw(live, "GET /healthz HTTP/1.0\r\n\r\n").splitlines()[0]
    assert (
        " 400 "
        in raw(live, "GET /healthz HTTP/1.1\r\nHost: localhost\r\nHost: localhost\r\nConnection: close\r\n\r\n").splitlines()[0]
    )


@pytest.mark.parametrize(
    "headers",
    [
        {"Origin": "http://evil.example"},
        {"Origin": "null"},
        {"Origin": "http://127.0.0.1:9999"},
        {"Origin": "https://127.0.0.1"},
        {"Sec-Fetch-Site": "cross-site"},
        {"Sec-Fetch-Site": "same-site"},
    ],
)
def test_changes_from_elsewhere_are_refused(client: TestClient, headers: dict[str, str]) -> None:
    for address in ("/example", "/api/v1/effects", "/sheet/0123456789ab"):
        assert client.post(address, headers=headers).status_code == 403
    assert "No sheet" not in client.get("/").text


@pytest.mark.parametrize("headers", [{"Origin": BASE}, {"Sec-Fetch-Site": "same-origin"}, {"Sec-Fetch-Site": "none"}, {}])
def test_changes_from_our_own_page_or_from_no_page_are_taken(client: TestClient, headers: dict[str, str]) -> None:
    assert client.post("/example", headers=headers, follow_redirects=False).status_code == 303


def test_forwarded_scheme_is_not_believed(client: TestClient) -> None:
    headers = {"Origin": BASE, "X-Forwarded-Proto": "https", "X-Forwarded-For": "1.2.3.4"}
    assert client.post("/example", headers=headers, follow_redirects=False).status_code == 303


def test_body_too_large_by_its_length(client: TestClient) -> None:
    answer = client.post("/api/v1/effects", content=b"x" * 3_000_001, headers=JSON)
    assert answer.status_code == 413
    assert answer.json()["problems"][0]["slug"] == "body_too_large"


def test_body_too_large_without_a_length(live: LiveServer) -> None:
    host = urlsplit(live.url).netloc
    chunk = b"10000\r\n" + b"x" * 0x10000 + b"\r\n"
    head = f"POST /api/v1/effects HTTP/1.1\r\nHost: {host}\r\nContent-Type: application/json\r\nTransfer-Encoding: chunked\r\nConnection: close\r\n\r\n"
    # One byte over, and nothing after it: a server that closes over unread bytes would reset the connection.
    last = 3_000_001 - 45 * 0x10000
    answer = raw(live, head.encode() + chunk * 45 + f"{last:x}\r\n".encode() + b"x" * last)
    assert " 413 " in answer.splitlines()[0]
    assert "body_too_large" in answer


def test_body_too_large_in_a_page_is_an_alert(client: TestClient) -> None:
    headers = {"HX-Request": "true", "HX-Request-Type": "partial", "Content-Type": "application/x-www-form-urlencoded"}
    answer = client.post("/sheet/0123456789ab", content=b"title=" + b"x" * 3_000_001, headers=headers)
    assert answer.status_code == 413
    assert answer.headers["HX-Retarget"] == "#not-saved"
    assert answer.text == (
        '<p class="alert" id="not-saved" role="alert"><b>Not saved.</b> More was sent than this program takes at once. Shorten it.</p>'
    )


@pytest.mark.parametrize(
    ("method", "address", "status", "slug"),
    [
        ("GET", "/api/v1/effects", 405, "method_not_allowed"),
        ("POST", "/api/v1/nothing", 404, "not_found"),
        ("DELETE", "/api/v1/effects", 405, "method_not_allowed"),
    ],
)
def test_one_error_shape_whatever_the_origin(client: TestClient, method: str, address: str, status: int, slug: str) -> None:
    answer = client.request(method, address)
    assert answer.status_code == status
    (problem,) = answer.json()["problems"]
    assert set(problem) == {"field", "message", "hint", "slug"}
    assert problem["slug"] == slug


@pytest.mark.parametrize("kind", ["text/plain", "application/x-www-form-urlencoded", ""])
def test_a_body_not_declared_as_json_is_refused(client: TestClient, kind: str) -> None:
    answer = client.post("/api/v1/effects", content=b"{}", headers={"Content-Type": kind})
    assert answer.status_code == 415
    assert answer.json()["problems"][0]["message"] == "The body is not declared as JSON."


def test_headers_stand_on_every_reply(client: TestClient) -> None:
    replies = [
        client.get("/"),
        client.get("/healthz"),
        client.get("/nowhere"),
        client.get("/static/armslength.css"),
        client.get("/static/../app/errors.py"),
        client.post("/api/v1/effects", json={}),
        client.post("/api/v1/effects", content=b"x" * 3_000_001, headers=JSON),
        client.get("/", headers={"Host": "evil.example"}),
        client.post("/example", headers={"Origin": "null"}),
    ]
    assert [reply.status_code for reply in replies] == [200, 200, 404, 200, 404, 422, 413, 400, 403]
    for reply in replies:
        assert set(reply.headers) >= HEADERS


def test_a_fault_of_the_program_has_the_shape_the_headers_and_a_number(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(*_: object) -> None:
        raise ZeroDivisionError("secret detail")

    monkeypatch.setattr("app.api.routes.effects_of", broken)
    with TestClient(create_app(Settings(tmp_path)), base_url=BASE, raise_server_exceptions=False) as client:
        body = {"intervention": {"events": 1, "total": 2}, "comparator": {"events": 1, "total": 2}}
        answer = client.post("/api/v1/effects", json=body)
    assert answer.status_code == 500
    (problem,) = answer.json()["problems"]
    assert problem["slug"] == "program_fault"
    assert "secret" not in answer.text
    assert set(answer.headers) >= HEADERS


def test_static_files_stay_in_their_folder(live: LiveServer) -> None:
    host = urlsplit(live.url).netloc
    for path in (
        "/static/../pyproject.toml",
        "/static/%2e%2e/pyproject.toml",
        "/static/..%2fpyproject.toml",
        "//etc/passwd",
        "/static/%00",
    ):
        assert " 404 " in raw(live, f"GET {path} HTTP/1.1\r\nHost: {host}\r\nConnection: close\r\n\r\n").splitlines()[0]


def test_fonts_and_digested_files_are_cached_for_good(client: TestClient) -> None:
    assert "immutable" in client.get("/static/armslength.css?abc").headers["Cache-Control"]
    assert client.get("/static/armslength.css").headers["Cache-Control"] == "no-cache"


def test_docs_are_off_and_telemetry_too(client: TestClient) -> None:
    assert client.get("/docs").status_code == 404
    assert not any(application._NO_TELEMETRY.values())

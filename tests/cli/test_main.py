"""The command as a process: where it listens, what it says, how it ends."""

from __future__ import annotations

import contextlib
import re
import signal
import socket
import subprocess
import sys
import urllib.request
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

import pytest
from typer.testing import CliRunner

from app import __version__
from app.cli.main import application
from app.settings import DEFAULT_PORT


@contextmanager
def running(*arguments: str) -> Iterator[tuple[subprocess.Popen[str], str]]:
    """The command running, and the line it prints."""
    command = [sys.executable, "-m", "app", "--no-open", *arguments]
    process = subprocess.Popen(
        command, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, cwd=Path(__file__).parents[2]
    )
    assert process.stdout is not None
    try:
        yield process, process.stdout.readline()
    finally:
        process.kill()
        process.wait(10)
        process.stdout.close()


def test_it_says_where_it_listens_and_ends_cleanly(tmp_path: Path) -> None:
    with running("--data", str(tmp_path / "shelf")) as (process, line):
        found = re.fullmatch(
            rf"Armslength {re.escape(__version__)} listens on (http://127\.0\.0\.1:(\d+)/) \(this computer only\)\. "
            rf"Sheets are kept in {re.escape(str(tmp_path / 'shelf'))}\. Ctrl-C ends it\.\n",
            line,
        )
        assert found
        assert int(found[2]) >= DEFAULT_PORT
        with urllib.request.urlopen(f"{found[1]}healthz", timeout=10) as answer:
            assert (answer.status, answer.read()) == (200, b"ok")
        process.send_signal(signal.SIGINT)
        assert process.wait(10) == 0
        assert process.stdout is not None
        assert process.stdout.read() == "Armslength has ended.\n"
    assert (tmp_path / "shelf" / "shelf.sqlite3").exists()


def test_a_taken_default_port_moves_on(tmp_path: Path) -> None:
    with socket.socket() as taken:
        taken.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        with contextlib.suppress(OSError):  # somebody else holds it: all the better
            taken.bind(("127.0.0.1", DEFAULT_PORT))
            taken.listen()
        with running("--data", str(tmp_path)) as (_, line):
            found = re.search(r":(\d+)/", line)
            assert found
            assert int(found[1]) > DEFAULT_PORT


def test_error_a_taken_port_asked_for(tmp_path: Path) -> None:
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        result = CliRunner().invoke(application, ["--no-open", "--port", str(port), "--data", str(tmp_path)])
    assert result.exit_code == 2
    assert result.stderr == f"Armslength could not listen on port {port}: Address already in use. Choose another with --port.\n"


def test_error_a_shelf_that_cannot_be_used(tmp_path: Path) -> None:
    (tmp_path / "shelf.sqlite3").write_text("not a database, and long enough to be looked at as one " * 40)
    result = CliRunner().invoke(application, ["--no-open", "--port", "0", "--data", str(tmp_path)])
    assert result.exit_code == 4
    assert result.stderr == "The shelf could not be used: file is not a database. What you typed is still on the page.\n"


def test_version() -> None:
    result = CliRunner().invoke(application, ["--version"])
    assert (result.exit_code, result.stdout) == (0, f"armslength {__version__}\n")


@pytest.mark.parametrize("option", ["--port", "--open", "--data", "--version"])
def test_help_tells_of_every_option(option: str) -> None:
    result = CliRunner().invoke(application, ["--help"], terminal_width=200)
    assert option in result.stdout

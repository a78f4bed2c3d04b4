"""`armslength`: open the app in a browser on this computer."""

from __future__ import annotations

import contextlib
import socket
import sys
import threading
import webbrowser
from pathlib import Path
from typing import Annotated

import platformdirs
import typer

from app import __version__
from app.errors import ArmslengthError
from app.settings import DEFAULT_PORT, Settings

_HOST = "127.0.0.1"
_PORTS_TRIED = 50

application = typer.Typer(add_completion=False, help="Read a published two-arm trial back to its fourfold table.")


def _bind(port: int | None) -> socket.socket:
    """A listening socket on the port asked for, else on the first free one from the default on."""
    for candidate in [port] if port is not None else range(DEFAULT_PORT, DEFAULT_PORT + _PORTS_TRIED):
        bound = socket.socket(socket.AF_INET, socket.SOCK_STREAM)
        bound.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        try:
            bound.bind((_HOST, candidate))
            bound.listen(64)  # from here on a browser that comes early waits instead of failing
        except OSError as refused:
            bound.close()
            why = refused.strerror
        else:
            return bound
    where = f"port {port}" if port is not None else f"any port from {DEFAULT_PORT} to {DEFAULT_PORT + _PORTS_TRIED - 1}"
    typer.echo(f"Armslength could not listen on {where}: {why}. Choose another with --port.", err=True)
    raise typer.Exit(2)


def _show_version(asked: bool) -> None:
    if asked:
        typer.echo(f"armslength {__version__}")
        raise typer.Exit


@application.callback(invoke_without_command=True)
def serve(
    context: typer.Context,
    port: Annotated[int | None, typer.Option(min=0, max=65535, help="Port to listen on; a taken one is an error.")] = None,
    open_browser: Annotated[bool, typer.Option("--open/--no-open", help="Open the browser.")] = True,
    data: Annotated[Path | None, typer.Option(help="Folder of the shelf.")] = None,
    _version: Annotated[
        bool, typer.Option("--version", callback=_show_version, is_eager=True, help="Show the version.")
    ] = False,
) -> None:
    """Serve Armslength to this computer's browser until Ctrl-C."""
    if context.invoked_subcommand is not None:
        return
    import uvicorn  # heavy; not needed for --help

    from app.server.application import create_app

    bound = _bind(port)
    folder = data if data is not None else Path(platformdirs.user_data_dir("armslength", appauthor=False))
    try:
        app = create_app(Settings(data_dir=folder.expanduser().absolute()))
    except ArmslengthError as refused:
        bound.close()
        typer.echo(str(refused), err=True)
        raise typer.Exit(4) from refused
    address = f"http://{_HOST}:{bound.getsockname()[1]}/"
    typer.echo(
        f"Armslength {__version__} listens on {address} (this computer only). Sheets are kept in {folder}. Ctrl-C ends it."
    )
    if open_browser:
        threading.Timer(0.5, webbrowser.open, (address,)).start()
    config = uvicorn.Config(
        app, log_level="warning", access_log=False, proxy_headers=False, server_header=False, timeout_graceful_shutdown=1
    )
    with contextlib.suppress(KeyboardInterrupt):
        uvicorn.Server(config).run(sockets=[bound])
    typer.echo("Armslength has ended.")


@application.command("check", help="Check every number of a passage, from a file or standard input.")
def _check(
    source: Annotated[str, typer.Argument(help="A text file, or - for standard input.")] = "-",
    as_json: Annotated[bool, typer.Option("--json", help="Print what the JSON interface answers.")] = False,
) -> None:
    from app.cli.check import check  # heavy; not needed to serve

    check(source, as_json=as_json)


def main() -> None:
    """Entry point of the command."""
    sys.exit(application())

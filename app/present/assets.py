"""Where templates and static files lie: beside the package in a checkout, inside it in a wheel."""

from __future__ import annotations

from pathlib import Path

_PACKAGE = Path(__file__).resolve().parents[1]


def asset_folder(name: str) -> Path:
    """The folder `templates` or `static`.

    Raises
    ------
    FileNotFoundError
        Neither place has it: the installation is incomplete.
    """
    for folder in (_PACKAGE / "_assets" / name, _PACKAGE.parent / name):
        if folder.is_dir():
            return folder
    raise FileNotFoundError(f"the folder {name!r} is missing from this installation")

"""Vendored files are the released ones, and the first load stays light."""

from __future__ import annotations

import hashlib
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]


@pytest.mark.parametrize(
    ("path", "digest"),
    [
        ("static/htmx-4.0.1.min.js", "a0abb04f2f45a1f89d1d4844023245537e5e6014c87b144553e0607b4cc32130"),
        (
            "static/fonts/source-serif-4-latin-wght-normal.woff2",
            "382475f38242c52d42a3e5ff8dc69b5d73f10d0d21e4550b5fe232984688779a",
        ),
        (
            "static/fonts/atkinson-hyperlegible-next-latin-wght-normal.woff2",
            "18b2a1a39a2fa298b0ba5390aca68462669826c90925656f1c1f6796e0e1bbaf",
        ),
        ("tests/vendor/axe-4.14.1.min.js", "29348999450cdf2849a8e70b7912fc2da85a849da39c0d0d5394f51d4a9ed95c"),
    ],
)
def test_vendored_file_is_the_released_one(path: str, digest: str) -> None:
    assert hashlib.sha256((ROOT / path).read_bytes()).hexdigest() == digest


@pytest.mark.parametrize(
    "path",
    [
        "static/htmx-LICENSE.txt",
        "static/fonts/source-serif-4-LICENSE.txt",
        "static/fonts/atkinson-hyperlegible-next-LICENSE.txt",
        "tests/vendor/axe-LICENSE.txt",
    ],
)
def test_vendored_file_keeps_its_licence(path: str) -> None:
    assert (ROOT / path).read_text().strip()


def test_no_inline_script_or_style_in_templates() -> None:
    texts = {path.name: path.read_text() for path in (ROOT / "templates").rglob("*.html")}
    found = [
        name
        for name, text in texts.items()
        if ' style="' in text or "<style" in text or "hx-on" in text or "<script>" in text or "javascript:" in text
    ]
    assert not found

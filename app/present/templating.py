"""The Jinja environment. A template gets one variable, `view`, and escapes everything."""

from __future__ import annotations

import hashlib
from functools import cache

from jinja2 import Environment, FileSystemLoader, StrictUndefined

from app.present.assets import asset_folder


@cache
def static_address(name: str) -> str:
    """The address of a static file, with a digest of its content so that it may be cached for good."""
    digest = hashlib.sha256((asset_folder("static") / name).read_bytes()).hexdigest()[:12]
    return f"/static/{name}?{digest}"


@cache
def environment() -> Environment:
    """The one environment: autoescape whatever a file's ending, undefined names are bugs."""
    made = Environment(
        loader=FileSystemLoader(asset_folder("templates")),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    made.globals["static_address"] = static_address
    return made


def render(template: str, view: object) -> str:
    """A template with its view."""
    return environment().get_template(template).render(view=view)

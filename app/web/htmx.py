"""What htmx tells of a request, read in one place."""

from __future__ import annotations

from dataclasses import dataclass

from starlette.requests import Request


@dataclass(frozen=True, slots=True)
class Htmx:
    """Whether a fragment is wanted rather than a page."""

    partial: bool

    @classmethod
    def of(cls, request: Request) -> Htmx:
        """Read the headers of a request."""
        headers = request.headers
        restoring = headers.get("HX-History-Restore-Request") == "true"
        return cls(headers.get("HX-Request") == "true" and headers.get("HX-Request-Type") != "full" and not restoring)

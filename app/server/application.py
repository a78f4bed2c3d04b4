"""create_app(settings): the shelf opened, the routes mounted, the guard around all of it."""

from __future__ import annotations

from fastapi import FastAPI
from fastapi.openapi.utils import get_openapi
from fastapi.responses import PlainTextResponse
from fastapi.staticfiles import StaticFiles
from fastapi.telemetry import TelemetryConfig
from starlette.middleware.gzip import GZipMiddleware
from starlette.responses import Response
from starlette.types import ASGIApp, Scope

from app import __version__
from app.api import routes as api
from app.present.assets import asset_folder
from app.server import problems
from app.server.guard import Guard
from app.settings import Settings
from app.shelf.store import Shelf
from app.web.desk import Desk
from app.web.routes import home, methods, paper, patterns, sheet

_YEAR = 365 * 24 * 3600
_NO_TELEMETRY: TelemetryConfig = {
    "tracing": False,
    "metrics": False,
    "logs": False,
    "operation_spans": False,
    "auto_configure": False,
}


class _Static(StaticFiles):
    """Static files, cached for good where the address carries a digest."""

    async def get_response(self, path: str, scope: Scope) -> Response:
        response = await super().get_response(path, scope)
        lasting = bool(scope.get("query_string")) or path.startswith("fonts")
        response.headers["Cache-Control"] = f"public, max-age={_YEAR}, immutable" if lasting else "no-cache"
        return response


def create_app(settings: Settings) -> ASGIApp:
    """The application of one server.

    Raises
    ------
    ShelfTooNew, ShelfBusy
        The shelf of `settings.data_dir` cannot be opened.
    """
    shelf = Shelf(settings.shelf_path)
    shelf.open()
    app = FastAPI(
        title="Armslength",
        version=__version__,
        docs_url=None,
        redoc_url=None,
        telemetry=_NO_TELEMETRY,
        description="Reads a published two-arm trial back to its fourfold table. Serves this computer only.",
    )
    app.state.desk = Desk(shelf, settings.data_dir)
    problems.install(app)
    app.add_middleware(GZipMiddleware, minimum_size=1000, compresslevel=5)
    app.include_router(home.router)
    app.include_router(sheet.router)
    app.include_router(paper.router)
    app.include_router(methods.router)
    app.include_router(api.router)
    if settings.patterns:
        app.include_router(patterns.router)
    app.mount("/static", _Static(directory=asset_folder("static")), name="static")

    @app.get("/healthz", include_in_schema=False)
    def healthz() -> PlainTextResponse:
        return PlainTextResponse("ok")

    _document(app)
    return Guard(app, settings.body_limit, settings.upload_limit)


def _document(app: FastAPI) -> None:
    """OpenAPI with the request models that only document, and without the framework's own error shape."""

    def schema() -> dict[str, object]:
        made = get_openapi(title=app.title, version=app.version, description=app.description, routes=app.routes)
        shapes = made["components"]["schemas"]
        for endpoint in api.ENDPOINTS:
            document = endpoint.asks.model_json_schema(ref_template="#/components/schemas/{model}")
            shapes.update(document.pop("$defs", {}))
            shapes[endpoint.asks.__name__] = document
        return made

    app.openapi = schema  # type: ignore[method-assign]

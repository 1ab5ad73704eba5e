"""The application: the only place where the parts are put together."""

from collections.abc import AsyncIterator
from contextlib import asynccontextmanager
from functools import cached_property
from typing import Any

import orjson
from fastapi import FastAPI, Request
from fastapi.exceptions import RequestValidationError
from fastapi.telemetry import TelemetryConfig
from starlette.exceptions import HTTPException
from starlette.responses import Response
from typing_extensions import override

from forebay import __version__
from forebay.api.access import Access, Tokens
from forebay.api.body_limit import BodyLimit
from forebay.api.delivery import Delivery
from forebay.api.guard import CrossOrigin, LastErrors, RequestIds
from forebay.api.limits import Limits
from forebay.api.metrics import Measured, Metrics
from forebay.api.openapi import build_document
from forebay.api.problems import from_status
from forebay.api.readiness import Readiness
from forebay.api.routers.documents import page_router
from forebay.api.routers.registry import OPERATIONS, ROUTERS
from forebay.api.validation import problem_of_query
from forebay.api.work import Workshop
from forebay.settings import Settings

SILENT: TelemetryConfig = {
    "tracing": False,
    "metrics": False,
    "logs": False,
    "operation_spans": False,
    "auto_configure": False,
}
"""Nothing leaves but answers, whatever the environment says; /metrics and the log can be read."""


class Application(FastAPI):
    """The framework's application with our own OpenAPI document, made once."""

    @cached_property
    def document(self) -> dict[str, Any]:
        """OpenAPI document."""
        return build_document(self)

    @override
    def openapi(self) -> dict[str, Any]:
        """OpenAPI document."""
        return self.document


def create_app(settings: Settings | None = None) -> Application:
    """Application under the given settings, by default those of the environment."""
    settings = Settings.from_environment() if settings is None else settings
    limits = Limits.of(settings)
    workshop = Workshop(limits)
    metrics = Metrics(workshop)
    app = Application(
        title="Forebay",
        version=__version__,
        docs_url=None,
        redoc_url=None,
        openapi_url=None,
        redirect_slashes=False,
        root_path=settings.root_path,
        telemetry=SILENT,
        lifespan=_lifespan,
        exception_handlers={HTTPException: _raise_status, RequestValidationError: _raise_query},
    )
    for router in ROUTERS:
        app.include_router(router)
    if settings.docs:
        app.include_router(page_router)
    app.state.limits, app.state.metrics, app.state.settings = limits, metrics, settings
    app.state.workshop = workshop
    app.state.readiness = Readiness(workshop, OPERATIONS)
    app.state.openapi_bytes = orjson.dumps(app.openapi())
    # the last one added is the outermost
    app.add_middleware(BodyLimit, limit=settings.max_body)
    tokens = Tokens(settings.tokens, settings.tokens_file)
    app.add_middleware(Access, tokens=tokens, concurrency=settings.token_concurrency)
    app.add_middleware(LastErrors)
    app.add_middleware(Delivery)
    app.add_middleware(CrossOrigin, origins=settings.cors_origins)
    app.add_middleware(Measured, metrics=metrics, is_logging=settings.log)
    app.add_middleware(RequestIds)
    return app


@asynccontextmanager
async def _lifespan(app: FastAPI) -> AsyncIterator[None]:
    app.state.readiness.start()
    try:
        yield
    finally:
        await app.state.readiness.stop()
        app.state.workshop.close()


async def _raise_status(request: Request, error: Any) -> Response:  # noqa: ANN401  (the framework's own signature)
    problem = from_status(error.status_code, error.headers)
    if request.method == "OPTIONS" and problem.code == "method-not-allowed":
        return Response(status_code=204, headers=problem.headers)
    raise problem


async def _raise_query(_request: Request, error: Any) -> Response:  # noqa: ANN401  (the framework's own signature)
    raise problem_of_query(error.errors())

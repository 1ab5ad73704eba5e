"""Documents: the OpenAPI document, its page, and a page for every problem."""

from html import escape
from importlib.resources import files
from typing import Annotated, Literal

import orjson
from fastapi import APIRouter, Path, Request
from pydantic import BaseModel, Field
from starlette.responses import Response

from forebay import __version__
from forebay.api.media import HTML, JSON, negotiate
from forebay.api.problems import Problem, catalogue
from forebay.api.routers.serving import problem_responses

PAGES = files("forebay.api") / "pages"

PAGE_POLICY = (
    "default-src 'none'; script-src 'self'; style-src 'self' 'unsafe-inline'; img-src 'self' data:; "
    "connect-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'"
)
"""Content security policy of a page: nothing from anywhere else."""

ASSETS = {
    "swagger-ui-bundle.js": "text/javascript",
    "swagger-ui.css": "text/css",
    "start.js": "text/javascript",
    "start.css": "text/css",
    "how-to-call.js": "text/javascript",
    "page.css": "text/css",
    "favicon-32x32.png": "image/png",
}
"""Files of the documentation page and their media types."""

LINKS = {
    "documentation": "docs",
    "how_to_call": "docs/how-to-call",
    "description": "openapi.json",
    "limits": "v1/limits",
    "warnings": "v1/warnings",
    "criteria": "v1/criteria",
    "ready": "readyz",
}
"""Relative addresses, so that they lead below the prefix of a proxy too."""

router = APIRouter()

page_router = APIRouter()
"""Routes of the documentation page, which a setting can leave out."""


def page(text: str) -> Response:
    """An HTML page under the page policy."""
    return Response(text, media_type=HTML, headers={"Content-Security-Policy": PAGE_POLICY})


class Index(BaseModel):
    """Where to go on; every link is relative to this document."""

    service: Literal["forebay"] = "forebay"
    version: str
    links: Annotated[dict[str, str], Field(description="Relative addresses", examples=[LINKS])]


@router.get(
    "/",
    operation_id="readIndex",
    summary="Where to go on",
    description="Version, and addresses of the contract, the documentation and the catalogues. A browser is "
    "led to the documentation.",
    tags=["operation"],
    response_class=Response,
    responses={200: {"description": "Links", "model": Index}, **problem_responses((406,))},
)
async def index(request: Request) -> Response:
    has_page = request.app.state.settings.docs
    media_type = negotiate(request.headers.get("accept"), (JSON, HTML) if has_page else (JSON,))
    if media_type == HTML:
        return Response(status_code=307, headers={"Location": LINKS["documentation"]})
    links = {name: link for name, link in LINKS.items() if has_page or not link.startswith("docs")}
    return Response(orjson.dumps(Index(version=__version__, links=links).model_dump()), media_type=JSON)


@page_router.get("/docs", include_in_schema=False)
async def docs() -> Response:
    return page((PAGES / "docs.html").read_text(encoding="utf-8"))


@page_router.get("/docs/how-to-call", include_in_schema=False)
async def how_to_call() -> Response:
    return page((PAGES / "how-to-call.html").read_text(encoding="utf-8"))


@router.get("/docs-assets/{name}", include_in_schema=False)
async def asset(name: str) -> Response:
    if name not in ASSETS:
        raise Problem("not-found", "No such file")
    headers = {"Cache-Control": "public, max-age=86400"}
    return Response((PAGES / name).read_bytes(), media_type=ASSETS[name], headers=headers)


@router.get("/openapi.json", include_in_schema=False)
async def openapi(request: Request) -> Response:
    return Response(request.app.state.openapi_bytes, media_type=JSON)


@router.get(
    "/problems/{code}",
    operation_id="explainProblem",
    summary="What a problem means and what to do about it",
    description="The `type` of every problem leads here: its cause and its cure, as JSON for programs, as a "
    "page for readers.",
    tags=["operation"],
    response_class=Response,
    responses={
        200: {
            "description": "Explanation",
            "content": {
                JSON: {"schema": {"$ref": "#/components/schemas/ProblemExplanation"}},
                HTML: {"schema": {"type": "string"}},
            },
        },
        **problem_responses((404, 406)),
    },
)
async def explain(
    code: Annotated[str, Path(description="Last part of a problem's `type`", examples=["invalid-request"])],
    request: Request,
) -> Response:
    media_type = negotiate(request.headers.get("accept"), (JSON, HTML))
    return explanation(code, media_type)


def explanation(code: str, media_type: str) -> Response:
    """Explanation of one problem code, for a program or for a reader."""
    kind = catalogue().get(code)
    if kind is None:
        raise Problem("not-found", "No such problem code")
    if media_type == HTML:
        text = (PAGES / "problem.html").read_text(encoding="utf-8")
        facts = {
            "code": code,
            "title": kind.title,
            "status": str(kind.status),
            "cause": kind.cause,
            "cure": kind.cure,
        }
        for name, value in facts.items():
            text = text.replace("{" + name + "}", escape(value))
        return page(text)
    document = {
        "type": f"/problems/{code}",
        "title": kind.title,
        "status": kind.status,
        "cause": kind.cause,
        "cure": kind.cure,
    }
    return Response(orjson.dumps(document), media_type=JSON)

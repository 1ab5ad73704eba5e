"""Documents: the OpenAPI document, its page, and a page for every problem."""

from html import escape
from importlib.resources import files

import orjson
from fastapi import APIRouter, Request
from starlette.responses import Response

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
    "page.css": "text/css",
    "favicon-32x32.png": "image/png",
}
"""Files of the documentation page and their media types."""

router = APIRouter()

page_router = APIRouter()
"""Routes of the documentation page, which a setting can leave out."""


def page(text: str) -> Response:
    """An HTML page under the page policy."""
    return Response(text, media_type=HTML, headers={"Content-Security-Policy": PAGE_POLICY})


@page_router.get("/docs", include_in_schema=False)
async def docs() -> Response:
    return page((PAGES / "docs.html").read_text(encoding="utf-8"))


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
async def explain(code: str, request: Request) -> Response:
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
            "explanation": kind.explanation,
        }
        for name, value in facts.items():
            text = text.replace("{" + name + "}", escape(value))
        return page(text)
    document = {
        "type": f"/problems/{code}",
        "title": kind.title,
        "status": kind.status,
        "explanation": kind.explanation,
    }
    return Response(orjson.dumps(document), media_type=JSON)

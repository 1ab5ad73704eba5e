"""How an operation becomes a route: one handler for all, and what its documentation says."""

from collections.abc import Callable, Coroutine
from typing import TYPE_CHECKING, Any

from fastapi import APIRouter, Request
from fastapi.routing import APIRoute
from starlette.responses import Response
from typing_extensions import override

from forebay.api.entity_tag import REVALIDATED, is_known, tag_of
from forebay.api.examples import request_example
from forebay.api.media import JSON, body_type, negotiate
from forebay.api.operation import Job, Operation
from forebay.api.prefer import patience_in
from forebay.api.problems import MEDIA_TYPE, Problem
from forebay.api.schemas.common import Answer, ComputeRequest

if TYPE_CHECKING:
    from forebay.api.work import Workshop

COMPUTE_STATUSES = (400, 401, 406, 408, 413, 415, 422, 429, 500, 503, 504)
"""Statuses of the problems that a compute route can answer with."""

READ_STATUSES = (401, 406, 422, 500)
"""Statuses of the problems that a catalogue can answer with."""

REQUESTS: dict[str, type[ComputeRequest]] = {}
"""Request models that routes refer to, by their name in the OpenAPI document."""

ENVELOPES: dict[str, type[Answer]] = {}
"""Results whose envelopes routes refer to, by the envelope's name in the OpenAPI document."""


class ComputeRoute(APIRoute):
    """A route whose handler reads the body itself, so that the framework has nothing to take apart."""

    @override
    def get_route_handler(self) -> Callable[[Request], Coroutine[Any, Any, Response]]:
        """The handler as it is."""
        return self.endpoint


def serve(router: APIRouter, operation: Operation[Any]) -> None:
    """Add the route of an operation."""

    async def handler(request: Request) -> Response:
        media_type = negotiate(request.headers.get("accept"), operation.media_types)
        headers = request.headers
        given = body_type(headers.get("content-type"), headers.get("content-encoding"), operation.readable)
        tag = await tag_of(operation.path, media_type, given, await request.body())
        if is_known(tag, request.headers.get("if-none-match")):
            return Response(status_code=304, headers={"ETag": tag, **REVALIDATED})
        return await answered(request, Job(operation, await request.body(), media_type, given), tag)

    router.add_api_route(
        operation.path,
        handler,
        methods=["POST"],
        operation_id=operation.operation_id,
        summary=operation.summary,
        description=operation.description,
        tags=[operation.tag],
        responses={200: answer_of(operation), **problem_responses(COMPUTE_STATUSES)},
        response_class=Response,
        openapi_extra={"requestBody": body_of(operation)},
        route_class_override=ComputeRoute,
    )


async def answered(request: Request, job: Job, tag: str) -> Response:
    """Answer of a request, which stops being computed when its client leaves."""

    async def has_left() -> None:
        while (await request.receive())["type"] != "http.disconnect":
            continue

    workshop: Workshop = request.app.state.workshop
    patience = patience_in(request.headers.get("prefer"))
    reply = await workshop.run(job._replace(patience=patience, has_left=has_left))
    applied = {} if patience is None else {"Preference-Applied": f"wait={int(workshop.deadline(patience))}"}
    if isinstance(reply, Problem):
        raise reply
    headers = {"ETag": tag, **REVALIDATED, **applied, **reply.headers}
    return Response(reply.body, media_type=reply.media_type, headers=headers)


def body_of(operation: Operation[Any]) -> dict[str, Any]:
    """Request body as OpenAPI says it."""
    REQUESTS[operation.request.__name__] = operation.request
    reference = {"$ref": f"#/components/schemas/{operation.request.__name__}"}
    example = request_example(operation.operation_id)
    # raw columns are told in the description: generators of typed clients fail on a second kind of body
    return {"required": True, "content": {JSON: {"schema": reference, "example": example}}}


def answer_of(operation: Operation[Any]) -> dict[str, Any]:
    """Answer with status 200 as OpenAPI says it, one entry for each media type."""
    content: dict[str, Any] = {}
    for encoder in operation.encoders:
        is_envelope = encoder.media_type == JSON and operation.result is not None
        schema = envelope_reference(operation.result) if is_envelope else dict(encoder.schema)  # type: ignore[arg-type]
        content[encoder.media_type] = {"schema": schema}
    return {"description": "Computed", "content": content}


def documented(result: type[Answer]) -> dict[str, Any]:
    """Documentation of a GET route that answers with an envelope."""
    return {
        "response_class": Response,
        "responses": {
            200: {"description": "Catalogue", "content": {JSON: {"schema": envelope_reference(result)}}},
            **problem_responses(READ_STATUSES),
        },
    }


def envelope_reference(result: type[Answer]) -> dict[str, str]:
    """Reference to the envelope of a result in the OpenAPI document."""
    ENVELOPES[f"{result.__name__}Envelope"] = result
    return {"$ref": f"#/components/schemas/{result.__name__}Envelope"}


def problem_responses(statuses: tuple[int, ...]) -> dict[int | str, dict[str, Any]]:
    """Problems with these statuses; the document names their codes once all routers are known."""
    schema = {"$ref": "#/components/schemas/Problem"}
    return {
        status: {"description": "Problem", "content": {MEDIA_TYPE: {"schema": schema}}} for status in statuses
    }

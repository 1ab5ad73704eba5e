"""Running the service: liveness, readiness, metrics."""

from typing import Literal

from fastapi import APIRouter, Request
from prometheus_client.exposition import choose_encoder
from pydantic import BaseModel
from starlette.responses import Response

from forebay.api.problems import Problem
from forebay.api.routers.serving import problem_responses

router = APIRouter(tags=["operation"])


class Health(BaseModel):
    """State of the service."""

    status: Literal["pass"] = "pass"


@router.get(
    "/livez",
    operation_id="isAlive",
    summary="Whether the process answers at all",
    description="Answers at once whatever is being computed; no answer means that the process hangs.",
)
async def livez() -> Health:
    return Health()


@router.get(
    "/readyz",
    operation_id="isReady",
    summary="Whether every kernel is compiled and a worker process answers",
    description="Whether to send requests here: 503 with the reason while kernels are prepared, when no "
    "worker process answers, and from SIGTERM on.",
    responses=problem_responses((503,)),
)
async def readyz(request: Request) -> Health:
    detail: str | None = request.app.state.readiness.detail
    if detail is not None:
        raise Problem("not-ready", detail, headers={"Retry-After": "1"})
    return Health()


@router.get(
    "/metrics",
    operation_id="readMetrics",
    summary="Counters for Prometheus",
    description="Requests by route and status, times, queue, workers and why they ended, work done, memos.",
    response_class=Response,
    responses={200: {"description": "Metrics", "content": {"text/plain": {"schema": {"type": "string"}}}}},
)
async def read_metrics(request: Request) -> Response:
    metrics = request.app.state.metrics
    encoder, content_type = choose_encoder(request.headers.get("accept", ""))
    return Response(encoder(metrics.registry), media_type=content_type)

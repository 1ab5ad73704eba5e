"""Every compute operation by its id, and every router."""

from typing import Any

from fastapi import APIRouter

from forebay.api.operation import Operation
from forebay.api.routers import (
    assessment,
    catalogues,
    chart,
    contour,
    documents,
    estimate,
    field,
    influence,
    operation,
    review,
    screen,
    spill,
    stagnation,
    stress,
    submergence,
    withdrawal,
)

OPERATIONS: dict[str, Operation[Any]] = {
    known.operation_id: known
    for known in (
        assessment.ASSESS,
        field.SAMPLE,
        influence.ZONE,
        stagnation.SEARCH,
        contour.INTEGRATE,
        stress.TENSOR,
        withdrawal.TRACE,
        spill.ARRIVALS,
        screen.CHECK,
        submergence.CHECK,
        review.REVIEW,
        estimate.ESTIMATE,
        chart.FLOW_NET,
    )
}
"""Compute operations, as the worker processes look them up."""

ROUTERS: tuple[APIRouter, ...] = (
    assessment.router,
    field.router,
    influence.router,
    stagnation.router,
    contour.router,
    stress.router,
    withdrawal.router,
    spill.router,
    screen.router,
    submergence.router,
    review.router,
    estimate.router,
    chart.router,
    catalogues.router,
    operation.router,
    documents.router,
)
"""Routers in the order of the documentation."""

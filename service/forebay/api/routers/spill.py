"""spill/arrivals: whether and when released water reaches each intake."""

from dataclasses import replace
from math import inf, isinf
from typing import Any

from fastapi import APIRouter

from forebay.api.encoders.envelope_json import ENVELOPE
from forebay.api.encoders.json_lines import json_lines
from forebay.api.limits import Price
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.spill import SpillRelease, SpillRequest, SpillResult
from forebay.flow.arrivals import result as flow
from forebay.flow.arrivals.findings import ArrivalRules
from forebay.trade.applicability.cautions import CAUTIONS
from forebay.trade.applicability.mixing import spill_notices
from forebay.workflows.spill import compute_arrivals

POINT_EVALUATIONS = 3_000
"""Velocities read for a release at a point: two streamlines."""

SPREAD_EVALUATIONS = 300_000
"""Velocities read for any other release at the default tolerance: some 300 streamlines."""

MEANINGS = {
    flow.Outcome.CAPTURED: "arrives at this intake within the horizon",
    flow.Outcome.PASSES: "leaves by a far end, or into an intake not asked for or a doublet",
    flow.Outcome.RECIRCULATES: "goes round on closed streamlines for ever",
    flow.Outcome.STAGNATES: "runs into a stagnation point, which takes for ever",
    flow.Outcome.BEYOND_HORIZON: "arrives at this intake, but after the horizon",
    flow.Outcome.UNRESOLVED: "could not be followed to an end",
}


def compute(request: SpillRequest, _media_type: str) -> Outcome:
    layout, releases = request.flow_layout(), request.flow_releases()
    wanted = request.wanted()
    rules = ArrivalRules(
        intakes=layout.intakes if wanted is None else wanted,
        transects=request.flow_transects(),
        horizon=inf if request.horizon is None else request.horizon,
        tolerance=request.tolerance,
        curve_points=request.curve_points,
    )
    answers = compute_arrivals(layout, releases, rules)
    fields = {
        "releases": [written(answer) for answer in answers],
        "last_share": flow.LAST_SHARE,
        "cautions": CAUTIONS,
    }
    outcome = reviewed(request, layout, fields)
    own = spill_notices(layout, request.site_data(), releases, answers)
    return replace(outcome, warnings=(*own, *outcome.warnings))


def written(answer: flow.ReleaseArrivals) -> dict[str, Any]:
    """Fields of one release."""
    return {
        "name": answer.name,
        "status": answer.status,
        "arrivals": [arrival(row, "intake") for row in answer.arrivals],
        "transects": [arrival(row, "transect") for row in answer.transits],
        "lost_share": answer.lost_share,
        "outcomes": [outcome(row) for row in answer.outcomes],
        "curve": curve(answer.curve),
        "share_error": answer.share_error,
        "time_error": answer.time_error,
        "divide_distance": None if isinf(answer.divide_distance) else answer.divide_distance,
        "wet_share": answer.wet_share,
    }


def arrival(row: flow.Arrival, kind: str) -> dict[str, Any]:
    """Fields of arrivals at one intake or transect."""
    return {
        kind: row.at,
        "share": row.share,
        "first_time": row.first_time,
        "median_time": row.median_time,
        "last_time": row.last_time,
        "end_time": row.end_time,
        "tail": row.tail,
    }


def outcome(row: flow.OutcomeShare) -> dict[str, Any]:
    """Fields of one outcome."""
    return {
        "outcome": row.outcome,
        "to": row.to or None,
        "share": row.share,
        "meaning": MEANINGS[row.outcome],
    }


def curve(course: flow.ArrivalCurve) -> dict[str, Any]:
    """Columns of a curve."""
    by_intake = [{"intake": name, "share": share} for name, share in course.by_intake.items()]
    return {"time": course.time, "share": course.share, "by_intake": by_intake}


def price(request: SpillRequest) -> Price:
    layout = request.layout
    evaluations = sum(evaluations_of(release) for release in request.releases)
    effort = layout.effort + evaluations * max(layout.size, 1)
    columns = 2 + len(layout.elements if request.intakes is None else request.intakes)
    values = len(request.releases) * request.curve_points * columns
    return Price(elements=layout.size, values=values, effort=effort, lengthy=True, path=("releases",))


def evaluations_of(release: SpillRelease) -> int:
    """Velocities read for a release."""
    return SPREAD_EVALUATIONS if release.spread else POINT_EVALUATIONS


ARRIVALS = Operation(
    operation_id="computeArrivals",
    path="/v1/spill/arrivals",
    summary="Whether and when released water reaches each intake",
    description=(
        "Releases at a point, along a line, over a patch or from an outfall, at once or over a duration: the "
        "share that each intake takes, its first, median and last (95 %) arrival, the arrival curve, and "
        "what becomes of the rest: `captured`, `passes`, `recirculates`, `stagnates`, `beyond-horizon`. "
        "Lines count by length, patches by area, outfalls by flux; land is left out. Shares change only "
        "across dividing streamlines, which are traced from the stagnation points; those of patches follow "
        "from what crosses their boundary. Advection by the mean flow alone: no dilution is claimed."
    ),
    request=SpillRequest,
    result=SpillResult,
    compute=compute,
    price=price,
    encoders=(ENVELOPE, *json_lines("releases")),
)

router = APIRouter()
serve(router, ARRIVALS)

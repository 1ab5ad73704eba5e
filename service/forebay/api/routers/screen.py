"""screen/check: approach and sweeping velocity along screen faces against criteria."""

from dataclasses import replace
from math import inf
from typing import Any

import numpy as np
from fastapi import APIRouter

from forebay.api.limits import Price
from forebay.api.names import RepeatedNameError
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.discharges import read_discharge
from forebay.api.schemas.screen import OwnCriterion, ScreenRequest, ScreenResult
from forebay.api.units import UnitSystem
from forebay.trade.applicability.cautions import CAUTIONS
from forebay.trade.criteria import Quantity
from forebay.trade.screens.criteria_choice import listed_limit
from forebay.trade.screens.notices import screen_notices
from forebay.trade.screens.rules import Limit, Verdict, own_limits
from forebay.trade.screens.screen import Pump
from forebay.trade.screens.screen_flow import AS_FAST, ScreenFlow, SideFlow
from forebay.workflows.screen import ScreenCheck, check_screens

EFFORT_A_SCREEN = 100_000
"""Points at which the search for extremes and zeros of one screen reads the velocity, at most."""

COLUMNS = 6
"""Numbers in the answer for one point of a profile, each side once and the governing one again."""

COPIED = (
    "on",
    "basis",
    "length",
    "area",
    "effective_area",
    "open_area",
    "discharge",
    "through_slot",
    "max_approach",
    "min_approach",
    "mean_approach",
    "max_over_mean",
)
"""Fields of a screen that the answer has under the same name."""


def compute(request: ScreenRequest, _media_type: str) -> Outcome:
    refuse_taken_names(request)
    layout, units = request.flow_layout(), request.unit_system
    limits = limits_of(request)
    passing = request.passing_discharge
    checks = check_screens(
        layout,
        tuple(screen.to_trade(units) for screen in request.screens),
        limits,
        passing=None if passing is None else read_discharge(passing, units),
    )
    ratio = ratio_asked(limits)
    fields = {"screens": [written(check, ratio, units) for check in checks], "cautions": CAUTIONS}
    outcome = reviewed(request, layout, fields)
    own = screen_notices(tuple(check.flow for check in checks), limits, layout.depth)
    return replace(outcome, warnings=(*own, *outcome.warnings))


def refuse_taken_names(request: ScreenRequest) -> None:
    """Raise RepeatedNameError if a face has the name of something in the layout, or of another face."""
    taken = {thing.name for thing in (*request.layout.elements, *request.layout.structures)}
    for index, screen in enumerate(request.screens):
        if screen.name is not None and screen.name in taken:
            raise RepeatedNameError("something else has this name", ("screens", index, "name"))
        taken |= {screen.name} if screen.name is not None else set()


def limits_of(request: ScreenRequest) -> tuple[Limit, ...]:
    """Limits of the request in SI, in order."""
    limits: list[Limit] = []
    for index, criterion in enumerate(request.criteria):
        if isinstance(criterion, OwnCriterion):
            limits += own_limits(criterion.name, criterion.limits(request.unit_system), index)
        else:
            limits.append(listed_limit(criterion, index, allow_from_memory=request.allow_from_memory))
    return tuple(limits)


def ratio_asked(limits: tuple[Limit, ...]) -> float:
    """Sweeping over approach velocity that counts as enough."""
    asked = [limit.value for limit in limits if limit.quantity is Quantity.MIN_SWEEPING_RATIO]
    return max(asked, default=AS_FAST)


def written(check: ScreenCheck, ratio: float, units: UnitSystem) -> dict[str, Any]:
    """Fields of one screen."""
    flow, pump = check.flow, check.flow.screen.sweeping
    sweeps = {each: swept(flow, each, ratio) for each in Pump}
    nothing = dict.fromkeys(sweeps[Pump.ON] or {}, None)
    fields = {name: getattr(flow, name) for name in COPIED}
    return fields | {
        "element": flow.screen.name,
        "cleaning": flow.screen.cleaning,
        "end_reach": flow.sides[0].on.end_part * flow.length,
        "profile": profile(flow.governing, flow.screen.count),
        "max_through_slot": flow.max_approach / flow.screen.open_fraction,
        "sweeping": pump,
        "sweeping_ratio_asked": ratio,
        **(sweeps[pump] or nothing),
        "pump_on": sweeps[Pump.ON],
        "pump_off": sweeps[Pump.OFF],
        "without_pump": flow.without_pump,
        "sides": [side_written(side, flow) for side in flow.sides],
        "verdicts": [verdict(found, units) for found in check.verdicts],
    }


def swept(flow: ScreenFlow, pump: Pump, ratio: float) -> dict[str, Any] | None:
    """Sweeping velocity with the pump on or off, None where that flow is unknown."""
    exposure = flow.exposure(pump)
    if exposure is None:
        return None
    return {
        "min_sweeping": flow.min_sweeping(pump),
        "min_sweeping_ratio": flow.min_sweeping_ratio(pump),
        "share_meeting_sweeping": flow.share(pump, lambda side: side.share_swept(ratio)),
        "exposure_time": exposure.time,
        "exposure_error": exposure.error,
        "exposure_status": exposure.status,
    }


def side_written(side: SideFlow, flow: ScreenFlow) -> dict[str, Any]:
    """One side of a screen."""
    lowest, highest = side.on.approach_range
    return {
        "side": side.name,
        "discharge": side.on.mean_approach * flow.length * flow.screen.effective_height,
        "max_approach": highest,
        "max_approach_at": list(side.on.positions(side.on.places_of_largest_approach)),
        "min_approach": lowest,
        "mean_approach": side.on.mean_approach,
        "profile": profile(side, flow.screen.count),
    }


def profile(side: SideFlow, count: int) -> dict[str, Any]:
    """Columns along one side between its end reaches."""
    parts = np.linspace(side.on.end_part, 1.0 - side.on.end_part, count)
    at = side.on.positions(parts)
    return {
        "distance": parts * side.on.face.length,
        "x": at.real,
        "y": at.imag,
        "approach": side.on.approach(parts),
        "sweeping": side.on.along(parts),
        "sweeping_pump_off": np.array([]) if side.off is None else side.off.along(parts),
    }


def verdict(found: Verdict, units: UnitSystem) -> dict[str, Any]:
    """Fields of one verdict, its numbers in the client's unit."""
    limit = found.limit
    return {
        "criterion": limit.criterion,
        "rule": limit.rule,
        "value": converted(found.value, limit.unit, units),
        "limit": converted(limit.value, limit.unit, units),
        "unit": units.code(limit.unit),
        "pass": found.passed,
        "margin": converted(found.margin, limit.unit, units),
        "share_meeting": found.share_meeting,
        "pump": found.pump,
        "status": found.status,
        "reason": found.reason,
        "confidence": limit.confidence,
        "definition": limit.definition,
        "source": limit.source,
    }


def converted(value: float | None, si_unit: str, units: UnitSystem) -> float | None:
    """Number in the client's unit; None where there is none, or no end to it."""
    return None if value is None or abs(value) == inf else units.write(value, si_unit)


def price(request: ScreenRequest) -> Price:
    screens, size = len(request.screens), request.layout.size
    effort = EFFORT_A_SCREEN * screens * max(size, 1) + (1 + 2 * screens) * request.layout.effort
    values = 3 * COLUMNS * request.count
    return Price(request.count, size, values=values, effort=effort, path=("screens",))


CHECK = Operation(
    operation_id="checkScreen",
    path="/v1/screen/check",
    summary="Approach and sweeping velocity along screens against criteria",
    description=(
        "A screen is a line sink of the layout, or a face on a wall with a discharge. Approach velocity is "
        "the velocity into the face through its effective area (length x height x (1 - blocked fraction)), "
        "so that its mean is discharge over effective area; sweeping velocity is the depth-mean velocity "
        "along the face, with the pump on and with it off. Shares of the face are exact, by root finding "
        "and not by counting samples, over the whole face. A line that draws evenly has an infinite "
        "sweeping velocity at its ends: extremes and exposure leave out `end_reach` there. Exposure time "
        "is the integral of ds / sweeping velocity to the bypass, null where the sweeping reverses. "
        "Through-slot and approach velocity are limited separately and never compared. Limits that are "
        "listed from memory need `allow_from_memory`. The regulator decides."
    ),
    request=ScreenRequest,
    result=ScreenResult,
    compute=compute,
    price=price,
)

router = APIRouter()
serve(router, CHECK)

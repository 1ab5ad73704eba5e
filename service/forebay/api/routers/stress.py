"""stress/tensor: stress from velocity gradients, measured velocities, or a layout."""

from collections.abc import Sequence
from dataclasses import asdict
from typing import Any

from fastapi import APIRouter

from forebay.api.limits import Price
from forebay.api.names import refuse_repeated
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.routers.serving import serve
from forebay.api.schemas.stress import StressRequest, StressResult
from forebay.flow.layout import Water
from forebay.flow.stress import Fluid
from forebay.flow.stress_state import StressState
from forebay.trade.applicability.missing import temperature_assumed
from forebay.trade.applicability.site import Readings
from forebay.trade.fluids import newtonian_fluid
from forebay.workflows.layout_stress import compute_layout_stress
from forebay.workflows.review import review_layout
from forebay.workflows.stress import compute_stress

VALUES_A_STATE = 70
"""Numbers in the answer for one state."""

EFFORT_A_STATE = 10_000
"""Work for one state, counted in pairs of element and point."""


def compute(request: StressRequest, _media_type: str) -> Outcome:
    fluid, units, assumed = request.flow_fluid(), request.unit_system, request.assumed_temperature
    notices = () if assumed is None else (temperature_assumed(assumed, ("fluid",), in_layout=False),)
    if request.layout is None or request.at is None:
        refuse_repeated(request.states or (), "states")
        states = tuple(state.to_flow(units) for state in request.states or ())
        return Outcome(all_written(compute_stress(fluid, states), fluid), warnings=notices)
    layout, data = request.layout.to_flow(units), request.layout.site_data(units)
    found = compute_layout_stress(fluid, layout, request.at.positions(units))
    own = request.layout.water.assumed_temperature if request.fluid is None else None
    readings = Readings(has_dissipation=True, assumed_temperature=own)
    notices = (*review_layout(layout, readings, data=data), *notices)
    return Outcome(all_written(found, fluid), layout, data, notices)


def all_written(states: Sequence[StressState], fluid: Water | Fluid) -> dict[str, Any]:
    """Fields of every state, and of the fluid that they are of."""
    known = newtonian_fluid(fluid)
    properties = {
        "dynamic_viscosity": known.dynamic_viscosity,
        "density": known.density,
        "second_viscosity": known.second_viscosity,
    }
    return {"fluid": properties, "states": [written(state) for state in states]}


def written(state: StressState) -> dict[str, Any]:
    """Fields of one state."""
    left_out = {"tractions", "fit", "standard_errors", "is_plane", "mohr_circle", "mohr_circles"}
    fields = {name: getattr(state, name) for name in StressState.__slots__ if name not in left_out}
    tractions = state.tractions
    return fields | {
        "plane_vorticity": state.plane_vorticity,
        "mohr_circle": asdict(state.mohr_circle),
        "mohr_circles": [asdict(circle) for circle in state.mohr_circles],
        "tractions": [
            {"traction": traction, "normal_stress": normal, "shear_stress": shear}
            for traction, normal, shear in zip(
                tractions.traction, tractions.normal_stress, tractions.shear_stress, strict=True
            )
        ],
        "fit": state.fit and asdict(state.fit),
        "standard_errors": state.standard_errors and errors(asdict(state.standard_errors)),
    }


def errors(fields: dict[str, Any]) -> dict[str, Any]:
    """Standard errors under the names of what they belong to."""
    return fields | {"plane_vorticity": fields.pop("vorticity")}


def price(request: StressRequest) -> Price:
    if request.layout is None or request.at is None:
        count = len(request.states or ())
        return Price(count, values=VALUES_A_STATE * count, effort=EFFORT_A_STATE * count, path=("states",))
    count = request.at.count
    values, effort = VALUES_A_STATE * count, EFFORT_A_STATE * count + request.layout.effort
    return Price(count, request.layout.size, values=values, effort=effort, path=("at",))


TENSOR = Operation(
    operation_id="computeStress",
    path="/v1/stress/tensor",
    summary="Strain rate, stress, principal values, dissipation and G",
    description=(
        "From velocity gradients or strain rates (2x2 or 3x3), from velocities measured at three or "
        "more places (least squares, with standard errors), or from a layout at places. Tension is "
        "positive, sigma = -p I + tau. Without `second_viscosity` Stokes' hypothesis holds. "
        "`mean_velocity_gradient` is G = sqrt(dissipation / viscosity) of the mean flow alone."
    ),
    request=StressRequest,
    result=StressResult,
    compute=compute,
    price=price,
)

router = APIRouter()
serve(router, TENSOR)

"""stress/tensor: stress from velocity gradients, measured velocities, or a layout."""

from collections.abc import Sequence
from dataclasses import asdict, replace
from typing import Any

from fastapi import APIRouter

from forebay.api.limits import Price
from forebay.api.names import refuse_repeated
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import reviewed_site
from forebay.api.routers.serving import serve
from forebay.api.schemas.stress import StressRequest, StressResult
from forebay.flow.passage import Passage
from forebay.flow.rheology import GeneralisedFluid
from forebay.flow.stress import Fluid
from forebay.flow.stress_state import StressState
from forebay.trade.applicability.missing import temperature_assumed
from forebay.trade.applicability.site import Readings
from forebay.trade.applicability.thresholds import from_memory
from forebay.trade.bed_shear import SOURCES
from forebay.trade.exposure import THRESHOLDS
from forebay.trade.fluids import AnyFluid, known_fluid
from forebay.workflows.layout_stress import compute_layout_stress
from forebay.workflows.stress import compute_stress
from forebay.workflows.stress_readings import Asked, PlaceReading, StressReadings, read_stresses

FLOC_RANGE = (
    "flocculation 20 to 80 1/s for 20 to 40 min, G t 1e4 to 1e5 (to 1.5e5); fragile alum and iron floc near "
    "40 1/s, lime floc to 80 1/s: open water-treatment textbooks; G: Camp and Stein 1943, J. Boston Soc. "
    "Civ. Eng. 30, 203-221. Meant for the total G, of which the mean flow gives the smaller part"
)
"""What published practice says of G and of its product with time."""

EFFORT_A_WAY = 20_000_000
"""Work to follow one streamline, counted in pairs of element and point."""

VALUES_A_STATE = 70
"""Numbers in the answer for one state."""

EFFORT_A_STATE = 10_000
"""Work for one state, counted in pairs of element and point."""


def compute(request: StressRequest, _media_type: str) -> Outcome:
    fluid, units, assumed = request.flow_fluid(), request.unit_system, request.assumed_temperature
    asked = request.asked()
    notices = () if assumed is None else (temperature_assumed(assumed, ("fluid",), in_layout=False),)
    if request.layout is None or request.at is None:
        refuse_repeated(request.states or (), "states")
        states = tuple(state.to_flow(units) for state in request.states or ())
        computed = compute_stress(fluid, states)
        read = read_stresses(computed, asked)
        notices = (*notices, *from_memory(read.thresholds))
        return Outcome(with_readings(all_written(computed, fluid), read, asked), warnings=notices)
    layout, data = request.layout.converted(units)
    found = compute_layout_stress(fluid, layout, request.at.positions(units), data.opening_radii)
    read = read_stresses(found, asked, layout)
    own = request.layout.water.assumed_temperature if request.fluid is None else None
    readings = Readings(has_dissipation=True, assumed_temperature=own, thresholds=read.thresholds)
    result = with_readings(all_written(found, fluid), read, asked)
    outcome = reviewed_site(request.layout, units, layout, result, readings)
    return replace(outcome, warnings=(*outcome.warnings, *notices))


def all_written(states: Sequence[StressState], fluid: AnyFluid) -> dict[str, Any]:
    """Fields of every state, and of the fluid that they are of."""
    return {"fluid": fluid_written(known_fluid(fluid)), "states": [written(state) for state in states]}


def fluid_written(fluid: Fluid | GeneralisedFluid) -> dict[str, Any]:
    """Properties of a fluid."""
    if isinstance(fluid, Fluid):
        return {"law": "newtonian", **asdict(fluid)}
    unknown = {"dynamic_viscosity": None, "second_viscosity": None}
    return {"law": "herschel-bulkley", **unknown, **asdict(fluid)}


def with_readings(result: dict[str, Any], read: StressReadings, asked: Asked) -> dict[str, Any]:
    """A result with what the trade reads from it."""
    has_shear = asked.friction is not None
    pairs = zip(result["states"], read.places, strict=True)
    result["states"] = [fields | place_written(place, has_shear=has_shear) for fields, place in pairs]
    thresholds = [{**asdict(known), "confidence": str(known.confidence)} for known in read.thresholds]
    openings = [
        {"element": o.element, "threshold": o.threshold.id, "reach": o.reach, "inside": o.inside}
        for o in read.openings
    ]
    if asked.exposure is not None:
        result |= {"thresholds": thresholds, "openings": openings}
    if asked.friction is not None:
        law = asked.friction.law
        coefficient = read.friction_coefficient
        result["friction"] = {"law": law, "friction_coefficient": coefficient, "source": SOURCES[law]}
    if read.passage is not None:
        result["floc"] = floc_written(read.passage)
    return result


def place_written(place: PlaceReading, *, has_shear: bool) -> dict[str, Any]:
    """Readings of one state."""
    exposure = [
        {"threshold": e.threshold.id, "margin": e.margin, "exceeded": e.exceeded} for e in place.exposures
    ]
    fields: dict[str, Any] = {"shear_rate": place.shear_rate}
    if exposure:
        fields["exposure"] = exposure
    if has_shear:
        shear = ("bed_shear", "wall_shear", "friction_velocity", "turbulent_gradient")
        fields |= {name: getattr(place, name) for name in shear}
    return fields


def floc_written(passage: Passage) -> dict[str, Any]:
    """Flocculation along a way."""
    return {
        "status": passage.status,
        "miss": passage.miss,
        "residence_time": passage.time,
        "mean_gradient": passage.mean_gradient,
        "largest_gradient": passage.largest_gradient,
        "camp_number": passage.dose,
        "camp_number_error": passage.dose_error,
        "path": [] if passage.path is None else passage.path,
        "stop": None if passage.end is None else str(passage.end),
        "range": FLOC_RANGE,
    }


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
    effort += 0 if request.floc is None else EFFORT_A_WAY
    values += 3 * count * (0 if request.exposure is None else len(request.exposure) or len(THRESHOLDS))
    return Price(count, request.layout.size, values=values, effort=effort, path=("at",))


TENSOR = Operation(
    operation_id="computeStress",
    path="/v1/stress/tensor",
    summary="Strain rate, stress, principal values, dissipation and G",
    description=(
        "From velocity gradients or strain rates (2x2 or 3x3), from velocities measured at three or "
        "more places (least squares, with standard errors), or from a layout at places. Tension is "
        "positive, sigma = -p I + tau. Without `second_viscosity` Stokes' hypothesis holds. "
        "`mean_velocity_gradient` is G = sqrt(dissipation / viscosity) of the mean flow alone. On request: "
        "exposure of fish, larvae and eggs to the rate of shear, shear on bed and walls by a stated law of "
        "friction, G and its product with the time along a streamline; sludges by power law, Bingham's or "
        "Herschel and Bulkley's law with Papanastasiou's regularisation."
    ),
    request=StressRequest,
    result=StressResult,
    compute=compute,
    price=price,
)

router = APIRouter()
serve(router, TENSOR)

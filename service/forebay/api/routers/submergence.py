"""submergence/check: what rules ask of an inlet under a free surface, its similarity and its swirl."""

from dataclasses import asdict, replace
from typing import Any

from fastapi import APIRouter

from forebay.api.limits import Price
from forebay.api.names import refuse_repeated
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import reviewed_site
from forebay.api.routers.serving import serve
from forebay.api.schemas.submergence import SubmergenceRequest, SubmergenceResult
from forebay.api.units import UnitSystem
from forebay.trade.applicability.cautions import CAUTIONS
from forebay.trade.applicability.missing import temperature_assumed
from forebay.trade.applicability.warning import ApplicabilityWarning
from forebay.trade.submergence.check import InletCheck, RuleCheck
from forebay.trade.submergence.findings import Finding
from forebay.trade.submergence.notices import inlet_notices
from forebay.trade.submergence.scale import ScaleEffect
from forebay.trade.submergence.vortex import Vortex
from forebay.workflows.submergence import Choice, check_submergence

EFFORT_A_RING = 20_000
"""Points at which the integral along one ring reads the velocity, at most."""

VALUES_AN_INLET = 200
"""Numbers in the answer for one inlet."""


def compute(request: SubmergenceRequest, _media_type: str) -> Outcome:
    refuse_repeated(request.inlets, "inlets")
    units = request.unit_system
    layout = None if request.layout is None else request.layout.converted(units)[0]
    inlets = tuple(inlet.to_trade(units, layout, index) for index, inlet in enumerate(request.inlets))
    checks = check_submergence(inlets, request.known_water.to_flow(units), choice(request), layout)
    fields = {"inlets": [written(check, units) for check in checks], "cautions": CAUTIONS}
    notices = (*inlet_notices(checks), *assumed(request))
    if layout is None or request.layout is None:
        return Outcome(fields, warnings=notices)
    outcome = reviewed_site(request.layout, units, layout, fields)
    return replace(outcome, warnings=(*notices, *outcome.warnings))


def choice(request: SubmergenceRequest) -> Choice:
    """What is asked for beside the inlets, in SI."""
    radii = request.ring_radii
    return Choice(
        rules=None if request.rules is None else tuple(request.rules),
        from_memory=request.allow_from_memory,
        scale=request.model_scale,
        gravity=request.acceleration(),
        ring_radii=None if radii is None else tuple(request.unit_system.read(r, "m") for r in sorted(radii)),
    )


def assumed(request: SubmergenceRequest) -> tuple[ApplicabilityWarning, ...]:
    """The note that nobody gave a temperature."""
    temperature = request.known_water.assumed_temperature
    if temperature is None:
        return ()
    in_layout = request.water is None and request.layout is not None
    return (temperature_assumed(temperature, ("water", "temperature"), in_layout=in_layout),)


def written(check: InletCheck, units: UnitSystem) -> dict[str, Any]:
    """Fields of one inlet."""
    inlet, band, governing = check.inlet, check.band, check.governing
    return {
        "name": inlet.name,
        "kind": inlet.kind,
        "discharge": inlet.discharge,
        "area": inlet.area,
        "diameter": inlet.diameter,
        "velocity": inlet.velocity,
        "submergence": inlet.submergence,
        **asdict(check.numbers),
        "rules": [rule(found) for found in check.rules],
        "governing_rule": None if governing is None else governing.rule.id,
        "scale_effects": [effect(found) for found in check.effects],
        "rings": [asdict(ring) for ring in check.rings],
        "circulation": check.circulation,
        "vortex": None if check.vortex is None else whirl(check.vortex),
        "velocity_band": None if band is None else asdict(band) | {"inside": band.contains(inlet.velocity)},
        "physical_model": [finding(found, units) for found in check.findings],
    }


def rule(found: RuleCheck) -> dict[str, Any]:
    """Fields of a rule beside an inlet."""
    return {
        "rule": found.rule.id,
        "formula": found.rule.formula,
        "datum": found.datum,
        "required": found.required,
        "available": found.available,
        "margin": found.margin,
        "pass": found.passed,
        "reason": found.reason,
        "standing": found.rule.standing,
        "note": found.rule.note,
        "source": found.rule.source,
    }


def effect(found: ScaleEffect) -> dict[str, Any]:
    """Fields of a scale effect."""
    threshold = found.threshold
    return {
        "quantity": threshold.quantity,
        "effect": threshold.effect,
        "prototype": found.prototype,
        "model": found.model,
        "threshold": threshold.limit,
        "negligible": found.is_negligible,
        "largest_scale": found.largest_scale,
        "standing": threshold.standing,
        "source": threshold.source,
    }


def whirl(vortex: Vortex) -> dict[str, Any]:
    """Fields of a vortex."""
    copied = (
        "core_radius",
        "critical_core_radius",
        "rankine_dip",
        "burgers_dip",
        "rankine_speed",
        "burgers_speed",
    )
    return {name: getattr(vortex, name) for name in copied} | {
        "core_given": vortex.is_core_given,
        "circulation_number": vortex.number,
        "swirl_angle_deg": vortex.swirl_angle,
        "air_could_be_drawn": vortex.draws_air,
    }


def finding(found: Finding, units: UnitSystem) -> dict[str, Any]:
    """Fields of a reason for a physical model, its numbers in the client's unit."""
    converted = {name: units.write(getattr(found, name), found.unit) for name in ("value", "limit")}
    return asdict(found) | converted | {"unit": units.code(found.unit)}


def price(request: SubmergenceRequest) -> Price:
    count = len(request.inlets)
    values = VALUES_AN_INLET * count
    if request.layout is None:
        return Price(values=values, path=("inlets",))
    rings = count * len(request.ring_radii or (1, 2, 4))
    effort = EFFORT_A_RING * rings * max(request.layout.size, 1) + request.layout.effort
    return Price(elements=request.layout.size, values=values, effort=effort, path=("inlets",))


CHECK = Operation(
    operation_id="checkSubmergence",
    path="/v1/submergence/check",
    summary="Required and available submergence, similarity, swirl",
    description=(
        "For bells, pipes and slots: the submergence that each published rule asks for beside the one "
        "available over that rule's datum; Froude, Reynolds and Weber numbers with the thresholds above "
        "which a model of `model_scale` by Froude's law shows no scale effect; the circulation of the "
        "approach flow on rings round the inlet, exact for the layout, with the dip and core of the vortex "
        "it could feed; what calls for a physical model. Frictionless flow carries the swirl of given "
        "vortices and shear only. Rules differ by a factor near two and count from different levels: look "
        "at each. Those that nobody has read need `allow_from_memory`."
    ),
    request=SubmergenceRequest,
    result=SubmergenceResult,
    compute=compute,
    price=price,
)

router = APIRouter()
serve(router, CHECK)

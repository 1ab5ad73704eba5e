"""Check the submergence of inlets: what rules ask for, similarity, and the swirl of the approach flow."""

from dataclasses import dataclass

from forebay.flow.contour import ContourIntegral, integrate_contour
from forebay.flow.errors import UnknownNameError
from forebay.flow.layout import Layout, LineSink, Sink, Water
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.paths import Contour
from forebay.trade.screens.criteria_choice import CriterionFromMemoryError
from forebay.trade.submergence.check import InletCheck, Ring, RuleCheck
from forebay.trade.submergence.findings import band_of, model_study
from forebay.trade.submergence.inlet import Inlet, similarity_of
from forebay.trade.submergence.rules import (
    RULE_BY_ID,
    RULES,
    Demand,
    Quantities,
    Rule,
    Standing,
    UnknownRuleError,
)
from forebay.trade.submergence.scale import scale_effects
from forebay.trade.submergence.vortex import vortex_of
from forebay.trade.water import STANDARD_GRAVITY, WaterProperties, water_properties

RINGS = (1.0, 2.0, 4.0)
"""Usual radii of rings round an inlet, in its diameters, added to half the length of a line sink [-]."""

ROUNDING = 1e-12
"""Circulation, as a part of the fluxes and circulations that add up to it, that is rounding of zero [-]."""

TIE = 1e-12
"""Shortfall, as a part of what is required, that is rounding [-]."""


@dataclass(frozen=True, slots=True)
class Choice:
    """What is asked for beside the inlets.

    rules : ids, None for all that apply;  from_memory : whether rules and thresholds from memory count
    scale : of a model, length in the prototype over length in the model [-];  gravity : [m/s2]
    ring_radii : of rings round an inlet in the layout [m], None for the usual ones
    """

    rules: tuple[str, ...] | None = None
    from_memory: bool = False
    scale: float = 1.0
    gravity: float = STANDARD_GRAVITY
    ring_radii: tuple[float, ...] | None = None


def check_submergence(
    inlets: tuple[Inlet, ...], water: Water, choice: Choice, layout: Layout | None = None
) -> tuple[InletCheck, ...]:
    """Required and available submergence, similarity, swirl and vortex of inlets, in their order.

    Parameters
    ----------
    inlets : with their discharge and the water over them;  water : temperature and salinity
    choice : rules, model scale, gravity;  layout : the site, for the swirl of inlets that name a sink of it

    Returns
    -------
    One InletCheck for each. The circulation is that given with the inlet, else that of the largest ring in
    the water: in frictionless flow the swirl of the vortices and the shear inside it, and no other.

    Raises
    ------
    UnknownNameError : no sink has the name, path ("inlets", i, "element")
    UnknownRuleError, CriterionFromMemoryError : path ("rules", i)
    LayoutError, WaterRangeError
    """
    rules = _chosen(choice)
    model = None if layout is None else compile_layout(layout)
    properties = water_properties(water.temperature, water.salinity)
    station = sum(inlet.discharge for inlet in inlets)
    rings = [_rings(model, inlet, choice, index) for index, inlet in enumerate(inlets)]
    return tuple(
        _checked(inlet, rules, found, (properties, choice, station))
        for inlet, found in zip(inlets, rings, strict=True)
    )


def _chosen(choice: Choice) -> tuple[Rule, ...]:
    """Rules asked for, or all that are not from memory unless those are wanted."""
    if choice.rules is None:
        return tuple(r for r in RULES if choice.from_memory or r.standing is not Standing.FROM_MEMORY)
    for index, name in enumerate(choice.rules):
        if name not in RULE_BY_ID:
            raise UnknownRuleError("GET /v1/criteria lists every rule", ("rules", index))
        if RULE_BY_ID[name].standing is Standing.FROM_MEMORY and not choice.from_memory:
            raise CriterionFromMemoryError(
                "nobody has read this rule; set allow_from_memory to use it all the same", ("rules", index)
            )
    return tuple(RULE_BY_ID[name] for name in dict.fromkeys(choice.rules))


def _rings(model: FlowModel | None, inlet: Inlet, choice: Choice, index: int) -> tuple[Ring, ...]:
    """Circulation round the sink that an inlet is, ring by ring; none without a sink."""
    if inlet.element is None:
        return ()
    sinks = () if model is None else model.layout.elements
    sink = next((e for e in sinks if isinstance(e, Sink | LineSink) and e.name == inlet.element), None)
    if sink is None or model is None:
        raise UnknownNameError("No sink or line sink has this name.", ("inlets", index, "element"))
    if isinstance(sink, LineSink):
        centre, inner = 0.5 * (sink.start + sink.end), 0.5 * abs(sink.end - sink.start)
    else:
        centre, inner = sink.at, 0.0
    usual = tuple(inner + factor * inlet.diameter for factor in RINGS)
    return tuple(_ring(model, centre, radius) for radius in choice.ring_radii or usual)


def _ring(model: FlowModel, centre: complex, radius: float) -> Ring:
    found = integrate_contour(model, Contour.circle("ring", centre, radius))
    circulation = found.circulation
    if circulation is not None and abs(circulation) <= ROUNDING * _sizes(found):
        circulation = 0.0
    return Ring(radius, circulation, found.status)


def _sizes(found: ContourIntegral) -> float:
    """Sum of what the owners add, sign left out: the integral's rounding is a part of it [m2/s]."""
    return sum(abs(complex(share.circulation, share.flux)) for share in found.by_element)


def _checked(
    inlet: Inlet,
    rules: tuple[Rule, ...],
    rings: tuple[Ring, ...],
    about: tuple[WaterProperties, Choice, float],
) -> InletCheck:
    """One inlet; `about` is the water, what is asked for, and the discharge of all inlets [m3/s]."""
    water, choice, station = about
    circulation = _circulation(inlet, rings)
    vortex = vortex_of(inlet, circulation, water, choice.gravity) if circulation else None
    numbers = similarity_of(inlet, water, choice.gravity)
    demand = Demand(choice.gravity, circulation)
    checks = tuple(_beside(rule, inlet, demand) for rule in rules if inlet.kind in rule.applies_to)
    short = {c.rule.id: (c.available, c.required) for c in checks if c.required is not None and not c.passed}
    findings = model_study(inlet, short, vortex, station)
    return InletCheck(
        inlet,
        numbers,
        checks,
        scale_effects(numbers, choice.scale, from_memory=choice.from_memory),
        rings,
        circulation,
        vortex,
        band_of(inlet, from_memory=choice.from_memory),
        tuple(f for f in findings if choice.from_memory or f.standing is not Standing.FROM_MEMORY),
    )


def _circulation(inlet: Inlet, rings: tuple[Ring, ...]) -> float | None:
    """That given with the inlet, else that of the largest ring in the water [m2/s]."""
    if inlet.circulation is not None:
        return inlet.circulation
    in_water = [ring for ring in rings if ring.circulation is not None]
    return max(in_water, key=lambda ring: ring.radius).circulation if in_water else None


def _beside(rule: Rule, inlet: Inlet, demand: Demand) -> RuleCheck:
    """One rule beside an inlet."""
    datum = rule.datum_of(inlet)
    available = inlet.available(datum)
    if rule.needs is Quantities.CIRCULATION and not demand.circulation:
        known = demand.circulation is not None
        reason = "frictionless flow has no circulation here" if known else "the circulation is not known"
        return RuleCheck(rule, datum, None, available, None, reason)
    required = rule.required(inlet, demand)
    return RuleCheck(rule, datum, required, available, available >= required * (1.0 - TIE))

"""Judging a screen: each limit against the number that it is put on, and never against another kind."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from enum import StrEnum
from math import inf

from forebay.trade.criteria import DEFINITIONS, SI_UNITS, Cleaned, Criterion, Quantity
from forebay.trade.screens.face_flow import TIE
from forebay.trade.screens.screen import Pump
from forebay.trade.screens.screen_flow import ScreenFlow

OWN = "own"
"""Confidence of a limit that the request brings along."""

OWN_SOURCE = "stated in the request"


class VerdictStatus(StrEnum):
    """Whether a limit was judged."""

    JUDGED = "judged"
    NOT_APPLICABLE = "not-applicable"
    NOT_GIVEN = "not-given"


@dataclass(frozen=True, slots=True)
class Limit:
    """One limit to judge a screen by.

    criterion : id or name;  quantity : what is limited;  value : the limit in SI
    source, confidence, definition : where it is from, how well it is known, what it means
    cleaned : which screens it is for;  group : limits of one group belong together
    index : position among the criteria asked for
    """

    criterion: str
    quantity: Quantity
    value: float
    source: str
    confidence: str
    definition: str
    cleaned: Cleaned = Cleaned.ANY
    group: str = ""
    index: int = 0

    @property
    def unit(self) -> str:
        """SI unit."""
        return SI_UNITS[self.quantity]

    @property
    def rule(self) -> str:
        """Name of the quantity as a field."""
        return self.quantity.value.replace("-", "_")

    @property
    def is_upper(self) -> bool:
        """Whether the value has to stay below."""
        return self.quantity.value.startswith("max")


@dataclass(frozen=True, slots=True)
class Verdict:
    """What one limit says of one screen.

    value : number compared, None if there is none, inf where time has no end
    margin : distance inside the limit, negative beyond it
    share_meeting : part of the face that meets it [-], None for limits that no place can meet alone
    pump : which sweeping velocity was judged;  reason : why not judged, or what the value is relative to
    """

    limit: Limit
    value: float | None
    passed: bool | None
    margin: float | None
    share_meeting: float | None
    pump: Pump | None
    status: VerdictStatus
    reason: str = ""


@dataclass(frozen=True, slots=True)
class Reading:
    """Number that a limit is put on; None where the request or the flow does not have it."""

    value: float | None
    share_meeting: float | None = None
    pump: Pump | None = None
    reason: str = ""


def limit_of(criterion: Criterion, index: int = 0) -> Limit:
    """Limit of a record of the catalogue, at a position among the criteria asked for."""
    return Limit(
        criterion.id,
        criterion.quantity,
        criterion.limit_si,
        criterion.source,
        criterion.confidence.value,
        criterion.definition,
        criterion.cleaned,
        f"{criterion.body}, {criterion.document}",
        index,
    )


def own_limits(name: str, values: Mapping[Quantity, float], index: int = 0) -> tuple[Limit, ...]:
    """Limits in SI that a request brings along under a name of its own."""
    return tuple(
        Limit(
            name, quantity, value, OWN_SOURCE, OWN, DEFINITIONS[quantity], group=f"own {index}", index=index
        )
        for quantity, value in values.items()
    )


def judge(
    flow: ScreenFlow, limits: tuple[Limit, ...], *, passing: float | None = None
) -> tuple[Verdict, ...]:
    """Verdicts of limits in their order; `passing` is the flow of the river or tide [m3/s], if known."""
    return tuple(_judged(flow, limit, limits, passing) for limit in limits)


def _judged(flow: ScreenFlow, limit: Limit, limits: tuple[Limit, ...], passing: float | None) -> Verdict:
    if limit.cleaned not in {Cleaned.ANY, Cleaned(flow.screen.cleaning.value)}:
        reason = f"the limit is for {limit.cleaned.value} cleaning"
        return Verdict(limit, None, None, None, None, None, VerdictStatus.NOT_APPLICABLE, reason)
    reading = _read(flow, limit, limits, passing)
    if reading.value is None:
        return Verdict(limit, None, None, None, None, reading.pump, VerdictStatus.NOT_GIVEN, reading.reason)
    inside = limit.value - reading.value if limit.is_upper else reading.value - limit.value
    return Verdict(
        limit,
        reading.value,
        inside >= -TIE * limit.value,
        inside,
        reading.share_meeting,
        reading.pump,
        VerdictStatus.JUDGED,
        reading.reason,
    )


def _read(flow: ScreenFlow, limit: Limit, limits: tuple[Limit, ...], passing: float | None) -> Reading:
    match limit.quantity:
        case Quantity.MAX_NONUNIFORMITY:
            return _nonuniformity(flow, limit, limits)
        case Quantity.MAX_FLOW_SHARE:
            if passing is None:
                return Reading(None, reason="passing_discharge is not given")
            return Reading(flow.discharge / passing)
        case _:
            return READINGS[limit.quantity](flow, limit.value)


def _approach(flow: ScreenFlow, limit: float) -> Reading:
    return Reading(flow.max_approach, flow.share(Pump.ON, lambda side: side.share_approach_within(limit)))


def _through_slot(flow: ScreenFlow, _limit: float) -> Reading:
    return Reading(flow.through_slot, reason="discharge over open area of the effective area")


def _sweeping(flow: ScreenFlow, limit: float) -> Reading:
    share = flow.share(Pump.OFF, lambda side: side.share_sweeping_above(limit))
    return Reading(flow.min_sweeping(Pump.OFF), share, Pump.OFF, flow.without_pump)


def _ratio(flow: ScreenFlow, limit: float) -> Reading:
    pump = flow.screen.sweeping
    share = flow.share(pump, lambda side: side.share_swept(limit))
    return Reading(flow.min_sweeping_ratio(pump), share, pump, _why(flow, pump))


def _exposure(flow: ScreenFlow, _limit: float) -> Reading:
    pump = flow.screen.sweeping
    exposure = flow.exposure(pump)
    if exposure is None:
        return Reading(None, pump=pump, reason=_why(flow, pump))
    return Reading(exposure.time, pump=pump, reason="" if exposure.time < inf else exposure.status.value)


def _why(flow: ScreenFlow, pump: Pump) -> str:
    return flow.without_pump if pump is Pump.OFF else ""


def _opening(flow: ScreenFlow, _limit: float) -> Reading:
    return Reading(flow.screen.opening, reason="" if flow.screen.opening else "opening is not given")


def _open_fraction(flow: ScreenFlow, _limit: float) -> Reading:
    return Reading(flow.screen.open_fraction)


def _clearance(flow: ScreenFlow, _limit: float) -> Reading:
    known = flow.screen.clearance is not None
    return Reading(flow.screen.clearance, reason="" if known else "clearance is not given")


def _discharge(flow: ScreenFlow, _limit: float) -> Reading:
    return Reading(flow.discharge, reason="scope of the document: above it the document does not apply")


def _nonuniformity(flow: ScreenFlow, limit: Limit, limits: tuple[Limit, ...]) -> Reading:
    """Excess over the approach limit of the same document or own criterion, else over the mean."""
    related = [
        other.value
        for other in limits
        if other.group == limit.group
        and other.quantity is Quantity.MAX_APPROACH
        and other.cleaned in {Cleaned.ANY, Cleaned(flow.screen.cleaning.value)}
    ]
    reference = min(related, default=flow.governing.on.mean_approach)
    if reference <= 0.0:
        return Reading(None, reason="no water arrives on the whole")
    allowed = (1.0 + limit.value) * reference
    share = flow.share(Pump.ON, lambda side: side.share_approach_within(allowed))
    what = "the approach limit that goes with it" if related else "the mean approach velocity"
    return Reading(flow.max_approach / reference - 1.0, share, reason=f"excess over {what}")


READINGS: dict[Quantity, Callable[[ScreenFlow, float], Reading]] = {
    Quantity.MAX_APPROACH: _approach,
    Quantity.MAX_THROUGH_SLOT: _through_slot,
    Quantity.MIN_SWEEPING: _sweeping,
    Quantity.MIN_SWEEPING_RATIO: _ratio,
    Quantity.MAX_EXPOSURE_TIME: _exposure,
    Quantity.MAX_OPENING: _opening,
    Quantity.MIN_OPEN_FRACTION: _open_fraction,
    Quantity.MIN_CLEARANCE: _clearance,
    Quantity.MAX_DISCHARGE: _discharge,
}
"""How to read what a limit is put on, for those that depend on the screen and the limit alone."""

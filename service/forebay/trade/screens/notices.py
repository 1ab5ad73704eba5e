"""What has to be said with the numbers of a screen."""

from collections.abc import Iterator

from forebay.flow.errors import Path
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind
from forebay.trade.criteria import Confidence
from forebay.trade.screens.rules import Limit
from forebay.trade.screens.screen_flow import Basis, ScreenFlow

CONVENTION = "convention of this service"

REGULATOR_DECIDES = WarningKind(
    code="regulator-decides",
    severity=Severity.CAUTION,
    meaning="verdicts are a screening against stated limits; the regulator's text, site and species decide",
    threshold="always with verdicts",
    formula="none",
    source=CONVENTION,
)

CRITERION_FROM_MEMORY = WarningKind(
    code="criterion-from-memory",
    severity=Severity.CAUTION,
    meaning="the limit is listed from memory: nobody has read it in its document",
    threshold="a limit or rule marked from-memory is used",
    formula="none",
    source=CONVENTION,
)

FLUX_TAKEN_AS_EVEN = WarningKind(
    code="screen-flux-taken-as-even",
    severity=Severity.NOTE,
    meaning="a line sink draws evenly along its length; a screen does so only with baffles behind it",
    threshold="always with a screen",
    formula="flux per length = discharge / length",
    source="property of a uniform line sink; uneven screens are balanced by baffles in practice (customary)",
)

SCREEN_HIGHER_THAN_WATER = WarningKind(
    code="screen-higher-than-water",
    severity=Severity.CAUTION,
    meaning="the wetted height of the screen exceeds the mean depth, which only a leaning face can have",
    threshold="height > depth",
    formula="effective area = length x height x (1 - blocked fraction), at the lowest water",
    source="geometry",
    unit="m",
)

WATER_LEAVES_SCREEN = WarningKind(
    code="water-leaves-screen",
    severity=Severity.CAUTION,
    meaning="water flows out through part of the face: a screen of one line in a cross-current is no barrier",
    threshold="approach velocity < 0",
    formula="approach velocity by side of the line sink",
    source="continuity across a line sink",
    unit="m/s",
)

DRAW_LEFT_OUT = WarningKind(
    code="screen-draw-left-out",
    severity=Severity.NOTE,
    meaning=(
        "the face spans several edges of its wall and cannot draw in the model: its approach velocity is "
        "discharge over area, and its own draw is not in the sweeping velocity"
    ),
    threshold="a face over more than one edge of an outline or of a surveyed shore",
    formula="approach = discharge / effective area",
    source="definition of the calculated approach velocity in pump-intake criteria",
)

SCREEN_KINDS = (
    REGULATOR_DECIDES,
    CRITERION_FROM_MEMORY,
    FLUX_TAKEN_AS_EVEN,
    SCREEN_HIGHER_THAN_WATER,
    WATER_LEAVES_SCREEN,
    DRAW_LEFT_OUT,
)
"""Every kind of warning that screens raise."""


def screen_notices(
    flows: tuple[ScreenFlow, ...], limits: tuple[Limit, ...], depth: float
) -> tuple[ApplicabilityWarning, ...]:
    """Warnings of a check of screens; paths start at the request. depth : of the water [m]."""
    return (
        REGULATOR_DECIDES.raised_in_request(
            "Verdicts are a screening: the regulator and licensed engineers decide.", ()
        ),
        *remembered(limits),
        *(notice for index, flow in enumerate(flows) for notice in _of_screen(flow, index, depth)),
    )


def remembered(limits: tuple[Limit, ...]) -> Iterator[ApplicabilityWarning]:
    """A caution for each limit from memory."""
    for limit in limits:
        if limit.confidence == Confidence.FROM_MEMORY:
            message = f"{limit.criterion!r} is listed from memory: read {limit.source} before relying on it."
            yield CRITERION_FROM_MEMORY.raised_in_request(message, ("criteria", limit.index))


def _of_screen(flow: ScreenFlow, index: int, depth: float) -> Iterator[ApplicabilityWarning]:
    path: Path = ("screens", index)
    name, height = flow.screen.name, flow.screen.height
    if flow.basis is Basis.CALCULATED:
        yield DRAW_LEFT_OUT.raised_in_request(f"{name!r}: {DRAW_LEFT_OUT.meaning}.", path)
    else:
        yield FLUX_TAKEN_AS_EVEN.raised_in_request(f"{name!r}: {FLUX_TAKEN_AS_EVEN.meaning}.", path)
    if height > depth:
        message = f"{name!r} is {height:g} m high in water of {depth:g} m: right only for a leaning face."
        yield SCREEN_HIGHER_THAN_WATER.raised_in_request(
            message, (*path, "height"), value=height, limit=depth
        )
    if flow.min_approach < 0.0:
        message = f"Water leaves through part of {name!r}, at up to {-flow.min_approach:.3g} m/s."
        yield WATER_LEAVES_SCREEN.raised_in_request(message, path, value=flow.min_approach, limit=0.0)

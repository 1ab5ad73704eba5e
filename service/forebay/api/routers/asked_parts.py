"""Parts of an assessment that have routes of their own, asked and answered in the words of those routes."""

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, replace
from functools import partial
from typing import Any, NamedTuple

from forebay.api.limits import Price
from forebay.api.media import JSON
from forebay.api.outcome import Outcome
from forebay.api.routers import screen, spill, stress, submergence
from forebay.api.schemas.assessment import AssessmentRequest, PartName
from forebay.api.schemas.common import ComputeRequest
from forebay.api.schemas.screen import ScreenRequest
from forebay.api.schemas.spill import SpillRequest
from forebay.api.schemas.stress import StressQuestions, StressRequest
from forebay.api.schemas.submergence import SubmergenceRequest
from forebay.api.warnings import Notice
from forebay.flow.errors import Path
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity
from forebay.workflows.assessment import NO_POINTS
from forebay.workflows.parts import Part, attempt


class Route(NamedTuple):
    """What answers a part: the route's request, its computation, its price."""

    request: type[ComputeRequest]
    compute: Callable[[Any, str], Outcome]
    price: Callable[[Any], Price]


ROUTES: Mapping[PartName, Route] = {
    PartName.STRESS: Route(StressRequest, stress.compute, stress.price),
    PartName.SPILL: Route(SpillRequest, spill.compute, spill.price),
    PartName.SCREEN: Route(ScreenRequest, screen.compute, screen.price),
    PartName.SUBMERGENCE: Route(SubmergenceRequest, submergence.compute, submergence.price),
}
"""The routes by the part that each answers; a part has the name of the member that asks for it."""


@dataclass(frozen=True, slots=True)
class Asked:
    """Answers of the parts that have routes of their own."""

    parts: Mapping[PartName, Part[Outcome]]

    def result(self, name: PartName) -> dict[str, Any] | None:
        """Fields of a part in SI, None without an answer."""
        outcome = self.parts[name].answer
        return None if outcome is None else outcome.result

    def notices(self) -> list[Notice]:
        """Warnings of all parts, their paths leading from the assessment's request."""
        return [
            placed(notice, name)
            for name, part in self.parts.items()
            if part.answer is not None
            for notice in part.answer.warnings
        ]


def ask_routes(request: AssessmentRequest) -> Asked:
    """Answer of every route that a request asks; one that fails does not sink the others."""
    return Asked({name: ask(request, name, route) for name, route in ROUTES.items()})


def ask(request: AssessmentRequest, name: PartName, route: Route) -> Part[Outcome]:
    """Answer of one route."""
    asked = as_asked(request, name, route)
    if asked is None:
        return Part.not_asked(NO_POINTS if name is PartName.STRESS else f"The request has no `{name}`")
    return attempt(partial(route.compute, asked, JSON))


def as_asked(request: AssessmentRequest, name: PartName, route: Route) -> ComputeRequest | None:
    """Request of a route: what is asked of it, with the assessment's layout and units.

    Stress is asked for wherever the field is, and needs no questions of its own.
    """
    questions, places = getattr(request, name), {}
    if name is PartName.STRESS and request.at is not None:
        questions, places = questions or StressQuestions(), {"at": request.at, "states": None}
    if questions is None or (name is PartName.STRESS and request.at is None):
        return None
    fields: dict[str, Any] = dict(questions) | places
    fields |= {"layout": request.layout, "unit_system": request.unit_system, "digits": request.digits}
    return route.request.model_construct(**fields)


def prices(request: AssessmentRequest) -> list[Price]:
    """Prices of the routes that a request asks."""
    asked = ((route, as_asked(request, name, route)) for name, route in ROUTES.items())
    return [route.price(body) for route, body in asked if body is not None]


def placed(notice: Notice, name: PartName) -> Notice:
    """A notice whose path leads from the assessment's request."""
    if notice.in_layout or not isinstance(notice, ApplicabilityWarning):
        return notice
    return replace(notice, path=within(name, notice.path))


def within(name: PartName, path: Path) -> Path:
    """Path from the assessment's request of one from a part's."""
    return path if path[:1] == ("layout",) else (name.value, *path)


def each_once(notices: Iterable[Notice]) -> tuple[Notice, ...]:
    """Notices without repetitions, the gravest first: parts review the same layout."""
    ranks = {severity: rank for rank, severity in enumerate(reversed(Severity))}
    return tuple(sorted(dict.fromkeys(notices), key=lambda notice: ranks[Severity(notice.severity)]))

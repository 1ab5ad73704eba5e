"""One compute route as data, and the whole way from a body in bytes to an answer in bytes.

The way is a plain function of its arguments, so that it runs in the event loop, in a thread or in a process.
"""

from collections.abc import Callable
from dataclasses import dataclass, field
from time import perf_counter
from typing import Any, Generic, NamedTuple, TypeVar

from pydantic import ValidationError

from forebay.api import envelope
from forebay.api.csv_table import MEDIA_TYPE as CSV_SENT
from forebay.api.csv_table import encode_csv
from forebay.api.limits import Limits, Price
from forebay.api.media import CSV, JSON
from forebay.api.problems import Problem
from forebay.api.refusals import from_flow
from forebay.api.schemas.common import Answer, ComputeRequest
from forebay.api.units import UnitSystem
from forebay.api.validation import problem_of
from forebay.api.warnings import Notice
from forebay.flow.errors import FlowError
from forebay.flow.layout import Layout
from forebay.trade.applicability.site import SiteData

R = TypeVar("R", bound=ComputeRequest)


@dataclass(frozen=True, slots=True)
class Outcome:
    """What a computation hands back.

    result : fields of the answer in SI; complex values are positions
    layout : the layout it was computed for;  data : what else is known of the site
    warnings : where the numbers should not be trusted
    picture : encoded picture instead of a result
    """

    result: dict[str, Any] = field(default_factory=dict)
    layout: Layout | None = None
    data: SiteData | None = None
    warnings: tuple[Notice, ...] = ()
    picture: bytes | None = None

    @property
    def site(self) -> tuple[Layout, SiteData | None] | None:
        """What the digest is of."""
        return None if self.layout is None else (self.layout, self.data)


@dataclass(frozen=True)
class Operation(Generic[R]):
    """A compute route: its names, its schemas, its computation, its price."""

    operation_id: str
    path: str
    summary: str
    description: str
    request: type[R]
    result: type[Answer] | None
    compute: Callable[[R, str], Outcome]
    price: Callable[[R], Price]
    media_types: tuple[str, ...] = (JSON,)

    @property
    def tag(self) -> str:
        """Group in the documentation: the family in the path."""
        return self.path.split("/")[2]


class Reply(NamedTuple):
    """An answer on its way out."""

    media_type: str
    body: bytes
    headers: dict[str, str]


class Deferred(NamedTuple):
    """The request is right but too large for where it was tried."""


def perform(
    operation: Operation[Any], body: bytes, media_type: str, *, limits: Limits, allowance: int | None = None
) -> Reply | Problem | Deferred:
    """Answer of a body, the problem that stands in its way, or Deferred if its work exceeds `allowance`."""
    started, system = perf_counter(), UnitSystem.SI
    try:
        request = operation.request.model_validate_json(body)
        system = request.unit_system
        price = operation.price(request)
        limits.check(price)
        if allowance is not None and (price.lengthy or price.work > allowance):
            return Deferred()
        parsed = perf_counter()
        outcome = operation.compute(request, media_type)
        computed = perf_counter()
        reply = _encode(operation, request, outcome, media_type)
    except ValidationError as error:
        return problem_of(error)
    except FlowError as error:
        return from_flow(error, system)
    times = {"parse": parsed - started, "compute": computed - parsed, "encode": perf_counter() - computed}
    timing = ", ".join(f"{name};dur={1e3 * seconds:.2f}" for name, seconds in times.items())
    return reply._replace(headers={**reply.headers, "Server-Timing": timing})


def _encode(operation: Operation[Any], request: ComputeRequest, outcome: Outcome, media_type: str) -> Reply:
    if outcome.picture is not None:
        codes = ", ".join(dict.fromkeys(notice.code for notice in outcome.warnings))
        return Reply(media_type, outcome.picture, {"Forebay-Warnings": codes} if codes else {})
    if operation.result is None:
        raise TypeError(f"{operation.operation_id} gave neither a result nor a picture")
    document = envelope.document(
        operation.result, outcome.result, request=request, site=outcome.site, notices=outcome.warnings
    )
    if media_type == CSV:
        return Reply(CSV_SENT, *encode_csv(document))
    return Reply(JSON, envelope.encode(document), {})

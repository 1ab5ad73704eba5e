"""Request and answer of estimate: what a request would cost."""

from enum import StrEnum
from typing import Annotated, Any

from pydantic import Field

from forebay.api.schemas.catalogues import LimitsResult
from forebay.api.schemas.common import Answer, ComputeRequest
from forebay.api.schemas.quantities import BytesValue, CountValue, TimeValue


class Verdict(StrEnum):
    """What would become of a request."""

    AT_ONCE = "at-once"
    QUEUED = "queued"
    REFUSED = "refused"


class EstimateRequest(ComputeRequest):
    """A request and where it would go."""

    route: Annotated[
        str,
        Field(
            max_length=80,
            description="Address of a compute route, without a proxy's prefix",
            examples=["/v1/field/sample"],
        ),
    ]
    request: Annotated[
        dict[str, Any],
        Field(description="Body that would be sent there", examples=[{"layout": {"depth": 4.0}}]),
    ]


class EstimateResult(Answer):
    """The price of a request, estimated before any work, against the limits."""

    verdict: Annotated[
        Verdict,
        Field(
            description=(
                "`at-once`: answered without a worker process; `queued`: given to one, for which it may have "
                "to wait; `refused`: over a limit, `reason` says which"
            )
        ),
    ]
    reason: Annotated[str | None, Field(description="Why it would be refused")]
    points: Annotated[CountValue, Field(description="Points asked for")]
    elements: Annotated[CountValue, Field(description="Elements and structures of the layout")]
    pairs: Annotated[CountValue, Field(description="Evaluations of one element at one point")]
    values: Annotated[
        CountValue, Field(description="Numbers in the answer, null if that is not known before")
    ]
    bytes: Annotated[BytesValue, Field(description="Rough size of the answer in JSON; null likewise")]
    seconds: Annotated[
        TimeValue,
        Field(description="Rough time of the work; null where it depends on what the flow turns out to be"),
    ]
    limits: Annotated[LimitsResult, Field(description="As GET /v1/limits")]

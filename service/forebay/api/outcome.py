"""What a computation hands back, and what an encoder makes of it."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any, NamedTuple

from forebay.api.expense import Expense
from forebay.api.schemas.common import ComputeRequest
from forebay.api.warnings import Notice
from forebay.flow.layout import Layout
from forebay.trade.applicability.site import SiteData


@dataclass(frozen=True, slots=True)
class Outcome:
    """What a computation hands back.

    result : fields of the answer in SI; complex values are positions
    layout : the layout it was computed for;  data : what else is known of the site
    warnings : where the numbers should not be trusted
    boundary : what the envelope says of walls that were solved for, in SI; None without any
    picture : encoded picture instead of a result;  pictures : those that go with a result, by caption
    """

    result: dict[str, Any] = field(default_factory=dict)
    layout: Layout | None = None
    data: SiteData | None = None
    warnings: tuple[Notice, ...] = ()
    boundary: dict[str, Any] | None = None
    picture: bytes | None = None
    pictures: Mapping[str, bytes] = field(default_factory=dict)

    @property
    def site(self) -> tuple[Layout, SiteData | None] | None:
        """What the digest is of."""
        return None if self.layout is None else (self.layout, self.data)


class Answered(NamedTuple):
    """What an encoder is given.

    request : as validated
    outcome : in SI
    document : the JSON envelope, in the client's units and digits; columns are arrays with NaN for null
    """

    request: ComputeRequest
    outcome: Outcome
    document: dict[str, Any]


class Reply(NamedTuple):
    """An answer in bytes.

    media_type : as sent, with its parameters
    expense : what it has cost, None if nobody has counted it
    """

    media_type: str
    body: bytes
    headers: dict[str, str]
    expense: Expense | None = None


def always() -> bool:
    """An encoder that needs nothing beyond the dependencies."""
    return True


@dataclass(frozen=True, slots=True)
class Encoder:
    """One media type that an operation can answer with.

    media_type : as Accept names it, without parameters
    encode : from an answer to bytes; a Problem that it raises is the answer
    description : what the bytes hold, for the documentation
    schema : of the answer in the OpenAPI document
    is_available : whether its optional dependency is there
    """

    media_type: str
    encode: Callable[[Answered], Reply]
    description: str
    schema: Mapping[str, Any] = field(default_factory=dict)
    is_available: Callable[[], bool] = always


def warning_header(answered: Answered) -> dict[str, str]:
    """Codes of the warnings, for media types that have no room for them."""
    codes = ", ".join(dict.fromkeys(notice.code for notice in answered.outcome.warnings))
    return {"Forebay-Warnings": codes} if codes else {}

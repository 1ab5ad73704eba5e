"""Problems (RFC 9457): every way a request can fail, its status, and its body."""

from collections.abc import Mapping
from http import HTTPStatus
from types import MappingProxyType
from typing import Any, NamedTuple

from typing_extensions import override

from forebay.api.cures import CURES
from forebay.flow.errors import FlowError, Path

MEDIA_TYPE = "application/problem+json"

MOST_ERRORS = 20
"""Errors that one problem lists at most."""

LONGEST_TOKEN = 80
"""Characters of a member name that a pointer repeats; a longer name ends the pointer at its parent."""

API_NAMES = {"start": "from", "end": "to", "interior_angle": "interior_angle_deg"}
"""Names of layout fields where the API's differ from those of the flow."""


class ProblemKind(NamedTuple):
    """One kind of problem: status, title, what caused it, and what a client can do about it."""

    status: int
    title: str
    cause: str
    cure: str


HTTP_PROBLEMS = {
    "malformed-json": ProblemKind(
        400,
        "The body is not JSON",
        "The body is truncated, nested too deep, or not UTF-8 JSON.",
        "Send valid JSON; `detail` says where it ends.",
    ),
    "malformed-columns": ProblemKind(
        400,
        "The body is not a line of JSON and columns",
        "As application/octet-stream a body is one line of JSON, a line feed, all x and all y as float64, "
        "little-endian; this one is not.",
        "Send whole columns of equal length after the line, or application/json.",
    ),
    "token-missing": ProblemKind(
        401,
        "A token is asked for",
        "The service has been given tokens, and the request carries none of them.",
        "Send `Authorization: Bearer` with one of the tokens; ask those who run the service for one.",
    ),
    "not-found": ProblemKind(
        404,
        "No such resource",
        "The address names nothing here.",
        "Take an address from /openapi.json, which lists every route.",
    ),
    "method-not-allowed": ProblemKind(
        405,
        "Method not allowed",
        "The route exists but not with this method.",
        "Use one of the methods in the Allow header.",
    ),
    "not-acceptable": ProblemKind(
        406,
        "No acceptable media type",
        "Accept asks for nothing that this route can answer.",
        "Ask for one of the media types in `offered`, or for any by leaving Accept out.",
    ),
    "body-timeout": ProblemKind(
        408,
        "The body stopped coming",
        "The rest of the body did not come in time.",
        "Send the request again.",
    ),
    "body-too-large": ProblemKind(
        413,
        "The body is too large",
        "The body exceeds the limit in bytes that GET /v1/limits publishes.",
        "Ask for less at a time, or send long columns as application/octet-stream.",
    ),
    "unsupported-media-type": ProblemKind(
        415,
        "Unsupported media type",
        "The route does not read bodies of this type, in this encoding, or compressed.",
        "Send application/json in UTF-8, without Content-Encoding; Accept-Post lists what else is read.",
    ),
    "invalid-request": ProblemKind(
        422,
        "The request does not fit its schema",
        "A field is missing, unknown, of the wrong type or out of its bounds.",
        "Correct what each of `errors` points at; /openapi.json has the schema.",
    ),
    "memory-exceeded": ProblemKind(
        422,
        "The computation needs too much memory",
        "The worker met the limit `worker_memory` of GET /v1/limits and was replaced.",
        "Ask for fewer points or columns at a time.",
    ),
    "too-many-requests": ProblemKind(
        429,
        "Too many computations at a time",
        "As many computations as one token may have are running.",
        "Wait for one to end, or retry after Retry-After.",
    ),
    "internal-error": ProblemKind(
        500,
        "Internal error",
        "The service failed. Nothing in the request needs to change.",
        "Report the request id to those who run the service: it identifies the log entry.",
    ),
    "busy": ProblemKind(
        503, "The service is busy", "Every worker and the queue are full.", "Retry after Retry-After."
    ),
    "not-ready": ProblemKind(
        503,
        "The service is not ready",
        "Kernels are being prepared, no worker answers, or the service stops.",
        "Retry after Retry-After.",
    ),
    "worker-lost": ProblemKind(
        503,
        "The worker process was lost",
        "The process of the computation ended from outside, twice.",
        "Retry after Retry-After.",
    ),
    "deadline-exceeded": ProblemKind(
        504,
        "The computation took too long",
        "The work was stopped at the deadline of GET /v1/limits or of `Prefer: wait`, counted from the "
        "request.",
        "Ask for less, or POST /v1/estimate first.",
    ),
}
"""Problems of the HTTP layer itself, by code."""

PROXY_PROBLEMS = {
    "malformed-request": ProblemKind(
        400, "The request is not HTTP", "The request line or a header cannot be read.", "Send HTTP/1.1."
    ),
    "address-too-long": ProblemKind(
        414,
        "The address is too long",
        "The request line exceeds what is read.",
        "Send what you ask for in the body of a POST, not in the address.",
    ),
    "headers-too-large": ProblemKind(
        431,
        "The headers are too large",
        "One header, or all together, exceed what is read.",
        "Send fewer and shorter headers; cookies mean nothing here.",
    ),
    "unreachable": ProblemKind(
        502, "The service cannot be reached", "No replica answers the proxy.", "Retry after Retry-After."
    ),
}
"""Problems that only a reverse proxy in front of the service answers with, by code."""

FLOW_STATUS = 422
"""Status of every FlowError: the request can be read but describes something that cannot be computed."""


def flow_errors(root: type[FlowError] = FlowError) -> dict[str, type[FlowError]]:
    """Every kind of FlowError that carries a code, by code."""
    found: dict[str, type[FlowError]] = {}
    for kind in root.__subclasses__():
        if "code" in vars(kind):
            found[kind.code] = kind
        found |= flow_errors(kind)
    return dict(sorted(found.items()))


def catalogue() -> dict[str, ProblemKind]:
    """Every kind of problem this service answers with, by code."""
    flow = {
        code: ProblemKind(FLOW_STATUS, kind.title, " ".join((kind.__doc__ or "").split()), CURES[code])
        for code, kind in flow_errors().items()
    }
    return HTTP_PROBLEMS | PROXY_PROBLEMS | flow


NOTHING: Mapping[str, Any] = MappingProxyType({})


class Problem(Exception):  # noqa: N818  (RFC 9457's own word)
    """A problem on its way to the client."""

    def __init__(
        self,
        code: str,
        detail: str,
        *,
        errors: tuple[dict[str, str], ...] = (),
        headers: Mapping[str, str] = NOTHING,
        facts: Mapping[str, Any] = NOTHING,
    ) -> None:
        super().__init__(code, detail)
        self.code = code
        self.detail = detail
        self.errors = errors
        self.headers = dict(headers)
        self.facts = dict(facts)

    @override
    def __reduce__(self) -> tuple[Any, ...]:
        return _rebuild, (self.code, self.detail, self.errors, self.headers, self.facts)

    @property
    def status(self) -> int:
        """HTTP status."""
        return catalogue()[self.code].status

    def body(self, request_id: str) -> dict[str, Any]:
        """Members of the problem, facts last; a fact never overwrites a standard member."""
        kind = catalogue()[self.code]
        standard = {
            "type": f"/problems/{self.code}",
            "title": kind.title,
            "status": kind.status,
            "detail": self.detail,
            "instance": f"urn:forebay:request:{request_id}",
        }
        if self.errors:
            standard["errors"] = list(self.errors[:MOST_ERRORS])
        return standard | {name: fact for name, fact in self.facts.items() if name not in standard}


def _rebuild(
    code: str,
    detail: str,
    errors: tuple[dict[str, str], ...],
    headers: dict[str, str],
    facts: dict[str, Any],
) -> Problem:
    return Problem(code, detail, errors=errors, headers=headers, facts=facts)


def pointer(path: Path) -> str:
    """JSON pointer as a URI fragment; stops before a member name too long to repeat."""
    parts = []
    for token in path:
        text = str(token)
        if len(text) > LONGEST_TOKEN:
            break
        parts.append("/" + text.replace("~", "~0").replace("/", "~1"))
    return "#" + "".join(parts)


def from_status(status: int, headers: Mapping[str, str] | None = None) -> Problem:
    """Problem of a bare HTTP status that the router raised."""
    codes = {404: "not-found", 405: "method-not-allowed"}
    code = codes.get(
        status, "malformed-json" if status < HTTPStatus.INTERNAL_SERVER_ERROR else "internal-error"
    )
    return Problem(code, HTTP_PROBLEMS[code].cause, headers=_all_allowed(headers or NOTHING))


def _all_allowed(headers: Mapping[str, str]) -> dict[str, str]:
    """Headers whose Allow lists OPTIONS too, and HEAD beside GET, which every route has."""
    methods = {method.strip() for method in headers.get("Allow", "").split(",")} - {""}
    if methods:
        methods |= {"OPTIONS", "HEAD"} if "GET" in methods else {"OPTIONS"}
    return {**headers, "Allow": ", ".join(sorted(methods))} if methods else dict(headers)

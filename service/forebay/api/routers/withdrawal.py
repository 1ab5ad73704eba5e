"""withdrawal/trace: where each intake's water comes from."""

from dataclasses import asdict
from typing import Any

from fastapi import APIRouter

from forebay.api.encoders.envelope_json import ENVELOPE
from forebay.api.encoders.json_lines import json_lines
from forebay.api.limits import Price
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.withdrawal import WithdrawalRequest, WithdrawalResult
from forebay.workflows.withdrawal import Withdrawal, trace_withdrawal


def compute(request: WithdrawalRequest, _media_type: str) -> Outcome:
    layout = request.flow_layout()
    return reviewed(request, layout, written(trace_withdrawal(layout, request.wanted())))


def written(withdrawal: Withdrawal) -> dict[str, Any]:
    """Fields of a trace."""
    fields = asdict(withdrawal)
    for intake in fields["intakes"]:
        intake["extent_centre"] = intake.pop("centre")
        for share in intake["shares"]:
            share["from"] = share.pop("origin")
    return fields


def price(request: WithdrawalRequest) -> Price:
    return Price(elements=request.layout.size, lengthy=True)


TRACE = Operation(
    operation_id="traceWithdrawal",
    path="/v1/withdrawal/trace",
    summary="Where each intake's water comes from",
    description=(
        "Shares of each intake's water by origin, from the dividing streamlines of the saddles and "
        "not by counting streamlines, with an error bound; the width of the captured strip far "
        "upstream; the zone it draws from; the share that outfalls gave (recirculation)."
    ),
    request=WithdrawalRequest,
    result=WithdrawalResult,
    compute=compute,
    price=price,
    encoders=(ENVELOPE, *json_lines("intakes")),
)

router = APIRouter()
serve(router, TRACE)

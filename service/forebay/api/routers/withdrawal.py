"""withdrawal/trace: where each intake's water comes from."""

from collections.abc import Iterator
from dataclasses import asdict
from typing import Any

import numpy as np
from fastapi import APIRouter

from forebay.api.encoders.envelope_json import ENVELOPE
from forebay.api.encoders.geojson import Feature, geojson
from forebay.api.encoders.json_lines import json_lines
from forebay.api.limits import Price
from forebay.api.operation import Operation
from forebay.api.outcome import Answered, Outcome
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


GEOMETRY = ("dividing_streamlines", "zone", "extent_centre")
"""Members of an intake's answer that the map shows instead of its properties."""


def features(answered: Answered) -> Iterator[Feature]:
    """Zone and dividing streamlines of each intake on the map."""
    intakes = zip(answered.outcome.result["intakes"], answered.document["result"]["intakes"], strict=True)
    for intake, written_intake in intakes:
        facts = {name: value for name, value in written_intake.items() if name not in GEOMETRY}
        yield Feature("zone", "Polygon", np.asarray(intake["zone"], dtype=np.complex128), facts)
        for number, line in enumerate(intake["dividing_streamlines"], start=1):
            about = {"name": intake["name"], "number": number}
            yield Feature("dividing-streamline", "LineString", np.asarray(line, dtype=np.complex128), about)


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
    encoders=(ENVELOPE, *json_lines("intakes"), geojson(features)),
)

router = APIRouter()
serve(router, TRACE)

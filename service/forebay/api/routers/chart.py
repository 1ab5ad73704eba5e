"""chart/flow-net: the picture."""

from dataclasses import replace

from fastapi import APIRouter

from forebay.api.encoders.pictures import PICTURES
from forebay.api.limits import Price
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.chart import ChartRequest
from forebay.workflows.flow_net import draw_flow_net


def compute(request: ChartRequest, media_type: str) -> Outcome:
    layout = request.flow_layout()
    picture = draw_flow_net(layout, request.options(media_type))
    return replace(reviewed(request, layout, {}), picture=picture.data)


def price(request: ChartRequest) -> Price:
    return Price(elements=request.layout.size, lengthy=True)


FLOW_NET = Operation(
    operation_id="drawFlowNet",
    path="/v1/chart/flow-net",
    summary="The flow net as SVG or PNG",
    description=(
        "Streamlines of equal flux without cuts, equipotentials, speed, stagnation points, dividing "
        "streamlines, elements and banks with their names. `Accept: image/png` for PNG. The codes of "
        "the warnings travel in the header Forebay-Warnings."
    ),
    request=ChartRequest,
    result=None,
    compute=compute,
    price=price,
    encoders=PICTURES,
)

router = APIRouter()
serve(router, FLOW_NET)

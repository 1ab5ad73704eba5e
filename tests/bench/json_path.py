"""Large field samples: JSON points in, six columns out, without the time of the velocity kernel."""

from collections.abc import Iterator

import numpy as np
import orjson

from forebay.app import create_app
from forebay.flow.layout import Ambient, Layout, Sink
from forebay.flow.model import compile_layout
from forebay.settings import Settings

from .client import InProcess
from .timing import Measure, best_of

CASES = ((100_000, 0.080), (1_000_000, 0.800))
"""Points and allowed time [s]."""

LAYOUT = {
    "depth": 4.0,
    "ambient": {"velocity": [0.3, 0.0]},
    "elements": [{"kind": "sink", "name": "intake", "at": [0, 0], "discharge": 1.0}],
}


def measure() -> Iterator[Measure]:
    """Time of a whole request less the time of the sum that it asks for."""
    generator = np.random.default_rng(2)
    model = compile_layout(Layout(4.0, ambient=Ambient(0.3 + 0j), elements=(Sink("intake", 0j, 1.0),)))
    client = InProcess(create_app(Settings(deadline=600.0)))
    try:
        for count, allowed in CASES:
            xy = np.round(generator.uniform(-500, 500, size=(count, 2)), 3)
            for shape in ({"points": xy}, {"x": xy[:, 0].copy(), "y": xy[:, 1].copy()}):
                yield _case(client, model, xy, allowed, shape)
    finally:
        client.close()


def _case(client: InProcess, model, xy: np.ndarray, allowed: float, shape: dict[str, np.ndarray]) -> Measure:
    request = {"layout": LAYOUT, "at": shape, "quantities": ["direction_deg"]}
    body = orjson.dumps(request, option=orjson.OPT_SERIALIZE_NUMPY)
    status, answer = client.post("/v1/field/sample", body)
    assert status == 200, answer[:500]
    result = orjson.loads(answer)["result"]
    assert len(result["u"]) == len(xy)
    whole = best_of(lambda: client.post("/v1/field/sample", body), repeats=5)
    kernel = best_of(lambda: model.velocity(xy[:, 0] + 1j * xy[:, 1]), repeats=5)
    form = next(iter(shape))
    remark = (
        f"[{form}] {whole * 1e3:.0f} ms whole, {len(body) / 1e6:.1f} MB in, {len(answer) / 1e6:.1f} MB out"
    )
    name = f"{len(xy)} points in as {'pairs' if form == 'points' else 'columns'}, six columns out, JSON"
    return Measure(name, (whole - kernel) * 1e3, "ms", allowed * 1e3, remark=remark)

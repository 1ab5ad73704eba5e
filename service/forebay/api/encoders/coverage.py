"""Sampled fields as CoverageJSON: a grid or points with their reference system, one range a quantity."""

from functools import partial
from typing import Any, Protocol, cast

import numpy as np
import orjson

from forebay.api.encoders.columns import columns_of
from forebay.api.media import COVERAGE
from forebay.api.outcome import Answered, Encoder, Reply
from forebay.api.schemas.common import Answer
from forebay.api.schemas.layout import Layout
from forebay.api.schemas.places import At
from forebay.api.units import UnitSystem
from forebay.flow.arrays import FloatArray
from forebay.trade.survey.grids import MapGrid

Json = dict[str, Any]

UCUM = "http://www.opengis.net/def/uom/UCUM/"
"""Type of the unit symbols."""

REGISTER = "http://www.opengis.net/def/crs/EPSG/0/"
"""Address of a registered reference system, before its number."""


class Sampled(Protocol):
    """A request for a field at places."""

    layout: Layout
    at: At
    unit_system: UnitSystem


def coverage(result: type[Answer]) -> Encoder:
    """Encoder of columns x, y and more, described by a model of the answer."""
    return Encoder(
        COVERAGE,
        partial(encode_coverage, result=result),
        "CoverageJSON with the reference system of the grid",
        {"type": "object"},
    )


def encode_coverage(answered: Answered, result: type[Answer]) -> Reply:
    """Coverage of a sampled field: domain Grid for a grid, else MultiPoint.

    Axes are metres of the map grid where the layout has one, else lengths of its plan in the client's unit.
    A point without a value is null. Warnings and provenance are members beside those of the format.
    """
    request = cast("Sampled", answered.request)
    grid = request.layout.map_grid(request.unit_system)
    columns = columns_of(answered).values
    names = [name for name in columns if name not in ("x", "y")]
    axes, shape = _axes(answered, request, on_ground=grid is not None)
    coverage = {
        "type": "Coverage",
        "domain": {
            "type": "Domain",
            "domainType": "Grid" if request.at.grid is not None else "MultiPoint",
            "axes": axes,
            "referencing": [{"coordinates": ["x", "y"], "system": _system(grid, answered)}],
        },
        "parameters": {name: _parameter(name, answered, result) for name in names},
        "ranges": {name: _range(columns[name], shape) for name in names},
    }
    rest = {name: value for name, value in answered.document.items() if name not in ("result", "units")}
    return Reply(COVERAGE, orjson.dumps(coverage | rest, option=orjson.OPT_SERIALIZE_NUMPY), {})


def _axes(answered: Answered, request: Sampled, *, on_ground: bool) -> tuple[Json, Json]:
    """Axes of the domain, and the axes of every range with their lengths."""
    source = answered.outcome.result if on_ground else answered.document["result"]
    x, y = np.asarray(source["x"]), np.asarray(source["y"])
    if request.at.grid is None:
        pairs = np.stack([x, y], axis=-1)
        axis = {"dataType": "tuple", "coordinates": ["x", "y"], "values": pairs}
        return {"composite": axis}, {"composite": x.size}
    rows, columns = request.at.grid.ny, request.at.grid.nx
    across, upward = x[:columns], y[::columns]
    return {"x": _even(across), "y": _even(upward)}, {"y": rows, "x": columns}


def _even(values: FloatArray) -> Json:
    """A regular axis."""
    return {"start": float(values[0]), "stop": float(values[-1]), "num": int(values.size)}


def _system(grid: MapGrid | None, answered: Answered) -> Json:
    """Reference system of x and y."""
    if grid is None:
        text = f"Local plan of the layout, in {answered.document['units']['x']}; no place on the ground"
        return {"type": "ProjectedCRS", "description": {"en": text}}
    if grid.code is not None:
        return {"type": "ProjectedCRS", "id": REGISTER + grid.code.removeprefix("EPSG:")}
    return {"type": "ProjectedCRS", "description": {"en": f"PROJ definition: {grid.definition}"}}


def _parameter(name: str, answered: Answered, result: type[Answer]) -> Json:
    """What a range holds."""
    description = result.model_fields[name].description
    parameter: Json = {
        "type": "Parameter",
        "observedProperty": {"label": {"en": name.replace("_", " ")}},
        "unit": {"symbol": {"value": answered.document["units"][name], "type": UCUM}},
    }
    return parameter if description is None else {"description": {"en": description}, **parameter}


def _range(values: FloatArray, axes: Json) -> Json:
    return {
        "type": "NdArray",
        "dataType": "float",
        "axisNames": list(axes),
        "shape": list(axes.values()),
        "values": values,
    }

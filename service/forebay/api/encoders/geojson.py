"""Lines, areas and points of an answer on the ground: GeoJSON (RFC 7946), for map programs."""

from collections.abc import Callable, Iterator
from functools import partial
from itertools import pairwise
from typing import Any, NamedTuple

import numpy as np
import orjson
import shapely

from forebay.api.media import GEOJSON
from forebay.api.outcome import Answered, Encoder, Reply
from forebay.api.schemas.layout import LayoutRequest
from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import LayoutError
from forebay.trade.survey.grids import MapGrid

Json = dict[str, Any]

DECIMALS = 8
"""Decimals of a degree that are sent: a millimetre."""

LONGEST = 500.0
"""Length of the grid over which a straight line and its image on the map part by millimetres [m]."""

MOST_PIECES = 1000
"""Pieces into which one straight line is cut."""


class NotGeoreferencedError(LayoutError):
    """Nobody has said where on the ground the plan of the layout lies, so that no map can show the answer.

    Give `grid` in the layout, or a surveyed shore with a `crs` other than `local`.
    """

    code = "not-georeferenced"
    title = "The layout has no place on the ground"


class Feature(NamedTuple):
    """A thing on the map.

    kind : what it is;  shape : "Point", "LineString" or "Polygon" (one ring);  at : its places, x + iy [m]
    properties : in the client's units
    """

    kind: str
    shape: str
    at: ComplexArray
    properties: Json


Features = Callable[[Answered], Iterator[Feature]]


def geojson(features: Features) -> Encoder:
    """Encoder of an operation whose answers have a place."""
    return Encoder(
        GEOJSON,
        partial(encode_geojson, features=features),
        "A FeatureCollection in longitude and latitude (WGS 84), with units, warnings and provenance beside "
        "the features; for a layout that says where it lies",
        {"type": "object"},
    )


def encode_geojson(answered: Answered, features: Features) -> Reply:
    """Collection of features; units, warnings and provenance are members beside them.

    Raises
    ------
    NotGeoreferencedError : the layout does not say where it lies
    OutsideSystemError : a place cannot be given in longitude and latitude
    """
    request = answered.request
    grid = request.layout.map_grid(request.unit_system) if isinstance(request, LayoutRequest) else None
    if grid is None:
        raise NotGeoreferencedError("it has no `grid`, and no surveyed shore with a system", ("grid",))
    rest = {name: value for name, value in answered.document.items() if name != "result"}
    found = [_written(feature, grid) for feature in features(answered)]
    body = orjson.dumps(
        {"type": "FeatureCollection", "features": found, **rest}, option=orjson.OPT_SERIALIZE_NUMPY
    )
    return Reply(GEOJSON, body, {})


def _written(feature: Feature, grid: MapGrid) -> Json:
    properties = {"feature": feature.kind, **feature.properties}
    return {"type": "Feature", "geometry": _geometry(feature, grid), "properties": properties}


def _geometry(feature: Feature, grid: MapGrid) -> Json | None:
    """Geometry of a feature; null where it has none."""
    if feature.at.size == 0:
        return None
    if feature.shape == "Point":
        return {"type": "Point", "coordinates": _degrees(feature.at, grid)[0]}
    if feature.shape == "LineString":
        return {"type": "LineString", "coordinates": _degrees(densified(feature.at), grid)}
    return _area(feature.at, grid)


def _degrees(at: ComplexArray, grid: MapGrid) -> list[list[float]]:
    """Longitude and latitude as sent, without repeating one after the other; two at least of a line."""
    rounded: list[list[float]] = np.round(grid.to_wgs84(at), DECIMALS).tolist()
    apart = [rounded[0], *(place for before, place in pairwise(rounded) if place != before)]
    return apart if len(apart) > 1 else rounded[:2]


def _area(ring: ComplexArray, grid: MapGrid) -> Json | None:
    """Polygon of a ring, exterior anticlockwise as RFC 7946 asks; several if the ring touches itself."""
    places = np.unique(ring)
    if places.size < 3:
        return None
    area = shapely.Polygon(_degrees(densified(np.append(ring, ring[0])), grid))
    parts = [part for part in shapely.get_parts(shapely.make_valid(area)) if part.geom_type == "Polygon"]
    rings = [
        [[list(place) for place in line.coords] for line in (part.exterior, *part.interiors)]
        for part in map(shapely.orient_polygons, parts)
    ]
    if not rings:
        return None
    return (
        {"type": "Polygon", "coordinates": rings[0]}
        if len(rings) == 1
        else {"type": "MultiPolygon", "coordinates": rings}
    )


def densified(line: ComplexArray) -> ComplexArray:
    """The line with places between, so that no piece is longer than LONGEST."""
    pieces = [
        np.linspace(start, end, min(1 + int(abs(end - start) / LONGEST), MOST_PIECES), endpoint=False)
        for start, end in pairwise(line.tolist())
    ]
    return np.concatenate([*pieces, line[-1:]]).astype(np.complex128)

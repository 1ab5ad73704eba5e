"""Outlines of solids: groynes, jetties, quays and islands, as polygons or as thin walls along a line."""

import numpy as np
import shapely

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import Path
from forebay.trade.survey.errors import RingError
from forebay.trade.survey.rings import Change, mended_ring, pairs, places, size_of

SHARPEST = 5.0
"""Length of a wall's mitred corner over half its thickness, beyond which the corner is cut off [-]."""


def outline_points(points: ComplexArray, path: Path) -> tuple[ComplexArray, tuple[Change, ...]]:
    """Vertices of a solid, anticlockwise and each once, and what was mended.

    Parameters
    ----------
    points : shape (n,), in either sense, with or without the closing point [m];  path : of the list

    Raises
    ------
    RingError : they enclose no area, or cross themselves
    """
    ring, changes = mended_ring(points, path, size=size_of(points))
    return ring.points, changes


def wall_points(line: ComplexArray, thickness: float, path: Path) -> ComplexArray:
    """Outline of a thin wall, anticlockwise [m].

    Parameters
    ----------
    line : shape (n,), its middle line, x + iy [m];  path : of the list
    thickness : of the wall [m]; its ends are cut square, its corners mitred up to SHARPEST

    Raises
    ------
    RingError : the line has no length, or the wall meets itself and encloses water
    """
    if size_of(line) == 0.0:
        raise RingError("the line has no length", path)
    wall = shapely.buffer(
        shapely.LineString(pairs(line)),
        0.5 * thickness,
        cap_style="flat",
        join_style="mitre",
        mitre_limit=SHARPEST,
    )
    if wall.is_empty or wall.geom_type != "Polygon" or wall.interiors:
        raise RingError("the wall meets itself and encloses water", path)
    points = places(np.asarray(shapely.get_coordinates(wall.exterior)))
    return outline_points(points, path)[0]

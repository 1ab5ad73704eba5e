"""Islands: free of the banks and of each other, and named."""

from dataclasses import dataclass

import numpy as np
import shapely

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import DuplicateNameError, Path
from forebay.flow.layout import Island
from forebay.trade.survey.errors import IslandError, UnknownIslandError
from forebay.trade.survey.rings import Ring, pairs


@dataclass(frozen=True, slots=True)
class IslandSurvey:
    """What is known of the island that a place lies in: its name, and the circulation round it [m2/s]."""

    name: str
    at: complex
    circulation: float = 0.0


def require_free(outer: Ring, islands: tuple[Ring, ...], reach: float) -> None:
    """Refuse islands that touch or cross a bank or each other, or lie outside the water.

    Parameters
    ----------
    outer, islands : the rings;  reach : distance at which they count as touching [m]

    Raises
    ------
    IslandError : its path leads to the vertex of the island nearest to the trouble
    """
    water, solids = outer.polygon, np.array([island.polygon for island in islands])
    for island, solid in zip(islands, solids, strict=True):
        if shapely.dwithin(water.exterior, solid, reach):
            at, _ = _nearest(island.points, water.exterior)
            raise IslandError("the island touches or crosses the outer ring", island.vertex_path(at))
        if not water.contains(solid):
            raise IslandError("the island lies outside the outer ring", island.path)
    if len(islands) < 2:
        return
    found = shapely.STRtree(solids).query(solids, predicate="dwithin", distance=reach)
    for one, other in sorted((int(i), int(j)) for i, j in found.T if i < j):
        at, _ = _nearest(islands[other].points, solids[one].exterior)
        raise IslandError(
            f"the island touches, crosses or holds island {islands[one].path[-1]}",
            islands[other].vertex_path(at),
        )


def are_free(outer: Ring, islands: tuple[Ring, ...], reach: float) -> bool:
    """Whether every ring is simple and no island touches a bank or another."""
    if not all(ring.points.size > 2 and ring.polygon.is_valid for ring in (outer, *islands)):
        return False
    try:
        require_free(outer, islands, reach)
    except IslandError:
        return False
    return True


def _nearest(points: ComplexArray, line: shapely.LinearRing) -> tuple[complex, float]:
    gaps = np.asarray(shapely.distance(line, shapely.points(pairs(points))))
    index = int(np.argmin(gaps))
    return complex(points[index]), float(gaps[index])


def named_islands(
    rings: tuple[Ring, ...], surveys: tuple[IslandSurvey, ...], path: Path
) -> tuple[Island, ...]:
    """Islands with the names and circulations given, the others called by their number in the polygon.

    Parameters
    ----------
    rings : clockwise, each with the path (..., number), 1 for the first hole;  path : of the surveys

    Raises
    ------
    UnknownIslandError : a place lies in no island, or in one that is named already
    DuplicateNameError : a name is that of another island, whose number may have made it
    """
    named: dict[int, IslandSurvey] = {}
    for index, survey in enumerate(surveys):
        place = shapely.Point(survey.at.real, survey.at.imag)
        number = next((k for k, ring in enumerate(rings) if ring.polygon.intersects(place)), None)
        if number is None:
            raise UnknownIslandError("the place lies in no island", (*path, index, "at"))
        if number in named:
            raise UnknownIslandError("the island there has a name already", (*path, index, "at"))
        named[number] = survey
    unnamed = {f"island {ring.path[-1]}" for number, ring in enumerate(rings) if number not in named}
    _require_own_names(surveys, unnamed, path)
    islands = []
    for number, ring in enumerate(rings):
        survey = named.get(number, IslandSurvey(f"island {ring.path[-1]}", 0j))
        islands.append(Island(survey.name, tuple(ring.points.tolist()), survey.circulation))
    return tuple(islands)


def _require_own_names(surveys: tuple[IslandSurvey, ...], taken: set[str], path: Path) -> None:
    for index, survey in enumerate(surveys):
        if survey.name in taken:
            raise DuplicateNameError("another island has this name", (*path, index, "name"))
        taken.add(survey.name)

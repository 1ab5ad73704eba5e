"""Where elements stand: every layout that cannot be is refused here, with the place of the fault."""

import numpy as np
from scipy.spatial import cKDTree

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import (
    CoincidentElementsError,
    CurrentThroughWallError,
    DivergentAmbientError,
    DuplicateNameError,
    ElementInStructureError,
    ElementMisplacedError,
    ElementOnLandError,
    OverlappingStructuresError,
    Path,
    UnbalancedDischargeError,
)
from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Core,
    CoreModel,
    Corner,
    DeadEnd,
    Doublet,
    Element,
    Layout,
    LineSink,
    LineSource,
    OpenWater,
    Outline,
    Pier,
    Shore,
    Sink,
    Source,
    StraightBank,
    Structure,
    Surveyed,
    Vortex,
    outflow,
)
from forebay.flow.shores import Frame, Wall

TOUCHING = 1e-9
"""Distances below this part of the layout's scale count as contact [-]."""
_ROUNDING = 1e-9
"""Net discharge, trace and gradient through a wall below this part of the whole are rounding [-]."""
_GRAZING = 1e-6
"""Ambient velocity through a wall below this part of it is rounding of the client's, and left out [-]."""


def places(element: Element) -> tuple[tuple[str, complex], ...]:
    """The points that fix an element, each with its name in a request, x + iy [m]."""
    match element:
        case LineSource() | LineSink():
            return (("from", element.start), ("to", element.end))
        case _:
            return (("at", element.at),)


def scale_of(layout: Layout) -> tuple[complex, float]:
    """Middle of what stands in the water, x + iy [m], and the layout's length scale [m].

    The scale is the largest of: half the extent of elements and structures, a pier's radius, a core's
    radius, the width of a channel or dead end, the diagonal of a basin; 1 m if there is none of these.
    """
    points = [at for element in layout.elements for _, at in places(element)]
    points += [at for structure in layout.structures for at in _footprint(structure)]
    radii = [pier.radius for pier in layout.piers]
    radii += [
        element.core.radius for element in layout.elements if isinstance(element, Vortex) and element.core
    ]
    middle = _home(layout.shore)
    if points:
        xs, ys = [p.real for p in points], [p.imag for p in points]
        middle = complex((min(xs) + max(xs)) / 2, (min(ys) + max(ys)) / 2)
    extent = max((abs(p - middle) for p in points), default=0.0)
    bound = max([extent, *radii, _size(layout.shore)])
    if bound <= 0.0 and points:
        bound = abs(middle - _home(layout.shore))
    return middle, bound if bound > 0.0 else 1.0


def _home(shore: Shore) -> complex:
    match shore:
        case OpenWater():
            return 0j
        case StraightBank() | Channel() | DeadEnd():
            return shore.point
        case Corner():
            return shore.vertex
        case Basin():
            return shore.corner
        case Surveyed():
            return shore.outer[0]


def _footprint(structure: Structure) -> tuple[complex, ...]:
    match structure:
        case Pier():
            return (structure.at,)
        case Outline():
            return structure.points


def _size(shore: Shore) -> float:
    match shore:
        case Channel() | DeadEnd():
            return shore.width
        case Basin():
            return abs(complex(shore.length, shore.width))
        case Surveyed():
            return _diagonal(shore.outer)
        case OpenWater() | StraightBank() | Corner():
            return 0.0


def _diagonal(points: tuple[complex, ...]) -> float:
    xs, ys = [p.real for p in points], [p.imag for p in points]
    return abs(complex(max(xs) - min(xs), max(ys) - min(ys)))


def check_layout(layout: Layout, frame: Frame, scale: float) -> None:
    """Raise the LayoutError that names the first fault of the layout, if there is one.

    Raises
    ------
    LayoutError : DuplicateNameError, ElementOnLandError, ElementMisplacedError, ElementInStructureError,
        OverlappingStructuresError, CoincidentElementsError, CurrentThroughWallError,
        DivergentAmbientError or UnbalancedDischargeError
    """
    _check_names(layout)
    _check_ambient(layout.ambient, frame, scale)
    _check_balance(layout)
    _check_elements(layout, frame, scale)
    _check_structures(layout, frame, scale)
    _check_coincidence(layout, scale)


def _check_names(layout: Layout) -> None:
    seen: dict[str, Path] = {}
    named: list[tuple[Path, str]] = [(("elements", k, "name"), e.name) for k, e in enumerate(layout.elements)]
    named += [(("structures", k, "name"), s.name) for k, s in enumerate(layout.structures)]
    if isinstance(layout.shore, Surveyed):
        named += _shore_names(layout.shore)
    for path, name in named:
        if name in seen:
            raise DuplicateNameError("another element or structure has this name", path)
        seen[name] = path


def _shore_names(shore: Surveyed) -> list[tuple[Path, str]]:
    named: list[tuple[Path, str]] = [
        (("shore", "islands", k, "name"), island.name) for k, island in enumerate(shore.islands)
    ]
    return named + [(("shore", "edges", k, "name"), edge.name) for k, edge in enumerate(shore.edges)]


def _check_ambient(ambient: Ambient, frame: Frame, scale: float) -> None:
    (xx, xy), (yx, yy) = ambient.gradient
    size = max(abs(xx), abs(xy), abs(yx), abs(yy))
    if abs(xx + yy) > _ROUNDING * size:
        raise DivergentAmbientError(
            f"du/dx + dv/dy is {xx + yy:.3g} 1/s, not 0", ("ambient", "gradient"), trace=xx + yy
        )
    if ambient.velocity != 0 and not frame.map.affine:
        raise CurrentThroughWallError(
            "a corner has no uniform current along both its banks", ("ambient", "velocity")
        )
    speed = abs(ambient.velocity) + size * scale
    for wall in frame.walls:
        through = _through(ambient, wall)
        if abs(through[0]) > _GRAZING * speed:
            field = "velocity" if abs(ambient.velocity) > 0.0 else "gradient"
            raise CurrentThroughWallError(
                f"{through[0]:.4g} m/s of the ambient current goes through the {wall.name}",
                ("ambient", field),
                through=through[0],
            )
        if abs(through[1]) > _ROUNDING * size:
            raise CurrentThroughWallError(
                f"the ambient gradient drives a current through the {wall.name}", ("ambient", "gradient")
            )


def _through(ambient: Ambient, wall: Wall) -> tuple[float, float]:
    """Normal component of the ambient current at the wall's point and its change along the wall."""
    (xx, xy), (yx, yy) = ambient.gradient
    normal = 1j * wall.direction

    def turned(d: complex) -> complex:
        return complex(xx * d.real + xy * d.imag, yx * d.real + yy * d.imag)

    at_point = ambient.velocity + turned(wall.point - ambient.at)
    change = turned(wall.direction)
    return (at_point * normal.conjugate()).real, (change * normal.conjugate()).real


def _check_balance(layout: Layout) -> None:
    if not isinstance(layout.shore, Basin):
        return
    flows = [outflow(element) for element in layout.elements]
    net, gross = sum(flows), sum(abs(flow) for flow in flows)
    if abs(net) > _ROUNDING * gross:
        raise UnbalancedDischargeError(
            f"the elements add {net:.6g} m3/s to a closed basin", ("elements",), net_discharge=net
        )


def _check_elements(layout: Layout, frame: Frame, scale: float) -> None:
    for k, element in enumerate(layout.elements):
        for name, at in places(element):
            path = ("elements", k, name)
            _check_wet(at, frame, scale, path)
            if isinstance(element, Vortex | Doublet) and _gap(at, frame.walls) <= TOUCHING * scale:
                raise ElementMisplacedError("a vortex or doublet cannot stand on a bank", path)
            if sum(float(wall.distance(np.asarray(at))) <= TOUCHING * scale for wall in frame.walls) > 1:
                raise ElementMisplacedError("an element cannot stand in the corner of two banks", path)
        if isinstance(element, LineSource | LineSink):
            _check_line(element, frame, scale, ("elements", k))
        if isinstance(element, Vortex) and element.core:
            _check_core(element.at, element.core, layout, frame, ("elements", k, "core", "radius"))


def _check_wet(at: complex, frame: Frame, scale: float, path: Path) -> None:
    z = np.asarray(at)
    tolerance = TOUCHING * scale * np.abs(frame.map.slope(z))
    if not bool(frame.wet(frame.map.forward(z), tolerance)):
        raise ElementOnLandError("the point lies on land", path)


def _check_line(element: LineSource | LineSink, frame: Frame, scale: float, path: Path) -> None:
    if abs(element.end - element.start) <= TOUCHING * scale:
        raise ElementMisplacedError("the line has no length", (*path, "to"))
    inside: ComplexArray = np.linspace(element.start, element.end, 65, dtype=np.complex128)
    tolerance = TOUCHING * scale * np.abs(frame.map.slope(inside))
    if not np.all(frame.wet(frame.map.forward(inside), tolerance)):
        raise ElementOnLandError("the line crosses land", (*path, "to"))


def _check_core(at: complex, core: Core, layout: Layout, frame: Frame, path: Path) -> None:
    gap = _gap(at, frame.walls)
    gap = min([gap, *(abs(at - pier.at) - pier.radius for pier in layout.piers)])
    if core.model is CoreModel.RANKINE and core.radius > gap:
        raise ElementOnLandError(f"the core reaches {core.radius - gap:.4g} m into land", path)


def _gap(at: complex, walls: tuple[Wall, ...]) -> float:
    return min((float(wall.distance(np.asarray(at))) for wall in walls), default=np.inf)


def _check_structures(layout: Layout, frame: Frame, scale: float) -> None:
    piers = [(k, pier) for k, pier in enumerate(layout.structures) if isinstance(pier, Pier)]
    for rank, (k, pier) in enumerate(piers):
        _check_wet(pier.at, frame, scale, ("structures", k, "at"))
        if _gap(pier.at, frame.walls) - pier.radius <= TOUCHING * scale:
            raise OverlappingStructuresError("the pier touches a bank", ("structures", k, "radius"))
        for j, other in piers[:rank]:
            if abs(pier.at - other.at) - pier.radius - other.radius <= TOUCHING * scale:
                raise OverlappingStructuresError(f"the pier touches structures/{j}", ("structures", k, "at"))
        for i, element in enumerate(layout.elements):
            for name, at in _nearest_places(element, pier.at):
                if abs(at - pier.at) - pier.radius <= TOUCHING * scale:
                    raise ElementInStructureError(
                        f"the element touches or crosses structures/{k}", ("elements", i, name)
                    )


def _nearest_places(element: Element, centre: complex) -> tuple[tuple[str, complex], ...]:
    if not isinstance(element, LineSource | LineSink):
        return places(element)
    span = element.end - element.start
    part = ((centre - element.start) * span.conjugate()).real / abs(span) ** 2
    foot = element.start + span * min(max(part, 0.0), 1.0)
    return (*places(element), ("to", foot))


def _check_coincidence(layout: Layout, scale: float) -> None:
    """Two discharges at one place have no shares of their own; a vortex may stand on a sink."""
    points = [(k, e.at) for k, e in enumerate(layout.elements) if isinstance(e, Source | Sink)]
    if len(points) < 2:
        return
    pairs = cKDTree([(at.real, at.imag) for _, at in points]).query_pairs(TOUCHING * scale)
    for i, j in sorted(pairs):
        raise CoincidentElementsError(
            f"elements/{points[i][0]} stands at the same place", ("elements", points[j][0], "at")
        )

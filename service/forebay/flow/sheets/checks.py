"""What cannot be with outlines and surveyed shores, each with the place of the fault."""

import numpy as np

from forebay.flow.errors import (
    CurrentThroughWallError,
    ElementInStructureError,
    ElementMisplacedError,
    ElementOnLandError,
    OverlappingStructuresError,
    Path,
    UnbalancedDischargeError,
)
from forebay.flow.layout import (
    CoreModel,
    Doublet,
    Element,
    Layout,
    LineSink,
    LineSource,
    Pier,
    Surveyed,
    Vortex,
    outflow,
)
from forebay.flow.placement import places
from forebay.flow.sheets.ring_set import RingSet
from forebay.flow.sheets.standing import footing_of

_ROUNDING = 1e-9
"""Net discharge below this part of the whole is rounding [-]."""

_PLACES = 33
"""Places of a line that are looked at."""
_ALONG = 1e-6
"""Distance from a wall, over the length of a line, within which it runs along the wall [-]."""


def check_rings(layout: Layout, rings: RingSet, reach: float) -> None:
    """Raise the LayoutError that names the first fault of elements and piers among the rings.

    reach : distance that counts as contact [m]
    """
    if isinstance(layout.shore, Surveyed):
        _check_surveyed(layout, layout.shore)
    if not rings.rings:
        return
    for k, element in enumerate(layout.elements):
        _check_element(element, rings, reach, ("elements", k))
    for k, structure in enumerate(layout.structures):
        if isinstance(structure, Pier):
            _check_pier(structure, rings, reach, ("structures", k))


def _check_surveyed(layout: Layout, shore: Surveyed) -> None:
    if layout.ambient.velocity != 0 or layout.ambient.has_gradient:
        field = "velocity" if layout.ambient.velocity != 0 else "gradient"
        raise CurrentThroughWallError(
            "the current of surveyed water comes through its open edges", ("ambient", field)
        )
    unknown = [k for k, edge in enumerate(shore.edges) if edge.discharge is None]
    if len(unknown) > 1:
        raise UnbalancedDischargeError(
            "continuity gives the discharge of one open edge only",
            ("shore", "edges", unknown[1], "discharge"),
        )
    flows = [outflow(element) for element in layout.elements]
    flows += [edge.discharge for edge in shore.edges if edge.discharge is not None]
    net, gross = sum(flows), sum(abs(flow) for flow in flows)
    if not unknown and abs(net) > _ROUNDING * gross:
        path: Path = ("shore", "edges") if shore.edges else ("elements",)
        raise UnbalancedDischargeError(
            f"open edges and elements add {net:.6g} m3/s to the water", path, net_discharge=net
        )


def _check_element(element: Element, rings: RingSet, reach: float, path: Path) -> None:
    is_line, ends = isinstance(element, LineSource | LineSink), places(element)
    for name, at in ends:
        _check_wet(at, rings, reach, (*path, name))
        touched = rings.edges_at(at, reach)
        if not is_line and touched:
            _check_on_ring(element, touched, (*path, name))
    if rings.on_open_edge([at for _, at in ends], reach):
        raise ElementMisplacedError("an element cannot stand on an open edge", (*path, ends[0][0]))
    if is_line and footing_of(element, rings, reach) is None:
        _check_off_rings((ends[0][1], ends[-1][1]), rings, reach, (*path, "to"))
    if isinstance(element, Vortex) and element.core and element.core.model is CoreModel.RANKINE:
        gap = float(rings.gap(np.array([element.at]))[0])
        if element.core.radius > gap:
            raise ElementOnLandError(
                f"the core reaches {element.core.radius - gap:.4g} m into land", (*path, "core", "radius")
            )


def _check_off_rings(ends: tuple[complex, complex], rings: RingSet, reach: float, path: Path) -> None:
    """A line that stands on no ring crosses none, and follows none that bends on its way."""
    if rings.crossed(*ends, reach):
        raise ElementOnLandError("the line crosses land", path)
    a, b = ends
    between = np.asarray(a + (b - a) * np.linspace(0.0, 1.0, _PLACES), dtype=np.complex128)
    if bool(np.all(np.abs(rings.distance(between)) <= _ALONG * abs(b - a))):
        raise ElementMisplacedError("the line runs along a wall that is not straight there", path)


def _check_wet(at: complex, rings: RingSet, reach: float, path: Path) -> None:
    z = np.array([at])
    if bool(rings.wet(z, reach)[0]):
        return
    if rings.outline_at(at):
        raise ElementInStructureError("the point lies in an outline", path)
    raise ElementOnLandError("the point lies on land", path)


def _check_on_ring(element: Element, touched: "tuple[tuple[object, int], ...]", path: Path) -> None:
    if isinstance(element, Vortex | Doublet):
        raise ElementMisplacedError("a vortex or doublet cannot stand on a bank", path)
    if len(touched) > 1:
        raise ElementMisplacedError("an element cannot stand in the corner of two banks", path)


def _check_pier(pier: Pier, rings: RingSet, reach: float, path: Path) -> None:
    at = np.array([pier.at])
    if not bool(rings.inside(at)[0]):
        raise OverlappingStructuresError("the pier stands on land or in an outline", (*path, "at"))
    if float(rings.gap(at)[0]) - pier.radius <= reach:
        raise OverlappingStructuresError(
            "the pier touches a bank, an outline or an open edge", (*path, "radius")
        )

"""The part of the plan that a picture shows when nobody says."""

import numpy as np

from forebay.charts.rings import ring_lines
from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import Surveyed, outflow
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import Window

NEAR_WALL = 2.0
"""A bank within this many sizes of the site is shown."""

CAPTURE_REACHES = 2.5
"""Room kept round an intake, in units of q / (2 pi U), the distance of its stagnation point."""

MARGIN = 0.2
"""Room round everything, as a share of the larger side."""

RING_MARGIN = 0.06
"""The same round surveyed water, of which everything is seen."""

LAND_STRIP = 0.06
"""Land shown beyond the water, as a share of the width of the window."""

SAMPLES = 80
"""Points along each side of the grid on which water is looked for."""

FLATTEST = 0.3
"""Least height of a window over its width."""

STEEPEST = 0.7
"""Greatest height of a window over its width."""


def choose_window(model: FlowModel, aspect: float | None = None) -> Window:
    """Window round elements, structures, their capture zones and the banks nearby.

    Parameters
    ----------
    model : the flow
    aspect : height over width that the window shall have; None: the site's, at most STEEPEST

    Returns
    -------
    Window [m].
    """
    places = site_places(model)
    size = max(extent(places), site_reach(model))
    places = np.concatenate([places, wall_places(model, places, NEAR_WALL * size)])
    share = RING_MARGIN if isinstance(model.layout.shore, Surveyed) else MARGIN
    margin = share * max(extent(places), 0.5 * size)
    low = complex(places.real.min() - margin, places.imag.min() - margin)
    high = complex(places.real.max() + margin, places.imag.max() + margin)
    window = without_hinterland(model, shaped(low, high, None))
    corners = complex(window.x[0], window.y[0]), complex(window.x[1], window.y[1])
    return window if aspect is None else shaped(*corners, aspect)


def without_hinterland(model: FlowModel, window: Window) -> Window:
    """The window without the land that lies further than LAND_STRIP from the water in it."""
    x, y = (np.linspace(*side, SAMPLES) for side in (window.x, window.y))
    wet = model.wet(x[None, :] + 1j * y[:, None])
    if not wet.any():
        return window
    strip = LAND_STRIP * (window.x[1] - window.x[0])
    columns, rows = x[wet.any(axis=0)], y[wet.any(axis=1)]
    return Window(
        (max(window.x[0], float(columns[0]) - strip), min(window.x[1], float(columns[-1]) + strip)),
        (max(window.y[0], float(rows[0]) - strip), min(window.y[1], float(rows[-1]) + strip)),
    )


def shaped(low: complex, high: complex, aspect: float | None) -> Window:
    """Window round a rectangle, widened to an aspect."""
    width, height = high.real - low.real, high.imag - low.imag
    wanted = min(max(height / width, FLATTEST), STEEPEST) if aspect is None else aspect
    width, height = max(width, height / wanted), max(height, width * wanted)
    middle = (low + high) / 2
    return Window(
        (middle.real - width / 2, middle.real + width / 2),
        (middle.imag - height / 2, middle.imag + height / 2),
    )


def site_places(model: FlowModel) -> ComplexArray:
    """Places that must be seen: elements with the reach of their capture zones, structures [m]."""
    places: list[complex] = []
    for singularity in model.singularities:
        places.extend(around(singularity.at, capture_reach(model, singularity.owner)))
    for line in model.lines:
        reach = capture_reach(model, line.owner)
        places.extend([*around(line.start, reach), *around(line.end, reach)])
    for pier in model.piers:
        places.extend(around(pier.at, 2.5 * pier.radius))
    for ring in ring_lines(model.layout):
        places.extend(ring.tolist())
    for vortex in model.cores:
        places.extend(around(vortex.at, 1.5 * vortex.core.radius))
    if not places:
        places = [wall.point for wall in model.walls] or [0j]
    return np.array(places, dtype=np.complex128)


def around(place: complex, reach: float) -> list[complex]:
    """Corners of a square about a place."""
    return [place + reach * corner for corner in (1 + 1j, -1 + 1j, -1 - 1j, 1 - 1j)]


def capture_reach(model: FlowModel, owner: str) -> float:
    """Room for the capture zone of an element [m], at most the distance over which the site spreads."""
    element = next(element for element in model.layout.elements if element.name == owner)
    speed = abs(model.layout.ambient.velocity)
    strength = abs(outflow(element)) / model.layout.depth
    if speed == 0.0 or strength == 0.0:
        return 0.0
    return min(CAPTURE_REACHES * strength / (2 * np.pi * speed), 0.5 * site_reach(model))


def site_reach(model: FlowModel) -> float:
    """Size of a site [m]: how far its elements and piers spread, else the model's own scale."""
    places = [singularity.at for singularity in model.singularities]
    places += [end for line in model.lines for end in (line.start, line.end)]
    places += [pier.at for pier in model.piers]
    return (extent(np.array(places, dtype=np.complex128)) if places else 0.0) or model.scale


def wall_places(model: FlowModel, places: ComplexArray, near: float) -> ComplexArray:
    """Points of the walls nearest to the places, where they are nearer than `near` [m]."""
    found = [np.asarray(wall.nearest(places)) for wall in model.walls]
    kept = [points[np.abs(points - places) <= near] for points in found]
    return np.concatenate(kept) if kept else places[:0]


def extent(places: ComplexArray) -> float:
    """Larger side of the rectangle about the places [m]."""
    return float(max(np.ptp(places.real), np.ptp(places.imag)))

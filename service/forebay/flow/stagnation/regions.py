"""Where a search without a far-field count looks: a rectangle of the mapped plane, walls included."""

import math
from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import Surveyed
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.bounds import exponent_of
from forebay.flow.stagnation.result import Window

_WIDTHS = 4.0 * math.pi
"""Margin beyond the outermost feature in a channel, dead end or corner: four widths [-]."""

_SIZES = 3.0
"""Margin in unbounded water, in sizes of the layout [-]."""

_FARTHEST = 100.0
"""Largest margin in sizes of the layout, however weak the current [-]."""

_PAD = 1e-3
"""A feature nearer to an edge than this part of the region is taken in whole [-]."""


_NEAREST_TO_VERTEX = 1e-7
"""Distance from a corner's vertex, over the layout's scale, at which a region ends [-]."""


@dataclass(frozen=True, slots=True)
class Region:
    """Rectangle left <= Re tau <= right, bottom <= Im tau <= top [-]; sides that are walls are not edges.

    edges : names of the sides that lie in the water: "left", "right", "bottom", "top"
    """

    left: float
    right: float
    bottom: float
    top: float
    edges: tuple[str, ...]

    @property
    def size(self) -> float:
        """Longer side [-]."""
        return max(self.right - self.left, self.top - self.bottom)

    def path(self, edge: str) -> ComplexArray:
        """The edge as a polyline of 65 points with the region on its left [-]."""
        corners = {
            "bottom": (complex(self.left, self.bottom), complex(self.right, self.bottom)),
            "right": (complex(self.right, self.bottom), complex(self.right, self.top)),
            "top": (complex(self.right, self.top), complex(self.left, self.top)),
            "left": (complex(self.left, self.top), complex(self.left, self.bottom)),
        }
        start, end = corners[edge]
        return np.asarray(start + (end - start) * np.linspace(0.0, 1.0, 65), dtype=np.complex128)

    def widened(self, part: float) -> "Region":
        """The region with every edge in the water moved outwards by a part of its size."""
        step = part * self.size
        return replace(
            self,
            left=self.left - step if "left" in self.edges else self.left,
            right=self.right + step if "right" in self.edges else self.right,
            bottom=self.bottom - step if "bottom" in self.edges else self.bottom,
            top=self.top + step if "top" in self.edges else self.top,
        )


def features(model: FlowModel) -> list[ComplexArray]:
    """Outlines of everything that stands in the water, in the mapped plane: points, lines, circles."""
    ring = np.exp(2j * np.pi * np.arange(64) / 64)
    outlines = [np.array([element.at]) for element in model.singularities]
    outlines += [line.start + (line.end - line.start) * np.linspace(0.0, 1.0, 65) for line in model.lines]
    outlines += [pier.at + 1.02 * pier.radius * ring for pier in model.piers]
    outlines += [core.at + core.core.radius * ring for core in model.cores]
    outlines += [solid.vertices for solid in model.rings if solid.is_solid]
    still = _ambient_null(model)
    if still is not None:
        outlines.append(np.array([still]))
    return [np.asarray(model.frame.map.forward(outline), dtype=np.complex128) for outline in outlines]


def _ambient_null(model: FlowModel) -> complex | None:
    """Where the ambient current with its gradient stands still, if in the water and not far away."""
    ambient = model.layout.ambient
    matrix = np.array(ambient.gradient)
    if abs(np.linalg.det(matrix)) <= 1e-12 * float(np.sum(matrix * matrix)) or not ambient.has_gradient:
        return None
    away = np.linalg.solve(matrix, -np.array([ambient.velocity.real, ambient.velocity.imag]))
    at = ambient.at + complex(away[0], away[1])
    near = abs(at - ambient.at) < 1e3 * model.scale
    if (
        not model.frame.map.affine
    ):  # in the vertex itself it has no place in the mapped plane, and is looked at anyway
        near &= abs(at - model.walls[0].point) > 1e-3 * model.scale
    return at if near and bool(model.wet(np.array([at]))[0]) else None


def default_region(model: FlowModel) -> Region:
    """A generous region about all features.

    Channel, dead end and corner: four widths (in a corner: four in the logarithm) beyond the outermost
    feature.
    Unbounded water: three sizes of the layout, and four times the distance at which the total strength
    matches the current, at most a hundred sizes. Basin, surveyed water: all of it.
    """
    if isinstance(model.layout.shore, Surveyed):
        return _whole(model, model.layout.shore)
    places = np.concatenate([*features(model), *_home(model)])
    low = complex(places.real.min(), places.imag.min())
    high = complex(places.real.max(), places.imag.max())
    frame = model.frame
    if frame.kappa > 0.0:
        return _fitted(model, low - _WIDTHS, high + _WIDTHS)
    margin = _SIZES * model.scale
    speed = abs(model.layout.ambient.velocity)
    if speed > 0.0:
        margin = min(max(margin, 4.0 * _total_strength(model) / speed), _FARTHEST * model.scale)
    return _fitted(model, low - margin * (1 + 1j), high + margin * (1 + 1j))


def _whole(model: FlowModel, shore: Surveyed) -> Region:
    """A rectangle round surveyed water; none of its sides is an edge, the water ends before."""
    tau = model.frame.map.forward(np.array(shore.outer, dtype=np.complex128))
    pad = _PAD * max(float(np.ptp(tau.real)), float(np.ptp(tau.imag)))
    return Region(
        float(tau.real.min()) - pad,
        float(tau.real.max()) + pad,
        float(tau.imag.min()) - pad,
        float(tau.imag.max()) + pad,
        (),
    )


def _home(model: FlowModel) -> list[ComplexArray]:
    if model.frame.closed:
        return [np.zeros(1, dtype=np.complex128)]
    return [] if features(model) else [np.zeros(1, dtype=np.complex128)]


def _total_strength(model: FlowModel) -> float:
    """Sum of |g| of all elements, doublets left out [m2/s]."""
    points = sum(abs(element.strength) for element in model.singularities)
    lines = sum(abs(line.flux) * abs(line.end - line.start) for line in model.lines)
    circulations = sum(abs(pier.circulation) for pier in model.piers)
    return float(points + (lines + circulations) / (2.0 * math.pi))


def region_of(model: FlowModel, window: Window) -> Region:
    """The region that covers a window of the site, grown until no feature is cut; surveyed water whole."""
    if isinstance(model.layout.shore, Surveyed):
        return _whole(model, model.layout.shore)
    x, y = np.linspace(*window.x, 65), np.linspace(*window.y, 65)
    inside = (x[:, None] + 1j * y[None, :]).ravel()
    wet = inside[model.wet(inside)]
    if wet.size == 0:
        return Region(0.0, 0.0, 0.0, 0.0, ())
    tau = model.frame.map.forward(wet)
    tau = tau[np.isfinite(tau.real)]
    step = 1.0 / 64.0
    low = complex(tau.real.min(), tau.imag.min())
    high = complex(tau.real.max(), tau.imag.max())
    if model.frame.map.affine:
        corners = model.frame.map.forward(
            np.array([complex(a, b) for a in window.x for b in window.y], dtype=np.complex128)
        )
        low = complex(max(low.real - step * abs(high - low), corners.real.min()), corners.imag.min())
        high = complex(min(high.real + step * abs(high - low), corners.real.max()), corners.imag.max())
    else:
        low, high = low - 0.25, high + 0.25
        if window.contains(model.walls[0].point):
            low = complex(min([low.real, *(f.real.min() for f in features(model))]) - _WIDTHS, 0.0)
    return _grown(model, _fitted(model, low, high))


def _fitted(model: FlowModel, low: complex, high: complex) -> Region:
    """The rectangle cut to the water, with walls as sides where it reaches them."""
    frame = model.frame
    left, right, bottom, top = low.real, high.real, low.imag, high.imag
    edges = ["left", "right", "bottom", "top"]
    if frame.mirrored and frame.kappa > 0.0:
        bottom, top = 0.0, math.pi
        edges = ["left", "right"]
    elif frame.mirrored and bottom <= 0.03 * max(top - bottom, right - left):
        bottom = 0.0
        edges.remove("bottom")
    if not frame.map.affine:
        bank = model.walls[0]
        nearest = np.asarray(bank.point + _NEAREST_TO_VERTEX * model.scale * bank.direction)
        left = max(left, float(frame.map.forward(nearest).real))
    if frame.closed:
        left = 0.0
        edges.remove("left")
        if math.isfinite(frame.length):
            right = frame.length
            edges.remove("right")
    return Region(left, right, bottom, top, tuple(edges))


def _grown(model: FlowModel, region: Region) -> Region:
    """The region grown until every feature lies well inside or well outside."""
    outlines = features(model)
    for _ in range(len(outlines) + 1):
        cut = [outline for outline in outlines if _is_cut(region, outline)]
        if not cut:
            break
        places = np.concatenate(cut)
        pad = 2.0 * _PAD * region.size
        low = complex(min(region.left, places.real.min() - pad), min(region.bottom, places.imag.min() - pad))
        high = complex(max(region.right, places.real.max() + pad), max(region.top, places.imag.max() + pad))
        region = _fitted(model, low, high)
    return region


def _is_cut(region: Region, outline: ComplexArray) -> bool:
    pad = _PAD * region.size
    x, y = outline.real, outline.imag
    beyond = (
        ("left" in region.edges and x.max() < region.left - pad)
        or ("right" in region.edges and x.min() > region.right + pad)
        or ("bottom" in region.edges and y.max() < region.bottom - pad)
        or ("top" in region.edges and y.min() > region.top + pad)
    )
    inside = (
        ("left" not in region.edges or x.min() > region.left + pad)
        and ("right" not in region.edges or x.max() < region.right - pad)
        and ("bottom" not in region.edges or y.min() > region.bottom + pad)
        and ("top" not in region.edges or y.max() < region.top - pad)
    )
    return not (beyond or inside)


def site_radius(model: FlowModel, z: ComplexArray, radius: FloatArray | float) -> FloatArray:
    """Radius in the site that holds the image of a disc of the mapped plane about tau(z), shape of z [m]."""
    rate = np.abs(model.frame.map.slope(z))
    n = exponent_of(model.frame)
    site = radius / rate if model.frame.map.affine else n * np.expm1(radius / n) / rate
    return np.asarray(site, dtype=np.float64)

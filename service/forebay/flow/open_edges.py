"""Where a streamline has left surveyed water for good: its open edges."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.far_field import FarEnd, far_end
from forebay.flow.layout import Surveyed
from forebay.flow.model import FlowModel

_TOUCH = 1e-9
"""Distance from an open edge, over its length, at which it is reached [-]."""


@dataclass(frozen=True, slots=True)
class OpenEdges:
    """The straight parts of the open edges, water on their left, shape (k,) each.

    ends : one for every open edge, in the layout's order
    centre, radius : middle [m] and half-size [m] of the water
    start, end : ends of the parts [m];  index : the open edge that each belongs to
    """

    ends: tuple[FarEnd, ...]
    centre: complex
    radius: float
    start: ComplexArray
    end: ComplexArray
    index: IntArray

    @property
    def is_round(self) -> bool:
        """The far field is no circle."""
        return False

    def reached(self, z: ComplexArray, heading: ComplexArray, *, forward: bool) -> IntArray:
        """Index of the end that each point has reached, -1 for none.

        z : shape (n,) [m];  heading : unit direction of progress;  forward : has no say, the heading tells
        """
        del forward
        local = (z[:, None] - self.start) / (self.end - self.start)
        on_edge = (np.abs(local.imag) <= _TOUCH) & (local.real >= -_TOUCH) & (local.real <= 1.0 + _TOUCH)
        outward = (heading[:, None] / (self.end - self.start)).imag < 0.0
        met = on_edge & outward
        if self.index.size == 0:
            return np.full(z.shape, -1, dtype=np.int64)
        return np.asarray(np.where(met.any(axis=1), self.index[np.argmax(met, axis=1)], -1), dtype=np.int64)

    def ahead(self, z: ComplexArray, heading: ComplexArray) -> FloatArray:
        """Distance along the heading to the nearest open edge, shape (n,) [m]; inf where none lies ahead."""
        local = (z[:, None] - self.start) / (self.end - self.start)
        slope = heading[:, None] / (self.end - self.start)
        with np.errstate(divide="ignore", invalid="ignore"):
            steps = -local.imag / slope.imag
            at = local.real + steps * slope.real
        facing = (slope.imag < 0.0) & (steps >= 0.0) & (at >= 0.0) & (at <= 1.0)
        return np.asarray(np.where(facing, steps, np.inf).min(axis=1, initial=np.inf), dtype=np.float64)


def open_edges_of(model: FlowModel, shore: Surveyed) -> OpenEdges:
    """Open edges of a model's surveyed water."""
    outer = np.array(shore.outer, dtype=np.complex128)
    index = np.repeat(np.arange(len(shore.edges)), [edge.count for edge in shore.edges])
    first = [(edge.first + np.arange(edge.count)) % outer.size for edge in shore.edges]
    from_ = np.concatenate(first) if first else np.empty(0, dtype=np.int64)
    low = complex(outer.real.min(), outer.imag.min())
    high = complex(outer.real.max(), outer.imag.max())
    return OpenEdges(
        ends=tuple(far_end(model, k) for k in range(len(model.ends))),
        centre=0.5 * (low + high),
        radius=0.5 * abs(high - low),
        start=outer[from_],
        end=outer[(from_ + 1) % outer.size],
        index=np.asarray(index, dtype=np.int64),
    )

"""A flow with the streamlines that divide released water.

Water on the two sides of a streamline that runs into a stagnation point goes different ways beyond it, so
that fate and travel time change only there. Such streamlines are traced against the flow from every
stagnation point (see `dividing`).
"""

from dataclasses import dataclass
from math import inf

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.model import FlowModel
from forebay.flow.surroundings import Surroundings
from forebay.flow.traces import Traces

_NEAR = 1e-2
"""Distance, over the scale, below which the distance to a dividing streamline is taken from psi [-]."""


@dataclass(frozen=True, slots=True)
class Scene:
    """What all releases of one layout have in common.

    complete : whether every stagnation point is known
    paths : dividing streamlines upstream of their stagnation points, from there outward [m], then those
        upstream of the ends of transects, which part what crosses a transect from what goes by
    traces : of the same, for their ends
    divides : how many of them, the first, run into a stagnation point
    """

    model: FlowModel
    surroundings: Surroundings
    complete: bool
    paths: tuple[ComplexArray, ...]
    traces: Traces
    divides: int

    @property
    def reference(self) -> float:
        """Flux that counts as one: largest speed at a far end times scale, and all discharges [m2/s]."""
        model = self.model
        points = sum(2.0 * np.pi * abs(s.strength) for s in model.singularities)
        lines = sum(abs(line.flux) * abs(line.end - line.start) for line in model.lines)
        return float(max(points + lines, abs(model.layout.ambient.velocity) * model.scale, 1e-300))


def divide_distance(scene: Scene, z: complex) -> tuple[float, float]:
    """Distance from z to the nearest dividing streamline [m] and the flux between [m2/s]; inf without one."""
    nearest = [_nearest(path, z) for path in scene.paths[: scene.divides] if path.size > 1]
    if not nearest:
        return inf, inf
    distance, foot = min(nearest, key=lambda pair: pair[0])
    if distance > _NEAR * scene.model.scale:
        return distance, inf
    flux = abs(float(scene.model.chord(np.array([foot]), np.array([z])).imag[0])) if foot != z else 0.0
    speed = abs(complex(scene.model.velocity(np.array([z]))[0]))
    return (min(distance, flux / speed) if speed > 0.0 else distance), flux


def _nearest(path: ComplexArray, z: complex) -> tuple[float, complex]:
    """Distance to a polyline [m] and the nearest of its points."""
    span = path[1:] - path[:-1]
    with np.errstate(divide="ignore", invalid="ignore"):
        along = ((z - path[:-1]) * np.conj(span)).real / np.abs(span) ** 2
    feet = path[:-1] + np.clip(np.nan_to_num(along), 0.0, 1.0) * span
    k = int(np.argmin(np.abs(feet - z)))
    ends = path[k : k + 2]
    return float(abs(feet[k] - z)), complex(ends[int(np.argmin(np.abs(ends - z)))])

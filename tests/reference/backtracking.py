"""Shares of an intake's water by counting: streamlines followed back from it with a plain Runge-Kutta method.

Good to one streamline in N per dividing streamline, and free of everything that the program does about
saddles and arrival angles. The velocity is the model's, which the oracles have checked.
"""

from collections import Counter

import numpy as np

from forebay.flow.layout import Channel, DeadEnd, Layout, Sink, Source
from forebay.flow.model import FlowModel, compile_layout
from support.sites import SPAN, ComplexArray

START = 1e-5 * SPAN
"""Radius round the intake on which streamlines start, evenly spaced in angle, so evenly in discharge."""

CAPTURE = 1e-3 * SPAN
"""A streamline this near to a source comes from it: nothing else lies that near."""

FAR = 60 * SPAN
STEPS = 4000


def counted_shares(layout: Layout, intake: str, count: int = 720) -> dict[str, float]:
    """Share of the streamlines of one point intake by origin; `lost` for those that reached none."""
    model = compile_layout(layout)
    sink = next(element for element in layout.elements if element.name == intake)
    assert isinstance(sink, Sink)
    angles = 2 * np.pi * (np.arange(count) + 0.5) / count
    z = sink.at + START * np.exp(1j * angles)
    z = z[model.wet(z)]
    origins = _followed_back(model, z)
    return {name: number / len(z) for name, number in Counter(origins).items()}


def _followed_back(model: FlowModel, z: ComplexArray) -> list[str]:
    sources = [element for element in model.layout.elements if isinstance(element, Source)]
    places = np.array([singularity.at for singularity in model.singularities])
    origins = np.full(len(z), "lost", dtype=object)
    running = np.arange(len(z))
    z = z.copy()
    for _ in range(STEPS):
        here = z[running]
        nearest = np.abs(here[:, None] - places).min(axis=1)
        for pier in model.piers:  # curvature of the wall bounds the step as a singularity does
            nearest = np.minimum(nearest, np.abs(here - pier.at) - 0.6 * pier.radius)
        z[running] = _step(model, here, 0.1 * nearest)
        arrived = np.zeros(len(running), dtype=bool)
        for source in sources:
            there = np.abs(z[running] - source.at) < CAPTURE
            origins[running[there]] = source.name
            arrived |= there
        away = np.abs(z[running] - places.mean()) > FAR
        origins[running[away]] = [_end(model.layout, complex(at)) for at in z[running[away]]]
        running = running[~(arrived | away)]
        if not len(running):
            break
    return list(origins)


def _step(model: FlowModel, z: ComplexArray, length: np.ndarray) -> ComplexArray:
    """One classical Runge-Kutta step upstream along the unit direction of the velocity."""

    def upstream(at: ComplexArray) -> ComplexArray:
        velocity = np.conj(model.velocity(at))
        return np.asarray(-velocity / np.abs(velocity), dtype=np.complex128)

    k1 = upstream(z)
    k2 = upstream(z + length / 2 * k1)
    k3 = upstream(z + length / 2 * k2)
    k4 = upstream(z + length * k3)
    return np.asarray(z + length / 6 * (k1 + 2 * k2 + 2 * k3 + k4), dtype=np.complex128)


def _end(layout: Layout, z: complex) -> str:
    """Name of the far end in whose direction z lies."""
    match layout.shore:
        case Channel(point=point, along=along):
            current = (layout.ambient.velocity * along.conjugate()).real
            side = ((z - point) * along.conjugate()).real
            return "upstream" if side * (current or 1.0) < 0 else "downstream"
        case DeadEnd():
            return "open-end"
        case _:
            return "ambient"

"""Right-angled corners of dead ends and basins: water stands still there, whatever else it does.

The flow is its own mirror image in both walls of a corner, so the velocity is the opposite of itself there.
These zeros carry no weight in the count (the mirror-closed water is smooth at a corner), and far from every
element the velocity about them is too small to be searched; so they are named rather than found.
"""

import numpy as np

from forebay.flow.model import FlowModel
from forebay.flow.placement import TOUCHING
from forebay.flow.stagnation.describe import Zero, wall_name


def corner_zeros(model: FlowModel, found: list[Zero]) -> list[Zero]:
    """Corners that are not among the zeros found, each with its two walls.

    A corner on which an end of a line element stands is none: the water there flows into or out of the line.
    """
    frame = model.frame
    if not frame.closed:
        return []
    ends = [0.0] if not np.isfinite(frame.length) else [0.0, frame.length]
    places = [complex(frame.map.inverse(np.asarray(complex(x, y)))) for x in ends for y in (0.0, np.pi)]
    taken = [zero.at for zero in found] + [at for line in model.lines for at in (line.start, line.end)]
    reach = TOUCHING * model.scale
    radii = [zero.radius for zero in found] + [0.0] * (2 * len(model.lines))
    free = [
        at
        for at in places
        if not any(abs(at - other) <= reach + radius for other, radius in zip(taken, radii, strict=True))
    ]
    return [Zero(at, wall_name(model, at), 0.0, 1, 0) for at in free]

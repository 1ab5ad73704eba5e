"""How wrong the depth mean is near an opening, and how far from it that matters."""

from functools import lru_cache

import numpy as np
from scipy.optimize import brentq

from forebay.flow.point_intake.column import mean_ratio

HEIGHTS = 33
"""Heights at which the ratio is looked at, bed and surface included, besides the opening's own."""

NEAREST, FARTHEST = 1e-3, 8.0
"""Distances over the depth between which a reach is looked for [-]."""


def depth_mean_error(distance: float, elevation: float, depth: float) -> float:
    """Largest |u_r 2 pi r h / Q - 1| over the height at a distance from an opening [-].

    distance, elevation, depth : [m]; distances below a thousandth of the depth count as that
    """
    z = np.append(np.linspace(0.0, 1.0, HEIGHTS), elevation / depth)
    r = np.full(z.shape, max(distance / depth, NEAREST))
    return float(np.max(np.abs(mean_ratio(r, z, elevation / depth, 1.0) - 1.0)))


def near_field_reach(elevation: float, depth: float, tolerated: float) -> float:
    """Distance beyond which the depth mean is wrong by less than `tolerated` at every height [m].

    One depth and a little for an opening at mid-depth, twice that at the bed or surface, for 1 %.
    """
    return depth * _relative_reach(elevation / depth, tolerated)


@lru_cache(maxsize=1024)
def _relative_reach(elevation: float, tolerated: float) -> float:
    def excess(distance: float) -> float:
        return depth_mean_error(distance, elevation, 1.0) - tolerated

    return float(brentq(excess, NEAREST, FARTHEST, xtol=1e-12))

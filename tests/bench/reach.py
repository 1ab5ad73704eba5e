"""The surveyed reach of the tests' data in a plane, near enough for times."""

import json
from pathlib import Path

import numpy as np

from forebay.flow.layout import EdgeProfile, Island, OpenEdge, Surveyed

DATA = Path(__file__).parents[1] / "data" / "east-river-reach.geojson"
DEGREE = 111_194.9
"""Length of a degree of latitude on a sphere of 6371 km [m]."""


def reach(discharge: float) -> Surveyed:
    """Water between two cut lines with its islands, a discharge [m3/s] through the first line."""
    features = json.loads(DATA.read_text())["features"]
    rings = [np.array(ring[:-1]) for ring in features[0]["geometry"]["coordinates"]]
    middle = rings[0].mean(axis=0)

    def local(points: np.ndarray) -> np.ndarray:
        east, north = ((np.asarray(points) - middle) * DEGREE).T
        return np.asarray(east * np.cos(np.deg2rad(middle[1])) + 1j * north)

    outer, *islands = (_turned(local(ring), 1 if k == 0 else -1) for k, ring in enumerate(rings))
    edges = []
    for k, feature in enumerate(features[1:]):
        cut = local(np.array(feature["geometry"]["coordinates"]))
        low, high = sorted(int(np.argmin(np.abs(outer - z))) for z in cut[[0, -1]])
        first = low if high - low == 1 else high
        given = discharge if k == 0 else None
        edges.append(OpenEdge(f"cut {k}", first, 1, given, EdgeProfile.EQUIPOTENTIAL))
    named = tuple(Island(f"island {k}", tuple(ring.tolist())) for k, ring in enumerate(islands))
    return Surveyed(tuple(outer.tolist()), named, tuple(edges))


def _turned(points: np.ndarray, sense: int) -> np.ndarray:
    """Vertices anticlockwise for 1, clockwise for -1."""
    area = np.sum((np.conj(points) * np.roll(points, -1)).imag)
    return points if area * sense > 0 else points[::-1]

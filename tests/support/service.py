"""The service as a client sees it: posts to the routes and hands back results as arrays."""

from collections.abc import Sequence
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray
from starlette.testclient import TestClient

FloatArray = NDArray[np.float64]
Json = dict[str, Any]

ALL_DIGITS = 17
"""Digits asked for, so that what is compared is the number and not its rounding to nine digits."""


def points_of(z: Sequence[complex] | NDArray[np.complex128] | complex) -> list[list[float]]:
    """Complex positions as [[x, y], ...]."""
    return [[float(point.real), float(point.imag)] for point in np.atleast_1d(np.asarray(z, dtype=complex))]


class Service:
    """The compute routes, one method each; every method insists on a 200."""

    def __init__(self, client: TestClient) -> None:
        self.client = client

    def post(self, route: str, body: Json) -> Json:
        """Post a body asking for all digits; return the whole envelope."""
        response = self.client.post(f"/v1/{route}", json={"digits": ALL_DIGITS, **body})
        assert response.status_code == 200, response.text
        envelope: Json = response.json()
        return envelope

    def get(self, route: str, **query: float | str) -> Json:
        """Get a catalogue."""
        response = self.client.get(f"/v1/{route}", params=query)
        assert response.status_code == 200, response.text
        envelope: Json = response.json()
        return envelope

    def sample(
        self, layout: Json, z: Sequence[complex] | complex, quantities: Sequence[str] = (), **extra: Any
    ) -> dict[str, FloatArray]:
        """Columns at points; a null is a failure here."""
        body = {"layout": layout, "at": {"points": points_of(z)}, "quantities": list(quantities), **extra}
        result = self.post("field/sample", body)["result"]
        names = ("x", "y", "u", "v", "speed", *quantities)
        return {name: np.array(result[name], dtype=float) for name in names}

    def velocity(self, layout: Json, z: Sequence[complex] | complex, **extra: Any) -> NDArray[np.complex128]:
        """u + iv at points."""
        columns = self.sample(layout, z, **extra)
        return np.asarray(columns["u"] + 1j * columns["v"])

    def stagnation(self, layout: Json, **extra: Any) -> Json:
        """Stagnation points; the search has to be complete."""
        result: Json = self.post("stagnation/search", {"layout": layout, **extra})["result"]
        assert result["complete"], result
        return result

    def stagnation_places(self, layout: Json, **extra: Any) -> list[complex]:
        """Places of the stagnation points, sorted by x and then y."""
        found = [complex(point["x"], point["y"]) for point in self.stagnation(layout, **extra)["points"]]
        return sorted(found, key=lambda z: (round(z.real, 6), z.imag))

    def contours(self, layout: Json, contours: list[Json], **extra: Any) -> list[Json]:
        """Contour integrals in the order asked for."""
        body = {"layout": layout, "contours": contours, **extra}
        answers: list[Json] = self.post("contour/integrate", body)["result"]["contours"]
        return answers

    def flux(self, layout: Json, places: Sequence[complex], **extra: Any) -> float:
        """Flux per unit depth through an open polyline, positive to the right of travel."""
        contour = {"name": "gate", "polyline": points_of(places), "closed": False}
        return float(self.contours(layout, [contour], **extra)[0]["flux"])

    def withdrawal(self, layout: Json, **extra: Any) -> dict[str, Json]:
        """What each intake draws, by name."""
        intakes = self.post("withdrawal/trace", {"layout": layout, **extra})["result"]["intakes"]
        return {intake["name"]: intake for intake in intakes}

    def arrivals(self, layout: Json, releases: list[Json], **extra: Any) -> list[Json]:
        """What becomes of releases, in the order asked for."""
        body = {"layout": layout, "releases": releases, **extra}
        answers: list[Json] = self.post("spill/arrivals", body)["result"]["releases"]
        return answers

    def stress(self, fluid: Json, states: list[Json], **extra: Any) -> list[Json]:
        """Stress states in the order asked for."""
        body = {"fluid": fluid, "states": states, **extra}
        answers: list[Json] = self.post("stress/tensor", body)["result"]["states"]
        return answers


def share_of(intake: Json, origin: str) -> float:
    """Share of an intake's water that comes from one origin; 0 if it is not listed."""
    return float(sum(share["share"] for share in intake["shares"] if share["from"] == origin))


def crossing_at_x(line: Sequence[Sequence[float]], x: float) -> list[float]:
    """y of every crossing of a polyline with the vertical through x."""
    found = []
    for (x1, y1), (x2, y2) in pairwise(line):
        if (x1 - x) * (x2 - x) <= 0 and x1 != x2:
            found.append(y1 + (y2 - y1) * (x - x1) / (x2 - x1))
    return found


def crossing_at_y(line: Sequence[Sequence[float]], y: float) -> list[float]:
    """x of every crossing of a polyline with the horizontal through y."""
    return crossing_at_x([[b, a] for a, b in line], y)

"""What a stagnation search says: frozen values, SI units, positions as complex x + iy [m]."""

from dataclasses import dataclass
from enum import StrEnum

WATER = "water"
"""Value of `on` for a stagnation point away from every wall."""


class StagnationKind(StrEnum):
    """Local shape of the flow at a stagnation point."""

    SADDLE = "saddle"
    WALL = "wall"
    CENTRE = "centre"
    DEGENERATE = "degenerate"


class SearchMethod(StrEnum):
    """How the points were found and counted."""

    DEGREE = "degree-of-rational-velocity"
    WINDING = "certified-quadtree-and-winding"


@dataclass(frozen=True, slots=True)
class Window:
    """Rectangle of the plan: `x` and `y` from smaller to larger [m]."""

    x: tuple[float, float]
    y: tuple[float, float]

    def contains(self, at: complex) -> bool:
        """Whether a place lies in the rectangle, edges included."""
        return self.x[0] <= at.real <= self.x[1] and self.y[0] <= at.imag <= self.y[1]


@dataclass(frozen=True, slots=True)
class StagnationPoint:
    """One place where the velocity vanishes.

    at : place, x + iy [m];  on : name of the wall or pier, else "water"
    residual_speed : |W| computed there [m/s], rounding of a zero
    strain_rate : principal strain rate |dW/dz| [1/s]; nan at a vertex where it is unbounded
    outflow_deg : direction along which water leaves, in [0, 360), of two opposite ones in the water the one
        in [0, 180); nan where none exists (centre, degenerate point) [deg]
    stream_function : psi there [m2/s], on the branch of `FlowModel.potential`
    inclusion_radius : the true zero lies within this distance of `at` [m]
    multiplicity : number of simple zeros that coincide here
    is_artefact : the zero belongs to the end of a line element of constant strength, not to the site
    """

    at: complex
    kind: StagnationKind
    on: str
    residual_speed: float
    strain_rate: float
    outflow_deg: float
    stream_function: float
    inclusion_radius: float
    multiplicity: int = 1
    is_artefact: bool = False


@dataclass(frozen=True, slots=True)
class StagnationSearch:
    """All stagnation points of a layout or window with their independent count.

    points : sorted by x, then y
    expected_count : number of points that the independent count implies
    found_count : number of points found, `len(points)`
    complete : whether every point is certified and the weights found add up to `degree`
    degree : zeros of the velocity on the mirror-closed water, from its poles and far field, or from its
        turning along the edge of the searched region; a zero in the water weighs 2, one on a wall 1
    weight : the same sum over what was found
    unresolved : places that the search could neither clear nor resolve; empty when complete
    """

    points: tuple[StagnationPoint, ...]
    expected_count: int
    found_count: int
    complete: bool
    method: SearchMethod
    degree: int
    weight: int
    unresolved: tuple[Window, ...] = ()

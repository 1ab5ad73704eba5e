"""What can be wrong with surveyed geometry; each path leads to the ring, vertex or edge at fault."""

from forebay.flow.errors import LayoutError


class UnknownSystemError(LayoutError):
    """The code names no coordinate system that the service knows, or none in two dimensions on the ground."""

    code = "unknown-coordinate-system"
    title = "No such coordinate system"


class UnsuitableGridError(LayoutError):
    """Lengths or angles in the grid are not those on the ground, so that no flow can be computed in it."""

    code = "unsuitable-grid"
    title = "The grid does not serve as a plan"


class OutsideSystemError(LayoutError):
    """A position has no place in the coordinate system, or the site lies across the antimeridian."""

    code = "outside-coordinate-system"
    title = "A position lies outside its coordinate system"


class RingError(LayoutError):
    """A ring crosses or touches itself, or holds no area, and cannot be mended without changing the site."""

    code = "invalid-ring"
    title = "A ring is not the outline of an area"


class IslandError(LayoutError):
    """An island touches or crosses a bank or another island, or lies outside the water."""

    code = "island-not-free"
    title = "An island does not stand free in the water"


class UnknownIslandError(LayoutError):
    """A position that shall name an island lies in none of them, or in one that has a name already."""

    code = "unknown-island"
    title = "No island is there to be named"


class OpenEdgeError(LayoutError):
    """An open edge is no part of the outer ring, or shares a part with another, or leaves too much open."""

    code = "invalid-open-edge"
    title = "An open edge is no part of the outer ring of its own"

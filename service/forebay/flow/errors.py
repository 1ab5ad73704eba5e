"""Errors that a wrong request can cause; none of them knows HTTP."""

from typing import ClassVar

Path = tuple[str | int, ...]
"""Steps from the root of the request part at fault to the value, e.g. ("elements", 0, "at")."""


class FlowError(Exception):
    """Root of the errors whose cause lies in the request.

    code : permanent kebab-case name, also the last part of the problem's address
    title : one line, the same for every occurrence
    detail : what is wrong this time, with the numbers that matter
    path : where, as steps from the layout (`in_layout`) or from the request's root
    facts : further numbers a client can use
    """

    code: ClassVar[str]
    title: ClassVar[str]
    in_layout: ClassVar[bool] = False

    def __init__(self, detail: str, path: Path = (), **facts: float | str) -> None:
        super().__init__(detail)
        self.detail = detail
        self.path = path
        self.facts = facts


class LayoutError(FlowError):
    """The layout describes something that cannot be."""

    in_layout = True


class DuplicateNameError(LayoutError):
    """Two elements or structures share a name."""

    code = "duplicate-name"
    title = "Names within a layout must differ"


class ElementOnLandError(LayoutError):
    """An element or structure lies outside the water of its shore."""

    code = "element-on-land"
    title = "An element or structure lies on land"


class ElementMisplacedError(LayoutError):
    """An element stands where its kind cannot: a vortex on a bank, anything in the corner of two banks."""

    code = "element-misplaced"
    title = "An element stands where it cannot"


class ElementInStructureError(LayoutError):
    """An element lies inside or on a pier."""

    code = "element-in-structure"
    title = "An element lies inside a structure"


class OverlappingStructuresError(LayoutError):
    """Two structures, or a structure and a bank, overlap or touch."""

    code = "overlapping-structures"
    title = "Structures overlap or touch"


class CoincidentElementsError(LayoutError):
    """Two point elements stand at one place, so that neither has a field of its own."""

    code = "coincident-elements"
    title = "Two elements stand at the same place"


class CurrentThroughWallError(LayoutError):
    """The ambient current has a component through a wall of the shore."""

    code = "current-through-wall"
    title = "The ambient current crosses a wall"


class UnbalancedDischargeError(LayoutError):
    """A closed basin gains or loses water, so that no steady flow exists."""

    code = "unbalanced-discharge"
    title = "Discharges of a closed basin must balance"


class DivergentAmbientError(LayoutError):
    """The ambient gradient has a trace, which would create water everywhere."""

    code = "divergent-ambient"
    title = "The ambient gradient must have zero trace"


class UnsolvedStructureError(LayoutError):
    """The boundary condition on the structures could not be met to the tolerance."""

    code = "unsolved-structure"
    title = "The flow round the structures could not be solved"


class UnsolvableBoundaryError(LayoutError):
    """An outline or a surveyed shore for which no flow can be found: it shuts off water, or does not fit."""

    code = "unsolvable-boundary"
    title = "No flow exists or can be found round the outline"


class UnsolvedBoundaryError(LayoutError):
    """The flow round outlines or in surveyed water could not be found to a hundredth of the flow through."""

    code = "unsolved-boundary"
    title = "The flow along the walls could not be solved"


class UnknownNameError(FlowError):
    """A request names an element that the layout does not have, or of the wrong kind."""

    code = "unknown-name"
    title = "No such element in the layout"


class TooLargeError(FlowError):
    """The request asks for more than a published limit."""

    code = "too-large"
    title = "The request exceeds a limit of the service"

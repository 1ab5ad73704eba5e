"""What may be asked of a picture, and what comes back."""

from dataclasses import dataclass, field
from enum import StrEnum

from forebay.charts.units import SI, DisplayUnits
from forebay.flow.arrays import ComplexArray
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import StagnationPoint, Window

SMALLEST_SIZE = (640, 520)
"""Least width and height [px] at which everything is readable."""

LARGEST_SIZE = (4000, 4000)
"""Greatest width and height [px]: beyond, a picture takes more memory than a request may."""


class MediaType(StrEnum):
    """Picture formats."""

    SVG = "image/svg+xml"
    PNG = "image/png"


class Layer(StrEnum):
    """Parts of the picture that can be left out."""

    SPEED = "speed"
    STREAMLINES = "streamlines"
    EQUIPOTENTIALS = "equipotentials"
    DIVIDING_STREAMLINES = "dividing-streamlines"
    STAGNATION_POINTS = "stagnation-points"
    LABELS = "labels"


ALL_LAYERS = frozenset(Layer)


@dataclass(frozen=True, slots=True)
class FlowNetOptions:
    """Wishes for a flow net.

    media_type : SVG or PNG
    window : part of the plan to show [m]; None: chosen from elements, structures and banks
    title : first line of the picture
    size : width and height [px], from SMALLEST_SIZE to LARGEST_SIZE; None: 1200 px wide, height as needed
    units : units of every number in the picture
    layers : what to show beside banks and elements, which are always shown
    north : direction of true north in the plan, anticlockwise from +x [rad]; None: axis directions are shown
    """

    media_type: MediaType = MediaType.SVG
    window: Window | None = None
    title: str = "Flow net"
    size: tuple[int, int] | None = None
    units: DisplayUnits = SI
    layers: frozenset[Layer] = ALL_LAYERS
    north: float | None = None


@dataclass(frozen=True, slots=True)
class Scene:
    """What a flow net shows, all in SI.

    model : the flow;  window : the part of the plan shown [m]
    stagnation_points : those in the window
    dividing_streamlines : polylines [m]
    notes : sentences that the picture must carry beside its own
    """

    model: FlowModel
    window: Window
    stagnation_points: tuple[StagnationPoint, ...] = ()
    dividing_streamlines: tuple[ComplexArray, ...] = ()
    notes: tuple[str, ...] = field(default=())


@dataclass(frozen=True, slots=True)
class Picture:
    """A drawn picture: the same `data` for the same input."""

    media_type: MediaType
    data: bytes

"""Streamlines as asked for and as answered: rules of tracing, reasons for an end, results."""

from dataclasses import dataclass
from enum import StrEnum
from math import inf

from forebay.flow.arrays import ComplexArray, FloatArray


class Stop(StrEnum):
    """Why a streamline ended."""

    CAPTURED = "captured"
    FAR_END = "far-end"
    LEFT_REGION = "left-region"
    STAGNATES = "stagnates"
    CLOSED = "closed"
    WALL = "wall"
    STEP_LIMIT = "step-limit"


@dataclass(frozen=True, slots=True)
class TraceRules:
    """How to trace.

    forward : with the water, or against it
    tolerance : error of one step, in place and in time times speed, over the distance to the nearest site [-]
    largest_turn : change of direction in one step that makes the next one shorter [rad]
    most_steps : steps after which a line is given up
    region : radius about the far field's centre beyond which a line is not followed [m]
    keep_paths : whether to keep every point
    """

    forward: bool = True
    tolerance: float = 1e-6
    largest_turn: float = inf
    most_steps: int = 20000
    region: float = inf
    keep_paths: bool = False


@dataclass(frozen=True, slots=True)
class Crossing:
    """A streamline passing through a line element in the water.

    line : index into `Surroundings.lines`
    at : where it met the line, just off it on the side reached first [m]
    arriving, leaving : normal speed on the side reached first and on the other [m/s]
    time : travel time up to there [s]
    """

    line: int
    at: complex
    arriving: float
    leaving: float
    time: float


@dataclass(frozen=True, slots=True)
class Traces:
    """Where n streamlines went.

    ends : shape (n,), last points [m];  stops, names : reason, and the element or far end ("" without one)
    times : shape (n,), travel times, into a sink or out of a source to its very centre [s]
    drift : shape (n,), psi at the last point less psi at the first, exact [m2/s]
    crossings : of each line, in the order met
    paths, path_times : points [m] and times [s] of each line, empty unless asked for
    """

    ends: ComplexArray
    stops: tuple[Stop, ...]
    names: tuple[str, ...]
    times: FloatArray
    drift: FloatArray
    crossings: tuple[tuple[Crossing, ...], ...]
    paths: tuple[ComplexArray, ...] = ()
    path_times: tuple[FloatArray, ...] = ()

    def part(self, start: int, stop: int) -> "Traces":
        """The streamlines start <= i < stop."""
        where = slice(start, stop)
        return Traces(
            ends=self.ends[where],
            stops=self.stops[where],
            names=self.names[where],
            times=self.times[where],
            drift=self.drift[where],
            crossings=self.crossings[where],
            paths=self.paths[where],
            path_times=self.path_times[where],
        )

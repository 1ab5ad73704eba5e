"""What becomes of water at single places: where it goes, and which intakes and transects it meets when."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.arrivals.result import Outcome
from forebay.flow.arrivals.scene import Scene
from forebay.flow.arrivals.transits import Transect, transit_times
from forebay.flow.layout import LineSink, Sink
from forebay.flow.traces import Stop, TraceRules, Traces
from forebay.flow.tracing import trace_streamlines

INTAKE, TRANSECT = "intake", "transect"
"""Kinds of targets."""

Target = tuple[str, str]
"""Kind and name of what water meets."""

_ENDS = {
    Stop.FAR_END: Outcome.PASSES,
    Stop.LEFT_REGION: Outcome.PASSES,
    Stop.STAGNATES: Outcome.STAGNATES,
    Stop.CLOSED: Outcome.RECIRCULATES,
    Stop.WALL: Outcome.UNRESOLVED,
    Stop.STEP_LIMIT: Outcome.UNRESOLVED,
}
"""Outcome of every end of a streamline but that in an element."""


@dataclass(frozen=True, slots=True)
class Signature:
    """What all water between two neighbouring divides has in common.

    outcome, to : of what is left after every meeting, and its destination
    targets : intakes that take a part, in order, and transects crossed
    lines : line elements crossed
    """

    outcome: Outcome
    to: str
    targets: tuple[Target, ...]
    lines: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Fate:
    """One streamline's fate.

    times, shares : shape (targets,), when each target is met [s] and which part of the water it takes, or for
        a transect carries [-]
    left : part that goes on to the destination [-]
    """

    signature: Signature
    times: FloatArray
    shares: FloatArray
    left: float


@dataclass(frozen=True, slots=True)
class Follower:
    """Follows water downstream. tolerance : of the tracing, as in `TraceRules`."""

    scene: Scene
    transects: tuple[Transect, ...]
    tolerance: float

    def fates(self, z: ComplexArray, delay: FloatArray) -> list[Fate]:
        """Fates of water that is at places z, shape (n,) [m], after `delay`, shape (n,) [s]."""
        if z.size == 0:
            return []
        rules = TraceRules(tolerance=self.tolerance, keep_paths=bool(self.transects))
        traces = trace_streamlines(self.scene.model, z, surroundings=self.scene.surroundings, rules=rules)
        transits = transit_times(self.scene.model, self.transects, traces)
        return [self._fate(traces, i, float(delay[i]), transits[i]) for i in range(z.size)]

    def _fate(self, traces: Traces, i: int, delay: float, transits: dict[str, float]) -> Fate:
        met, left = self._met(traces, i)
        outcome, to = self._end(traces, i)
        taken = list(met)
        for name, time in transits.items():
            carried = 1.0 - sum(share for _, at, share in met if at < time)
            taken.append(((TRANSECT, name), time, carried))
        signature = Signature(
            outcome, to, tuple(row[0] for row in taken), tuple(c.line for c in traces.crossings[i])
        )
        times = np.array([row[1] for row in taken]) + delay
        return Fate(signature, times, np.array([row[2] for row in taken]), left)

    def _met(self, traces: Traces, i: int) -> tuple[list[tuple[Target, float, float]], float]:
        """Intakes met, with time and part taken, and the part left over."""
        lines, left = self.scene.surroundings.lines, 1.0
        met: list[tuple[Target, float, float]] = []
        for crossing in traces.crossings[i]:
            if lines.flux[crossing.line] < 0.0:
                goes_on = left * crossing.leaving / crossing.arriving
                met.append(((INTAKE, lines.owners[crossing.line]), crossing.time, left - goes_on))
                left = goes_on
        if self._end(traces, i)[0] is Outcome.CAPTURED:
            met.append(((INTAKE, traces.names[i]), float(traces.times[i]), left))
            left = 0.0
        return met, left

    def _end(self, traces: Traces, i: int) -> tuple[Outcome, str]:
        name, stop = traces.names[i], traces.stops[i]
        if stop is not Stop.CAPTURED:
            return _ENDS[stop], name
        element = next(e for e in self.scene.model.layout.elements if e.name == name)
        return (Outcome.CAPTURED if isinstance(element, Sink | LineSink) else Outcome.PASSES), name

"""Streamlines of many seeds at once, with travel time and an exact hold on the stream function.

dz/ds = conj(W)/|W|, dt/ds = 1/|W| by Dormand and Prince's pair of order 5(4) in the arclength s, one step
size per line. After each step the change of psi along the chord, which is exact, says how far the line has
strayed; it is moved back across the flow. Straying along the line changes no share and no zone. A line that
runs into a wall that was solved for, closer to it than the error of psi there, follows the wall.

References
----------
J. R. Dormand, P. J. Prince, A family of embedded Runge-Kutta formulae, J. Comp. Appl. Math. 6 (1980) 19-26.
"""

from dataclasses import dataclass, field
from math import inf

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.model import FlowModel
from forebay.flow.shoreline import Shoreline, Walk
from forebay.flow.surroundings import Surroundings
from forebay.flow.trace_state import Lines, Stride
from forebay.flow.traces import Crossing, Stop, TraceRules, Traces

_STAGES: FloatArray = np.array(
    [
        [1 / 5, 0, 0, 0, 0, 0],
        [3 / 40, 9 / 40, 0, 0, 0, 0],
        [44 / 45, -56 / 15, 32 / 9, 0, 0, 0],
        [19372 / 6561, -25360 / 2187, 64448 / 6561, -212 / 729, 0, 0],
        [9017 / 3168, -355 / 33, 46732 / 5247, 49 / 176, -5103 / 18656, 0],
        [35 / 384, 0, 500 / 1113, 125 / 192, -2187 / 6784, 11 / 84],
    ]
)
_DEFECT: FloatArray = np.array([71 / 57600, 0, -71 / 16695, 71 / 1920, -17253 / 339200, 22 / 525, -1 / 40])
"""Weights of the steps and of the difference between the two orders (Dormand and Prince 1980, table 2)."""

_REACH = 0.45
"""Largest step over the distance to the nearest site: chord and arc then pass on the same side of it [-]."""
_SHRINK, _GROW, _SAFETY = 0.2, 4.0, 0.9
_STILL = 1e-25
"""Speed over the speed of reference below which a line has come to rest [-]."""
_ABREAST = 1e-6
"""Distance ahead to a line element, over its length, within which a line beside its plane is there [-]."""
_CLOSED = 1e-10
"""Flux between a line and its own seed, over the strengths, below which the line has closed [-]."""
_STUCK = 1e-10
"""Step over the scale of the layout below which a line may have run into a wall that was solved for [-]."""
_WALKS = 64
"""Ways along walls after which a line is not carried on."""
_TINY = float(np.finfo(np.float64).tiny)
_LEAST_STEP = 1e-13
"""Step over the scale of the layout below which a line cannot proceed [-]."""


def trace_streamlines(
    model: FlowModel, seeds: ComplexArray, *, surroundings: Surroundings, rules: TraceRules
) -> Traces:
    """Streamlines through n seeds.

    Parameters
    ----------
    model : the flow
    seeds : shape (n,), in the water or on its walls, on no singularity [m]
    surroundings : what the lines can meet, from `surroundings.survey`
    rules : direction, tolerance and limits

    Returns
    -------
    Traces; every line has a named reason for its end, and a line given up says so.

    Notes
    -----
    Cost: 7 velocities and one chord per step and line. psi is held to rounding (a few 1e-16 of the strengths
    per step); positions along the line and times to about `tolerance` per step. The last piece into a point
    sink takes pi r2/q, corrected for the velocity of the rest of the flow.
    """
    run = _Run(model, surroundings, rules, _start(model, seeds, surroundings, rules))
    for _ in range(rules.most_steps):
        if run.lines.index.size == 0:
            break
        run.advance()
    return run.finished(seeds.size)


def _start(model: FlowModel, seeds: ComplexArray, surroundings: Surroundings, rules: TraceRules) -> Lines:
    z = np.array(seeds, dtype=np.complex128)
    distance = surroundings.sites.nearest(z)[0]
    distance = np.where(np.isfinite(distance), distance, model.scale)
    return Lines(
        index=np.arange(z.size),
        z=z,
        w=model.velocity(z),
        step=min(0.2, 10.0 * rules.tolerance**0.2) * distance,
        psi=np.zeros(z.size),
        level=np.zeros(z.size),
        walks=np.zeros(z.size, dtype=np.int64),
        time=np.zeros(z.size),
        distance=distance,
    )


@dataclass(slots=True)
class _Run:
    """The state of one tracing."""

    model: FlowModel
    surroundings: Surroundings
    rules: TraceRules
    lines: Lines
    ended: list[tuple[IntArray, ComplexArray, FloatArray, FloatArray, Stop, list[str]]] = field(
        default_factory=list
    )
    crossings: dict[int, list[Crossing]] = field(default_factory=dict)
    points: list[tuple[IntArray, ComplexArray, FloatArray]] = field(default_factory=list)
    reference: float = 0.0
    seeds: ComplexArray = field(init=False)
    seed_headings: ComplexArray = field(init=False)

    def __post_init__(self) -> None:
        self.reference = _reference_speed(self.model)
        self.seeds, self.seed_headings = self.lines.z.copy(), self._heading()
        self._record(np.ones(self.lines.z.size, dtype=np.bool_))

    @property
    def sense(self) -> float:
        """+1 with the water, -1 against it."""
        return 1.0 if self.rules.forward else -1.0

    def advance(self) -> None:
        """One attempted step of every line; those that are done leave."""
        lines = self.lines
        stride = self._attempt()
        good = (stride.error <= 1.0) & ~stride.blocked
        factor = _SAFETY * np.maximum(stride.error, 1e-10) ** -0.2
        factor = np.where(np.isfinite(factor), np.clip(factor, _SHRINK, _GROW), _SHRINK)
        factor[stride.blocked] = 0.5
        before = lines.z.copy()
        self._accept(good, stride)
        factor[good] = np.minimum(factor[good], self._turn_limit(stride.w[good], lines.w[good]))
        lines.step *= factor
        self._record(good)
        index = self._bound_steps()
        closed = self._closed(before)
        ashore = lines.index[stride.ashore | (lines.step < _STUCK * self.model.scale)]
        stay = self._reach_lines()
        self._stop(index[stay], closed[stay])
        if self.surroundings.shoreline is not None and ashore.size:
            self._follow_walls(self.surroundings.shoreline, np.isin(self.lines.index, ashore))

    def _follow_walls(self, shoreline: Shoreline, ashore: BoolArray) -> None:
        """Carry lines that run into a wall that was solved for along it, if its error can have let them."""
        lines = self.lines
        near = np.flatnonzero(ashore & (lines.walks < _WALKS))
        if near.size == 0:
            return
        flux = self.model.rings_set.gap(lines.z[near]) * np.abs(lines.w[near])
        stay = np.ones(lines.index.size, dtype=np.bool_)
        for i, part in zip(near, flux, strict=True):
            walk = shoreline.follow(complex(lines.z[i]), self.sense, float(part))
            if walk is not None:
                stay[i] = self._walk(int(i), walk)
        self.lines = self.lines.kept(stay)

    def _walk(self, i: int, walk: Walk) -> bool:
        """Carry line i to the end of a way along a wall; returns whether it goes on from there."""
        lines, goes_on = self.lines, walk.landmark.stop is None
        path = np.concatenate([lines.z[i : i + 1], walk.path, [walk.landmark.onward] if goes_on else []])
        steps = np.abs(np.diff(path))
        path = path[np.append(True, steps > 0.0)]
        steps = steps[steps > 0.0]
        lines.level[i] += lines.psi[i] + float(self.model.chord(path[:-1], path[1:]).imag.sum())
        times = lines.time[i] + walk.time * np.cumsum(steps) / max(float(steps.sum()), _TINY)
        if self.rules.keep_paths:
            self.points.append((np.full(steps.size, lines.index[i]), path[1:], times))
        lines.z[i], lines.psi[i], lines.time[i] = path[-1], 0.0, lines.time[i] + walk.time
        lines.walks[i] += 1
        if walk.landmark.stop is not None:
            mask = np.arange(lines.index.size) == i
            self._write(mask, walk.landmark.stop, [walk.landmark.name])
            return False
        distance = float(self.surroundings.sites.nearest(path[-1:])[0][0])
        lines.w[i : i + 1] = self.model.velocity(path[-1:])
        lines.distance[i] = distance if np.isfinite(distance) else self.model.scale
        lines.step[i] = min(0.2, 10.0 * self.rules.tolerance**0.2) * lines.distance[i]
        return True

    def _closed(self, before: ComplexArray) -> BoolArray:
        """Whether the last step of a line has passed its own seed on the seed's own stream function."""
        z, index = self.lines.z, self.lines.index
        seeds, headings = self.seeds[index], self.seed_headings[index]
        behind = ((before - seeds) * np.conj(headings)).real < 0.0
        passed = behind & (((z - seeds) * np.conj(headings)).real >= 0.0)
        passed &= np.abs(z - seeds) < 2.0 * np.abs(z - before)
        closed = np.zeros(z.shape, dtype=np.bool_)
        if np.any(passed):
            strayed = self.lines.psi[passed] + self.lines.level[passed]
            psi = self.model.chord(z[passed], seeds[passed]).imag + strayed
            closed[passed] = np.abs(psi) < _CLOSED * self.reference * self.model.scale
        return closed

    def _attempt(self) -> Stride:
        lines, sense = self.lines, self.sense
        slopes = np.empty((7, lines.z.size), dtype=np.complex128)
        slowness = np.empty((7, lines.z.size))
        blocked = np.zeros(lines.z.size, dtype=np.bool_)
        z, w = lines.z, lines.w
        for stage in range(7):
            if stage:
                z = lines.z + lines.step * (_STAGES[stage - 1, :stage] @ slopes[:stage])
                w = self.model.velocity(z)
                if self.surroundings.lines.flux.size:
                    blocked |= self.surroundings.lines.crossed(lines.z, z)
            with np.errstate(divide="ignore", invalid="ignore"):
                slowness[stage] = 1.0 / np.abs(w)
                slopes[stage] = sense * slowness[stage] * np.conj(w)
        with np.errstate(invalid="ignore"):
            defect = np.maximum(np.abs(_DEFECT @ slopes), np.abs(_DEFECT @ slowness) / slowness[0])
            error = lines.step * defect / (self.rules.tolerance * lines.distance)
            time = lines.step * (_STAGES[5] @ slowness[:6])
        error = np.where(np.isfinite(error), error, np.inf)
        ashore = ~self.model.wet(z)
        return Stride(z=z, w=w, error=error, time=time, blocked=blocked | ashore, ashore=ashore)

    def _accept(self, good: BoolArray, stride: Stride) -> None:
        """Move the good lines, then back across the flow on to their stream function."""
        lines = self.lines
        if not np.any(good):
            return
        z, w = stride.z[good], stride.w[good]
        psi = lines.psi[good] + self.model.chord(lines.z[good], z).imag
        shift = -1j * psi / w
        limit = 10.0 * self.rules.tolerance * lines.distance[good]
        shift = np.where(np.abs(shift) <= limit, shift, 0.0)
        new = self.model.velocity(z + shift)
        lines.z[good] = z + shift
        lines.psi[good] = psi + (0.5 * (w + new) * shift).imag
        lines.w[good] = new
        lines.time[good] += stride.time[good]

    def _turn_limit(self, w: ComplexArray, old: ComplexArray) -> FloatArray:
        """Factor on the step that keeps the next turn below the largest allowed."""
        if self.rules.largest_turn == inf:
            return np.full(w.shape, inf)
        turn = np.abs(np.angle(w * np.conj(old)))
        return np.asarray(self.rules.largest_turn / np.maximum(turn, 1e-6))

    def _bound_steps(self) -> IntArray:
        """Keep every step short of the nearest site; returns which site that is."""
        lines = self.lines
        distance, index = self.surroundings.sites.nearest(lines.z)
        lines.distance = np.where(np.isfinite(distance), distance, self.model.scale)
        lines.step = np.minimum(lines.step, _REACH * lines.distance)
        if not self.surroundings.far.is_round:
            ahead = self.surroundings.far.ahead(lines.z, self._heading())
            lines.step = np.minimum(lines.step, 0.9 * np.maximum(ahead, 1e-12 * self.model.scale))
        return index

    def _record(self, moved: BoolArray) -> None:
        if self.rules.keep_paths:
            lines = self.lines
            self.points.append((lines.index[moved], lines.z[moved], lines.time[moved]))

    def _heading(self) -> ComplexArray:
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(self.sense * np.conj(self.lines.w) / np.abs(self.lines.w), dtype=np.complex128)

    def _reach_lines(self) -> BoolArray:
        """Shorten steps towards line elements, take in or pass on what has arrived; returns who stays."""
        faces, lines = self.surroundings.lines, self.lines
        stay = np.ones(lines.index.size, dtype=np.bool_)
        if faces.flux.size == 0:
            return stay
        ahead, index = faces.ahead(lines.z, self._heading(), forward=self.rules.forward)
        lines.step = np.minimum(lines.step, 0.9 * ahead)
        near = faces.beside(lines.z, index)
        arrived = (ahead <= _ABREAST * faces.lengths[index]) & near
        if not np.any(arrived):
            return stay
        for i in np.nonzero(arrived)[0]:
            stay[i] = self._pass_through(int(i), int(index[i]))
        names = [faces.owners[k] for k in index[~stay]]
        self._write(~stay, Stop.CAPTURED, names)
        self.lines = lines.kept(stay)
        return stay

    def _pass_through(self, i: int, k: int) -> bool:
        """Carry line i to the other side of line element k if the water goes on there."""
        faces, lines = self.surroundings.lines, self.lines
        span = complex(faces.end[k] - faces.start[k])
        unit = span / abs(span)
        local = complex(lines.z[i] - faces.start[k]) / unit
        side = 1.0 if local.imag > 0.0 else -1.0
        arriving = side * self.sense * float((lines.w[i] * unit).imag)
        leaving = arriving + self.sense * float(faces.flux[k])
        if leaving <= 0.0 or not faces.in_water[k]:
            return False
        crossing = Crossing(k, complex(lines.z[i]), arriving, leaving, float(lines.time[i]))
        self._record_crossing(i, crossing)
        lines.z[i : i + 1], change = self._other_side(
            lines.z[i : i + 1], unit, local, float(faces.touch[k]) * abs(span)
        )
        lines.psi[i] += change
        lines.w[i : i + 1] = self.model.velocity(lines.z[i : i + 1])
        return True

    def _record_crossing(self, i: int, crossing: Crossing) -> None:
        self.crossings.setdefault(int(self.lines.index[i]), []).append(crossing)

    def _other_side(
        self, z: ComplexArray, unit: complex, local: complex, touch: float
    ) -> tuple[ComplexArray, float]:
        """The point of the same streamline just beyond a line element, and what is left of the change of psi.

        Straight across psi changes by the flow along the line; a shift along the line makes good for it.
        """
        opposite = z + 1j * unit * (-local.imag - np.sign(local.imag) * touch)
        change = float(self.model.chord(z, opposite).imag[0])
        shift = -change / float((self.model.velocity(opposite)[0] * unit).imag)
        opposite = opposite + unit * np.clip(shift, -1e3 * touch, 1e3 * touch)
        return opposite, float(self.model.chord(z, opposite).imag[0])

    def _stop(self, index: IntArray, closed: BoolArray) -> None:
        """Take out the lines that have come to an end."""
        lines, sites, far = self.lines, self.surroundings.sites, self.surroundings.far
        end = far.reached(lines.z, self._heading(), forward=self.rules.forward)
        reasons = (
            (Stop.CAPTURED, sites.captured(lines.distance, index, forward=self.rules.forward)),
            (Stop.FAR_END, end >= 0),
            (Stop.LEFT_REGION, np.abs(lines.z - far.centre) > self.rules.region),
            (Stop.STAGNATES, sites.at_rest(lines.distance, index)),
            (Stop.STAGNATES, np.abs(lines.w) < _STILL * self.reference),
            (Stop.WALL, lines.step < _LEAST_STEP * self.model.scale),
            (Stop.CLOSED, closed),
        )
        going = np.ones(lines.index.size, dtype=np.bool_)
        for stop, met in reasons:
            mask = met & going
            if not np.any(mask):
                continue
            going &= ~mask
            names = [""] * int(np.count_nonzero(mask))
            if stop is Stop.CAPTURED:
                self._add_last_time(mask, index)
                names = [sites.owners[k] for k in index[mask]]
            if stop is Stop.FAR_END:
                names = [far.ends[k].name for k in end[mask]]
            self._write(mask, stop, names)
        if not np.all(going):
            self.lines = lines.kept(going)

    def _add_last_time(self, captured: BoolArray, index: IntArray) -> None:
        """Time over the last radius r: r2/2g - x r3/3g2, g/r the site's own speed, x the rest towards it."""
        lines, sites = self.lines, self.surroundings.sites
        g = sites.strength[index[captured]]
        inward = sites.at[index[captured]] - lines.z[captured]
        r = np.abs(inward)
        speed = self.sense * (lines.w[captured] * inward).real / r
        with np.errstate(divide="ignore", invalid="ignore"):
            last = r**2 / (2.0 * g) - (speed - g / r) * r**3 / (3.0 * g**2)
        lines.time[captured] += np.where(g > 0.0, last, 0.0)

    def _write(self, mask: BoolArray, stop: Stop, names: list[str]) -> None:
        lines = self.lines
        strayed = lines.psi[mask] + lines.level[mask]
        self.ended.append((lines.index[mask], lines.z[mask], lines.time[mask], strayed, stop, names))

    def finished(self, count: int) -> Traces:
        """Everything that has happened, in the order of the seeds."""
        left = self.lines.index.size
        self._write(np.ones(left, dtype=np.bool_), Stop.STEP_LIMIT, [""] * left)
        ends = np.empty(count, dtype=np.complex128)
        times, drift = np.empty(count), np.empty(count)
        stops, names = [Stop.STEP_LIMIT] * count, [""] * count
        for index, z, time, psi, stop, found in self.ended:
            ends[index], times[index], drift[index] = z, time, psi
            for i, name in zip(index, found, strict=True):
                stops[i], names[i] = stop, name
        crossings = tuple(tuple(self.crossings.get(i, ())) for i in range(count))
        paths, path_times = self._paths(count)
        return Traces(ends, tuple(stops), tuple(names), times, drift, crossings, paths, path_times)

    def _paths(self, count: int) -> tuple[tuple[ComplexArray, ...], tuple[FloatArray, ...]]:
        if not self.rules.keep_paths:
            return (), ()
        index = np.concatenate([part[0] for part in self.points])
        order = np.argsort(index, kind="stable")
        cuts = np.cumsum(np.bincount(index, minlength=count))[:-1]
        z = np.concatenate([part[1] for part in self.points])[order]
        time = np.concatenate([part[2] for part in self.points])[order]
        return tuple(np.split(z, cuts)), tuple(np.split(time, cuts))


def _reference_speed(model: FlowModel) -> float:
    """Speed that counts as moving: the ambient's, or the discharges' spread over the scale [m/s]."""
    strengths = [abs(singularity.strength) / model.scale for singularity in model.singularities]
    speeds = [abs(model.layout.ambient.velocity), *strengths, *(abs(line.flux) for line in model.lines)]
    return float(max(speeds, default=1.0)) or 1.0

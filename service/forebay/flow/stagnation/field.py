"""Velocity of any flow over discs of the site, with a bound for what its Taylor polynomial leaves out."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.lines import LineTerm
from forebay.flow.model import FlowModel
from forebay.flow.poles import PoleField
from forebay.flow.stagnation.bounds import (
    core_bound,
    exponent_of,
    line_bound,
    log_radius,
    smooth_bound,
    wedge_rest_bound,
)
from forebay.flow.stagnation.kernels import variation

EPS = float(np.finfo(np.float64).eps)

ROUNDING = 32.0
"""Rounding allowed for, in units of eps times the sum of absolute terms [-]."""

LINEAR = 1e-12
"""Part of its slope by which the linear term of a disc is widened, for rounding [-]."""


@dataclass(frozen=True, slots=True)
class Discs:
    """W and its derivatives at centres, the bound of the rest over discs about them, and rounding, shape (n,)."""

    velocity: ComplexArray
    slope: ComplexArray
    skew: ComplexArray
    rest: FloatArray
    rounding: FloatArray

    def spread(self, radius: FloatArray) -> FloatArray:
        """Largest change of W over the discs, rounding included [m/s]."""
        linear = np.abs(self.slope) + np.abs(self.skew)
        return linear * radius * (1.0 + LINEAR) + self.rest + self.rounding

    def where(self, chosen: BoolArray) -> "Discs":
        """The chosen ones."""
        return Discs(
            self.velocity[chosen], self.slope[chosen], self.skew[chosen], self.rest[chosen], self.rounding[chosen]
        )

    @property
    def definiteness(self) -> FloatArray:
        """Smallest stretching of the linear map d -> W_z d + W_zbar conj(d) [1/s]."""
        return np.abs(np.abs(self.slope) - np.abs(self.skew))


class BoundedField:
    """Discs of one model; `sides` of a line element may be locked so that W continues across it."""

    def __init__(self, model: FlowModel) -> None:
        self.model = model
        self.frame = model.frame
        self.lines = tuple(term for term in model.terms if isinstance(term, LineTerm))
        self._cored = [self.frame.map.forward(np.array([core.at]))[0] for core in model.cores]
        self._smooth_poles = self._without_cores()
        self._exponent = exponent_of(self.frame)

    def _without_cores(self) -> PoleField:
        field = self.model.rational
        own = np.zeros(field.poles.size, dtype=np.bool_)
        for place, core in zip(self._cored, self.model.cores, strict=True):
            owner = self.model.owners.index(core.owner)
            own |= (field.owners == owner) & (np.abs(field.poles - place) <= 1e-9 * (1.0 + abs(place)))
        return PoleField(
            field.kappa,
            field.offset,
            field.constant,
            field.poles[~own],
            field.strengths[~own],
            field.owners[~own],
            field.centres,
            field.moments,
            field.moment_owners,
        )

    def discs(self, z: ComplexArray, radius: FloatArray, lock: ComplexArray | None = None) -> Discs:
        """Discs about z, shape (n,) [m]; `lock` is added to W where it is continued across a line [m/s]."""
        jet = self.model.jet(z)
        velocity = jet.velocity if lock is None else jet.velocity + lock
        rest = self._rational_rest(z, radius)
        for term in self.lines:
            rest = rest + line_bound(term, self.frame, z, radius)
        for core in self.model.cores:
            rest = rest + core_bound(core, z, radius) + self._core_copies(z, radius, abs(core.circulation))
        rounding = EPS * (ROUNDING * self.model.magnitude(z) + 4.0 * np.abs(jet.slope) * np.abs(z))
        return Discs(velocity, jet.slope, jet.skew, np.where(np.isfinite(velocity), rest, np.inf), rounding)

    def proves(self, z: ComplexArray, radius: FloatArray) -> tuple[ComplexArray, BoolArray]:
        """W at z, and whether it stays in a half-plane over each disc: the `Disc` of `turning`."""
        discs = self.discs(z, radius)
        return discs.velocity, np.abs(discs.velocity) > 1.02 * discs.spread(radius)

    def _rational_rest(self, z: ComplexArray, radius: FloatArray) -> FloatArray:
        field = self._smooth_poles
        tau, rate = self.frame.map.forward(z), np.abs(self.frame.map.slope(z))
        parts = (field.kappa, field.poles, field.strengths, field.centres, field.moments)
        if self.frame.map.affine:
            return np.asarray(variation(tau, radius * rate, *parts)[0] * rate, dtype=np.float64)
        n = self._exponent
        size = n / rate
        log_reach = log_radius(radius, size)
        capped = np.minimum(log_reach, 1e3)
        value, _ = variation(tau, n * capped, *parts)
        velocity, slope = field.jet(tau)
        with np.errstate(over="ignore", invalid="ignore"):
            second = np.expm1(capped) ** 2
            change = value + np.abs(slope) * n * second
            level = np.abs(velocity) + np.abs(slope) * n * capped
            rest = rate * np.exp(capped) * (change + level * 2.0 * second)
        return np.where(np.isfinite(log_reach) & np.isfinite(rest), rest, np.inf)

    def _core_copies(self, z: ComplexArray, radius: FloatArray, circulation: float) -> FloatArray:
        """What the periodic kernel adds to a cored vortex's own 1/d."""
        strength = circulation / (2.0 * np.pi)
        if self.frame.kappa == 0.0:
            return np.zeros(z.shape)
        rate = np.abs(self.frame.map.slope(z))
        if self.frame.map.affine:
            return np.asarray(strength * rate * smooth_bound(radius * rate), dtype=np.float64)
        size = self._exponent / rate
        return strength * wedge_rest_bound(self._exponent, size, log_radius(radius, size))

"""Velocity of any flow over discs of the site, with a bound for what its Taylor polynomial leaves out."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.core_images import REACH, core_images
from forebay.flow.features import CoredVortex
from forebay.flow.lines import LineTerm
from forebay.flow.model import FlowModel
from forebay.flow.poles import PoleField
from forebay.flow.sheets.term import SheetTerm
from forebay.flow.stagnation.bounds import (
    core_bound,
    core_tail_bound,
    exponent_of,
    line_bound,
    log_radius,
    pole_bound,
    smooth_bound,
    wedge_line_bounds,
    wedge_rest_bound,
)
from forebay.flow.stagnation.kernels import variation
from forebay.flow.stagnation.sheet_bounds import mapped_bound, near_bound
from forebay.flow.terms import Jet

EPS = float(np.finfo(np.float64).eps)

ROUNDING = 32.0
"""Rounding allowed for, in units of eps times the sum of absolute terms [-]."""

LINEAR = 1e-12
"""Part of its slope by which the linear term of a disc is widened, for rounding [-]."""


@dataclass(frozen=True, slots=True)
class Discs:
    """W and its derivatives at centres, bounds of the rest over discs and of rounding; shape (n,)."""

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
            self.velocity[chosen],
            self.slope[chosen],
            self.skew[chosen],
            self.rest[chosen],
            self.rounding[chosen],
        )

    @property
    def definiteness(self) -> FloatArray:
        """Smallest stretching of the linear map d -> W_z d + W_zbar conj(d) [1/s]."""
        return np.asarray(np.abs(np.abs(self.slope) - np.abs(self.skew)), dtype=np.float64)


class BoundedField:
    """Discs of one model; `sides` of a line element may be locked so that W continues across it."""

    def __init__(self, model: FlowModel) -> None:
        self.model = model
        self.frame = model.frame
        self.lines = tuple(term for term in model.terms if isinstance(term, LineTerm))
        self.sheets = tuple(term for term in model.terms if isinstance(term, SheetTerm))
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
        straight = self.frame.map.affine
        rest = self._straight_rest(z, radius) if straight else self._corner_rest(z, radius, jet)
        rounding = EPS * (ROUNDING * self.model.magnitude(z) + 4.0 * np.abs(jet.slope) * np.abs(z))
        return Discs(velocity, jet.slope, jet.skew, np.where(np.isfinite(velocity), rest, np.inf), rounding)

    def proves(self, z: ComplexArray, radius: FloatArray) -> tuple[ComplexArray, BoolArray]:
        """W at z, and whether it stays in a half-plane over each disc: the `Disc` of `turning`."""
        discs = self.discs(z, radius)
        return discs.velocity, np.abs(discs.velocity) > 1.02 * discs.spread(radius)

    def _mapped_rest(self, tau: ComplexArray, reach: FloatArray) -> FloatArray:
        field = self._smooth_poles
        parts = (field.kappa, field.poles, field.strengths, field.centres, field.moments)
        return np.asarray(variation(tau, reach, *parts)[0], dtype=np.float64)

    def _straight_rest(self, z: ComplexArray, radius: FloatArray) -> FloatArray:
        """Remainder where the map is affine: part by part."""
        rate = np.abs(self.frame.map.slope(z))
        reach, tau = radius * rate, self.frame.map.forward(z)
        rest = self._mapped_rest(tau, reach) * rate
        for term in self.lines:
            rest = rest + line_bound(term, self.frame, z, radius)
        for sheet in self.sheets:
            own = np.abs(sheet.field.panels.frame.map.slope(sheet.local(z)))
            rest = rest + mapped_bound(sheet, z, radius * own) * own + near_bound(sheet, z, radius)
        for core, place in zip(self.model.cores, self._cored, strict=True):
            own = core_bound(core, z, radius)
            if self.frame.kappa > 0.0:
                strength = abs(core.circulation) / (2.0 * np.pi)
                far = strength * rate * pole_bound(tau - place, 0.0, reach) + core_tail_bound(
                    core, core.at, z, radius
                )
                own = np.minimum(own + strength * rate * smooth_bound(reach), far)
            rest = rest + own + self._image_tails(core, z, radius)
        return rest

    def _image_tails(self, core: CoredVortex, z: ComplexArray, radius: FloatArray) -> FloatArray:
        """What the mirror images of a core, which are poles otherwise, owe to their own cores."""
        total = np.zeros(z.shape)
        for at in core_images(core.at, REACH * core.core.radius, self.frame)[0][1:]:
            tail = core_tail_bound(core, at, z, radius)
            total += np.where(np.isfinite(tail), tail, core_bound(core, z + (core.at - at), radius))
        return total

    def _corner_rest(self, z: ComplexArray, radius: FloatArray, jet: Jet) -> FloatArray:
        """Remainder in a corner: what is far is bounded in the mapped plane and pulled back together.

        With q = R / |z| and r = -log(1 - q), f(tau) n / z leaves a remainder of at most n / (|z| (1 - q))
        times
        E(n r) + |f| q^2 + n |f'| (q^2 + r - q), E that of f. f and f' are taken from the flow itself, less
        what is near, so that what cancels far away stays cancelled.
        """
        n, tau = self._exponent, self.frame.map.forward(z)
        rate = np.abs(self.frame.map.slope(z))
        size = n / rate
        log_reach = log_radius(radius, size)
        capped = np.where(np.isfinite(log_reach), log_reach, 50.0)
        mapped, site = self._mapped_rest(tau, n * capped), np.zeros(z.shape)
        for sheet in self.sheets:
            mapped, site = mapped + mapped_bound(sheet, z, n * capped), site + near_bound(sheet, z, radius)
        velocity, slope = jet.velocity.copy(), jet.slope.copy()
        for term in self.lines:
            far, near = wedge_line_bounds(term, self.frame, z, radius)
            is_near = ~(far * rate < near)
            part = term.jet(z)
            velocity, slope = (
                velocity - np.where(is_near, part.velocity, 0.0),
                slope - np.where(is_near, part.slope, 0.0),
            )
            mapped, site = mapped + np.where(is_near, 0.0, far), site + np.where(is_near, near, 0.0)
        level = np.zeros(z.shape)
        for core, place in zip(self.model.cores, self._cored, strict=True):
            strength = abs(core.circulation) / (2.0 * np.pi)
            far = strength * pole_bound(tau - place, 0.0, n * capped)
            tail = core_tail_bound(core, core.at, z, radius)
            near = core_bound(core, z, radius) + strength * wedge_rest_bound(n, size, log_reach)
            near = np.where(np.abs(tau - place) + n * capped < min(4.0, 1.4 * n), near, np.inf)
            is_near = ~(far * rate + tail < near)
            level = level + np.where(is_near, strength * (size + capped) * (1.0 / core.core.radius), 0.0)
            mapped, site = mapped + np.where(is_near, 0.0, far), site + np.where(is_near, near, tail)
            site = site + self._image_tails(core, z, radius)
        with np.errstate(over="ignore", invalid="ignore"):
            w_tau = np.abs(velocity) / rate + level
            w_slope = (np.abs(slope) * size + np.abs(velocity)) / rate + level
            q = -np.expm1(-capped)
            curved = w_tau * q * q + w_slope * (q * q + capped - q)
            total = rate * np.exp(capped) * (mapped + curved)
        total = total + site
        return np.where(np.isfinite(log_reach) & np.isfinite(total), total, np.inf)

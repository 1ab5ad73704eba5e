"""Vortices with a core: their poles without the singular part, so that nothing cancels at the centre.

The flow lists a cored vortex as a point vortex g / (z - s), mirror images and all, plus a term that takes
the point vortex away within the core. Close to the centre both are huge. Here the point vortex is removed
from the poles, where what is left is analytic:

- velocity: the rest is known on a small ring and follows inside by Cauchy's formula;
- chords: the rest of the logarithm, R = log(2 sinh(d/2)) - log(z - s) or log(d) - log(z - s), has one
  branch in the water, along which its argument changes by less than pi.
"""

from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray
from forebay.flow.cores import CoreTerm
from forebay.flow.maps import ConformalMap
from forebay.flow.poles import PoleField
from forebay.flow.terms import Jet

_NODES = 32
"""Nodes of the ring: at 0.3 of its radius the formula is exact to 0.3^32 = 1e-17 [-]."""
_RING = 0.2
"""Radius of the ring over that of the core [-]."""
_INSIDE = 0.3
"""Part of the ring within which Cauchy's formula is used [-]."""
_CONFLUENT = 1e-5
"""Distance over the core's radius below which R is replaced by its value at the centre [-]."""


@dataclass(frozen=True, slots=True)
class CoreCentre:
    """Surroundings of a core's centre.

    term : the core;  pole : index of the vortex among the poles;  reach : distance within which the
    velocity comes from the ring [m];  ring, rest : shape (k,), nodes about the centre [m] and the velocity
    of all poles less the point vortex there [m/s]
    """

    term: CoreTerm
    pole: int
    reach: float
    ring: ComplexArray
    rest: ComplexArray

    @property
    def at(self) -> complex:
        """Centre of the core, x + iy [m]."""
        return self.term.centres[0]

    def near(self, z: ComplexArray) -> BoolArray:
        """Which points lie within reach."""
        return np.asarray(np.abs(z - self.at) < self.reach, dtype=np.bool_)

    def jet(self, z: ComplexArray) -> Jet:
        """Poles and this core at points within reach, shape (n,)."""
        weights = self.ring / (self.ring - (z[:, None] - self.at)) / self.ring.size
        velocity = weights @ self.rest
        slope = (weights * weights * self.ring.size / self.ring) @ self.rest
        return Jet(velocity, slope, np.zeros_like(velocity)) + self.term.jet_about_centre(z)


def core_centre(term: CoreTerm, field: PoleField, tau: ConformalMap, nearest: float) -> CoreCentre:
    """Surroundings of the centre of a core.

    Parameters
    ----------
    term : the core;  field, tau : all poles and the map to their plane
    nearest : distance from the centre to the nearest other element, wall or pier [m]; 0 if an element
        stands on the centre, which leaves no reach
    """
    at = term.centres[0]
    own = np.flatnonzero(field.owners == term.owner)
    pole = int(own[np.argmin(np.abs(field.poles[own] - complex(tau.forward(np.asarray(at)))))])
    radius = min(_RING * term.radius, 0.5 * nearest)
    ring = np.asarray(radius * np.exp(2j * np.pi * np.arange(_NODES) / _NODES), dtype=np.complex128)
    rest = np.zeros_like(ring)
    if radius > 0.0:
        all_poles = field.velocity(tau.forward(at + ring)) * tau.slope(at + ring)
        rest = all_poles - field.strengths[pole] / ring
    return CoreCentre(term, pole, _INSIDE * radius, ring, rest)


def without_centres(field: PoleField, centres: tuple[CoreCentre, ...]) -> PoleField:
    """The poles without the cored vortices themselves; their mirror images stay."""
    kept = np.delete(np.arange(field.poles.size), [centre.pole for centre in centres])
    return replace(field, poles=field.poles[kept], strengths=field.strengths[kept], owners=field.owners[kept])


def centre_chords(
    centre: CoreCentre, field: PoleField, tau: ConformalMap, a: ComplexArray, b: ComplexArray
) -> ComplexArray:
    """Integral along straight chords of a cored vortex and of the regular part of its pole, shape (n,)."""
    rest = _regular(centre, field, tau, b) - _regular(centre, field, tau, a)
    turned = rest.imag - 2.0 * np.pi * np.round(rest.imag / (2.0 * np.pi))
    pushed = field.offset * (tau.forward(b) - tau.forward(a))
    strength = field.strengths[centre.pole]
    regular = strength * (rest.real + 1j * turned + pushed)
    return np.asarray(regular + centre.term.chords_through_centre(a, b), dtype=np.complex128)


def _regular(centre: CoreCentre, field: PoleField, tau: ConformalMap, z: ComplexArray) -> ComplexArray:
    """R at points, up to multiples of 2 pi i."""
    distance = z - centre.at
    merged = np.abs(distance) < _CONFLUENT * centre.term.radius
    beside = np.where(merged, 1.0, distance)
    d = tau.forward(centre.at + beside) - field.poles[centre.pole]
    at = np.asarray(centre.at)
    slope, bend = complex(tau.slope(at)), complex(tau.curvature(at))
    limit = np.log(slope) + 0.5 * bend / slope * distance
    return np.asarray(np.where(merged, limit, field.logarithm(d) - np.log(beside)), dtype=np.complex128)

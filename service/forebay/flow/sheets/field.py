"""Velocity and potential of densities on elements: nodes as poles of the mapped plane, near ones exactly."""

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.kernels import periodic, rational
from forebay.flow.kernels.sheet_near import (
    LEAF,
    NEAR,
    NODES,
    PLAIN,
    STRIP,
    WEDGE,
    Chart,
    Density,
    Elements,
    Tree,
    near_sums,
    off_nodes,
)
from forebay.flow.maps import AffineMap, LogarithmMap
from forebay.flow.poles import PERIODIC
from forebay.flow.sheets.mesh import DEGREE, Mesh
from forebay.flow.sheets.mirrors import Mirrors, Rule
from forebay.flow.shores import Frame

ABSCISSAE, _WEIGHTS = np.polynomial.legendre.leggauss(NODES)
_VANDER = np.asarray(np.polynomial.legendre.legvander(ABSCISSAE, DEGREE), dtype=np.float64)
_STEP = 2.0
"""How far a point on an end of an element is moved off it over the distance that counts as on it [-]: there
its neighbours would be seen from a side each."""
Values = FloatArray | np.ndarray[tuple[int, ...], np.dtype[np.floating]]
_SLOPES = np.asarray(
    np.polynomial.legendre.legval(ABSCISSAE, np.polynomial.legendre.legder(np.eye(DEGREE + 1))).T
)
HALF_VANDER = np.ascontiguousarray((0.5 * _WEIGHTS[:, None] * _VANDER).T)
"""Legendre polynomials at the nodes of an element times half the weights, shape (4, 6)."""


@dataclass(frozen=True, eq=False)
class Panels:
    """Elements of a mesh as the kernels take them.

    frame : of the shore;  middle, half : shape (m,) [m];  mirrors : straight images
    lip : distance within which a point counts as on an element [m]
    inward : shape (m, 2), unit vectors into the water at both ends
    """

    frame: Frame
    middle: ComplexArray
    half: ComplexArray
    mirrors: Mirrors
    lip: float
    inward: ComplexArray

    @classmethod
    def of(cls, mesh: Mesh, frame: Frame, lip: float) -> "Panels":
        """All elements of a mesh."""
        return cls(frame, mesh.middle, mesh.half, Mirrors.of(frame, mesh.middle), lip, mesh.inward)

    def part(self, chosen: BoolArray) -> "Panels":
        """Some of the elements."""
        middle = self.middle[chosen]
        mirrors = Mirrors.of(self.frame, middle)
        return Panels(self.frame, middle, self.half[chosen], mirrors, self.lip, self.inward[chosen])

    @cached_property
    def rate(self) -> ComplexArray:
        """1 / half [1/m]."""
        return 1.0 / self.half

    @cached_property
    def nodes(self) -> ComplexArray:
        """Nodes of every element, shape (m, q) [m]."""
        return self.middle[:, None] + self.half[:, None] * ABSCISSAE

    @cached_property
    def _images(self) -> tuple[ComplexArray, BoolArray, BoolArray]:
        """Poles (m, images, q) of the mapped plane; which images conjugate, which reverse a moment."""
        tau = self.frame.map.forward(self.nodes)
        pattern = self.frame.images(0j)
        ways = zip(pattern.positions, pattern.conjugated, pattern.reversed, strict=True)
        places = [
            shift + (-1.0 if turned else 1.0) * (np.conj(tau) if flipped else tau)
            for shift, flipped, turned in ways
        ]
        return np.stack(places, axis=1), pattern.conjugated, pattern.reversed

    @cached_property
    def poles(self) -> ComplexArray:
        """Nodes in the mapped plane with all their images, shape (m, images q) [-]."""
        return self._images[0].reshape(self.middle.size, -1)

    def moments(self, nodal: ComplexArray) -> ComplexArray:
        """Coefficients of X in F for a density at the nodes, shape (m, q) -> (m, images q)."""
        _, conjugated, reversed_ = self._images
        signs = np.where(reversed_, -1.0, 1.0)[:, None]
        return self._imaged(self.own_moments(nodal), conjugated, signs)

    def strengths(self, nodal: ComplexArray) -> ComplexArray:
        """Coefficients of X + offset in W_tau for the derivative of a density at the nodes."""
        _, conjugated, _ = self._images
        return self._imaged(self.own_strengths(nodal), conjugated, np.ones((conjugated.size, 1)))

    def _imaged(self, own: ComplexArray, conjugated: BoolArray, signs: FloatArray) -> ComplexArray:
        parts = np.where(conjugated[:, None], np.conj(own)[:, None, :], own[:, None, :]) * signs
        return np.ascontiguousarray(parts.reshape(self.middle.size, -1))

    def own_moments(self, nodal: ComplexArray) -> ComplexArray:
        """`moments` of the elements themselves, shape (m, q)."""
        slope = self.frame.map.slope(self.nodes)
        return np.asarray(0.5j / np.pi * _WEIGHTS * nodal * self.half[:, None] * slope)

    def own_strengths(self, nodal: ComplexArray) -> ComplexArray:
        """`strengths` of the elements themselves, shape (m, q)."""
        return np.asarray(0.5j / np.pi * _WEIGHTS * nodal)

    @cached_property
    def elements(self) -> Elements:
        """Middles, 1 / half and nodes."""
        return self.middle, self.rate, ABSCISSAE

    @cached_property
    def chart(self) -> Chart:
        """How the mapped plane follows from z."""
        match self.frame.map:
            case AffineMap(rate=rate):
                return (STRIP if self.frame.kappa == PERIODIC else PLAIN), complex(rate), 0j
            case LogarithmMap() as corner:
                return WEDGE, complex(corner.exponent), complex(corner.vertex)
            case _:
                msg = f"no sheets with {type(self.frame.map).__name__}"
                raise TypeError(msg)

    def off_nodes(self, z: ComplexArray, own: IntArray | None) -> ComplexArray:
        """Points on an end of an element moved into the water, unless it is known on which they lie."""
        if own is not None:
            return z
        ends = self.middle - self.half, self.middle + self.half
        steps = _STEP * self.lip * self.inward
        return np.asarray(off_nodes(np.ascontiguousarray(z), ends, steps, self.tree, self.lip))

    @cached_property
    def tree(self) -> Tree:
        """Circles round the near regions of runs of elements."""
        return _circles(self.middle, NEAR * np.abs(self.half) + 2.0 * self.lip)

    def basis(self, *, of_velocity: bool) -> ComplexArray:
        """Coefficients of X for every Legendre polynomial, or its derivative, shape (4, m, images q)."""
        values = _SLOPES if of_velocity else _VANDER
        return self._based(values, self.strengths if of_velocity else self.moments)

    def own_basis(self, *, of_velocity: bool) -> ComplexArray:
        """The same of the elements themselves, shape (4, m, q)."""
        values = _SLOPES if of_velocity else _VANDER
        return self._based(values, self.own_strengths if of_velocity else self.own_moments)

    def _based(self, values: Values, weigh: Callable[[ComplexArray], ComplexArray]) -> ComplexArray:
        rows = [np.broadcast_to(row, self.nodes.shape).astype(np.complex128) for row in values.T]
        return np.ascontiguousarray(np.stack([weigh(row) for row in rows]))


def _circles(middle: ComplexArray, reach: FloatArray) -> Tree:
    """Binary heap of circles; a leaf holds `LEAF` elements."""
    leaves = 1
    while leaves * LEAF < middle.size:
        leaves *= 2
    centres = np.zeros(2 * leaves - 1, dtype=np.complex128)
    radii = np.full(2 * leaves - 1, -1.0)
    for k in range(-(-middle.size // LEAF)):
        run = slice(k * LEAF, (k + 1) * LEAF)
        centre = 0.5 * complex(
            middle[run].real.min() + middle[run].real.max(), middle[run].imag.min() + middle[run].imag.max()
        )
        centres[leaves - 1 + k] = centre
        radii[leaves - 1 + k] = float(np.max(np.abs(middle[run] - centre) + reach[run]))
    for k in range(leaves - 2, -1, -1):
        centres[k], radii[k] = _around(2 * k + 1, 2 * k + 2, centres, radii)
    return centres, np.where(radii < 0.0, -1.0, radii * radii)


def _around(a: int, b: int, centres: ComplexArray, radii: FloatArray) -> tuple[complex, float]:
    """Circle round two circles, of which the second may be empty."""
    if radii[b] < 0.0:
        return complex(centres[a]), float(radii[a])
    gap = abs(centres[b] - centres[a])
    if gap + min(radii[a], radii[b]) <= max(radii[a], radii[b]):
        k = a if radii[a] > radii[b] else b
        return complex(centres[k]), float(radii[k])
    radius = 0.5 * (gap + radii[a] + radii[b])
    return complex(centres[a] + (centres[b] - centres[a]) / gap * (radius - radii[a])), float(radius)


@dataclass(frozen=True, eq=False)
class _Parts:
    """A density as the kernels take it, coefficients of all poles, shape (m, r q), and whether it is of W."""

    density: Density
    coefficients: ComplexArray
    of_velocity: bool


@dataclass(frozen=True, eq=False)
class SheetField:
    """Field of one density.

    panels : the elements;  density : shape (m, 4), its Legendre coefficients [m2/s]
    offset : of the kernel of W, see `assembly.offset_of` [-]
    """

    panels: Panels
    density: ComplexArray
    offset: float = 0.0

    @cached_property
    def slope(self) -> ComplexArray:
        """Legendre coefficients of the density's derivative along x in [-1, 1], shape (m, 3) [m2/s]."""
        return np.ascontiguousarray(np.polynomial.legendre.legder(self.density.T).T)

    @cached_property
    def _potential_parts(self) -> _Parts:
        nodal = self.density @ _VANDER.T
        density = np.ascontiguousarray(self.density), 0.5 * _WEIGHTS * nodal, self.panels.own_moments(nodal)
        return _Parts(density, self.panels.moments(nodal), of_velocity=False)

    @cached_property
    def _velocity_parts(self) -> _Parts:
        nodal, rate = self.slope @ _VANDER[:, :DEGREE].T, self.panels.rate[:, None]
        density = self.slope * rate, 0.5 * _WEIGHTS * nodal * rate, self.panels.own_strengths(nodal)
        return _Parts(density, self.panels.strengths(nodal), of_velocity=True)

    @cached_property
    def strengths(self) -> ComplexArray:
        """Strengths of the nodes and their images as poles of W_tau, as `Panels.poles` [m2/s]."""
        return self._velocity_parts.coefficients.ravel()

    def potential(self, z: ComplexArray, own: IntArray | None = None) -> ComplexArray:
        """F at z, shape (n,) [m2/s]: one branch in all of the water. own : element that each z lies on."""
        parts, panels, z = self._potential_parts, self.panels, self.panels.off_nodes(z, own)
        tau = panels.frame.map.forward(z)
        poles, moments = panels.poles.ravel(), parts.coefficients.ravel()
        if panels.frame.kappa == PERIODIC:
            total = periodic.velocity_sums(tau, poles, moments, 0.0)
        else:
            total = rational.velocity_sums(tau, poles, moments)
        for rule in panels.mirrors.rules:
            value, _, taken, _ = self._near(z, tau, own, rule, parts)
            total += (np.conj(value) if rule.reflects else value) - taken
        return np.asarray(total, dtype=np.complex128)

    def velocity(self, z: ComplexArray, own: IntArray | None = None) -> ComplexArray:
        """W at z, shape (n,) [m/s]."""
        parts, panels, z = self._velocity_parts, self.panels, self.panels.off_nodes(z, own)
        tau = panels.frame.map.forward(z)
        poles, strengths = panels.poles.ravel(), parts.coefficients.ravel()
        if panels.frame.kappa == PERIODIC:
            far = periodic.velocity_sums(tau, poles, strengths, self.offset)
        else:
            far = rational.velocity_sums(tau, poles, strengths)
        velocity, _, taken, _ = self._near_jet(z, tau, own)
        return np.asarray((far - taken) * panels.frame.map.slope(z) + velocity, dtype=np.complex128)

    def jet(self, z: ComplexArray, own: IntArray | None = None) -> tuple[ComplexArray, ComplexArray]:
        """W [m/s] and dW/dz [1/s] at z, shape (n,)."""
        parts, panels, z = self._velocity_parts, self.panels, self.panels.off_nodes(z, own)
        tau = panels.frame.map.forward(z)
        poles, strengths, slope = panels.poles.ravel(), parts.coefficients.ravel(), panels.frame.map.slope(z)
        if panels.frame.kappa == PERIODIC:
            far, bend = periodic.pole_sums(tau, poles, strengths, self.offset)
        else:
            far, bend = rational.pole_sums(tau, poles, strengths)
        velocity, change, taken, bent = self._near_jet(z, tau, own)
        far, bend = far - taken, bend - bent
        curved = bend * slope**2 + far * panels.frame.map.curvature(z)
        return far * slope + velocity, curved + change

    def magnitude(self, z: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the parts of W, near elements as their nodes, shape (n,) [m/s]."""
        panels, tau = self.panels, self.panels.frame.map.forward(z)
        poles, strengths = panels.poles.ravel(), self._velocity_parts.coefficients.ravel()
        if panels.frame.kappa == PERIODIC:
            far = periodic.magnitude_sums(tau, poles, strengths, self.offset)
        else:
            far = rational.magnitude_sums(tau, poles, strengths)
        return np.asarray(far * np.abs(panels.frame.map.slope(z)), dtype=np.float64)

    def _near_jet(
        self, z: ComplexArray, tau: ComplexArray, own: IntArray | None
    ) -> tuple[ComplexArray, ComplexArray, ComplexArray, ComplexArray]:
        velocity, slope, taken, bent = np.zeros((4, z.size), dtype=np.complex128)
        for rule in self.panels.mirrors.rules:
            first, second, gone, curve = self._near(z, tau, own, rule, self._velocity_parts)
            turn = np.conj(rule.turn) if rule.reflects else rule.turn
            if rule.reflects:
                first, second = np.conj(first), np.conj(second)
            velocity += first * turn
            slope += second * turn**2
            taken += gone
            bent += curve
        return velocity, slope, taken, bent

    def _near(
        self, z: ComplexArray, tau: ComplexArray, own: IntArray | None, rule: Rule, parts: _Parts
    ) -> tuple[ComplexArray, ComplexArray, ComplexArray, ComplexArray]:
        """Integrals over near elements seen by a rule, and the sums whose place they take."""
        panels = self.panels
        mine = np.full(z.size, -1, dtype=np.int64)
        if own is not None:
            mine = own if rule.is_identity else np.full(z.size, -2, dtype=np.int64)
        chosen = slice(rule.number * NODES, (rule.number + 1) * NODES)
        places, weights = (np.ascontiguousarray(a[:, chosen]) for a in (panels.poles, parts.coefficients))
        image = places, weights, rule.allowed  # one layout, for which the kernel is compiled beforehand
        seen = np.ascontiguousarray(rule.image(z)), np.ascontiguousarray(tau), mine, panels.lip
        kernel = panels.chart, parts.of_velocity
        integral, slope, taken, bent = near_sums(
            seen, panels.elements, parts.density, kernel, image, panels.tree
        )
        return integral, slope, taken, bent

"""From elements and structures to poles of the mapped plane, mirror images included."""

from dataclasses import replace

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.cores import core_term
from forebay.flow.gradient import GradientTerm
from forebay.flow.layout import (
    Channel,
    Core,
    Doublet,
    Layout,
    LineSink,
    LineSource,
    Pier,
    PointElement,
    Vortex,
    outflow,
)
from forebay.flow.lines import line_term
from forebay.flow.piers import image_in
from forebay.flow.placement import TOUCHING
from forebay.flow.poles import PERIODIC, PoleField
from forebay.flow.sheets.standing import DOUBLED, Footing, Footings
from forebay.flow.shores import Frame
from forebay.flow.terms import Term

_SAME = 1e-9
"""Images closer than this in the mapped plane are one pole on a wall [-]."""
_FEW_IMAGES = 24
"""Up to this many pairs of element and pier every element gets exact images in every pier [-]."""
_NEAR = 3.0
"""Beyond that only elements within this many radii of a pier's centre get them [-]."""


def strength(element: PointElement, depth: float) -> complex:
    """g = (q - i Gamma) / (2 pi) of a point element [m2/s], q = discharge / depth; 0 for a doublet."""
    circulation = element.circulation if isinstance(element, Vortex) else 0.0
    return complex(outflow(element) / depth, -circulation) / (2.0 * np.pi)


class PoleBuilder:
    """Collects poles and multipoles with their mirror images in a frame."""

    def __init__(self, frame: Frame, scale: float) -> None:
        self._frame = frame
        self._scale = scale
        self._poles: list[tuple[complex, complex, int]] = []
        self._moments: list[tuple[complex, ComplexArray, int]] = []

    def tau(self, z: complex) -> complex:
        """Position in the mapped plane, on a wall if within the tolerance of one."""
        at = np.asarray(z)
        tolerance = float(TOUCHING * self._scale * np.abs(self._frame.map.slope(at)))
        return self._frame.snapped(complex(self._frame.map.forward(at)), tolerance)

    def add_pole(self, z: complex, g: complex, owner: int) -> complex:
        """Add a point element at z; images that fall on the pole itself add to its strength.

        Returns the strength of the pole at z: g in the water, g + conj(g) on a bank.
        """
        images = self._frame.images(self.tau(z))
        found: list[tuple[complex, complex]] = []
        for at, conjugated in zip(images.positions, images.conjugated, strict=True):
            place = self._principal(complex(at))
            part = g.conjugate() if conjugated else g
            match = next((k for k, (other, _) in enumerate(found) if abs(other - place) < _SAME), None)
            if match is None:
                found.append((place, part))
            else:
                found[match] = (found[match][0], found[match][1] + part)
        self._poles += [(place, part, owner) for place, part in found]
        return found[0][1]

    def _principal(self, tau: complex) -> complex:
        """The copy of an image with -pi < Im tau <= pi."""
        if self._frame.kappa != PERIODIC or -np.pi < tau.imag <= np.pi:
            return tau
        return tau + 2j * np.pi if tau.imag <= -np.pi else tau - 2j * np.pi

    def add_moments(self, z: complex, moments: ComplexArray, owner: int) -> None:
        """Add a multipole, coefficients of X, X^2, ... in the potential, at z off the walls."""
        images = self._frame.images(self.tau(z))
        orders = np.arange(1, moments.size + 1)
        for at, conjugated, reversed_ in zip(
            images.positions, images.conjugated, images.reversed, strict=True
        ):
            part = np.conj(moments) if conjugated else moments
            part = part * (-1.0) ** orders if reversed_ else part
            self._moments.append((complex(at), part, owner))

    def build(self, constant: complex, offset: float) -> PoleField:
        """The field collected so far."""
        order = max((moments.size for _, moments, _ in self._moments), default=0)
        padded = np.zeros((len(self._moments), order), dtype=np.complex128)
        for row, (_, moments, _) in zip(padded, self._moments, strict=True):
            row[: moments.size] = moments
        return PoleField(
            kappa=self._frame.kappa,
            offset=offset,
            constant=constant,
            poles=np.array([pole for pole, _, _ in self._poles], dtype=np.complex128),
            strengths=np.array([g for _, g, _ in self._poles], dtype=np.complex128),
            owners=np.array([owner for _, _, owner in self._poles], dtype=np.int64),
            centres=np.array([at for at, _, _ in self._moments], dtype=np.complex128),
            moments=padded,
            moment_owners=np.array([owner for _, _, owner in self._moments], dtype=np.int64),
            length=self._frame.length,
        )


def add_elements(builder: PoleBuilder, layout: Layout, frame: Frame, standing: Footings) -> None:
    """Add every point element, with its images in the piers; element k is owner k + 1.

    standing : which elements act on one side of a ring only
    """
    for k, element in enumerate(layout.elements):
        _add_beneath(builder, layout, k, standing.get(k))
        match element:
            case LineSource() | LineSink():
                continue
            case Doublet():
                _add_doublet(builder, element, _imaging(element.at, layout), frame, owner=k + 1)
            case _:
                factor = DOUBLED if k in standing else 1.0
                seen = builder.add_pole(element.at, factor * strength(element, layout.depth), k + 1)
                for pier in _imaging(element.at, layout):
                    builder.add_pole(image_in(pier, element.at), seen.conjugate(), k + 1)
                    builder.add_pole(pier.at, -seen.conjugate(), k + 1)


def _add_beneath(builder: PoleBuilder, layout: Layout, k: int, footing: Footing | None) -> None:
    """Take away in a solid what an element on its wall sends there."""
    if footing is not None and footing.inner is not None:
        flux = outflow(layout.elements[k]) / layout.depth
        builder.add_pole(footing.inner, complex(-flux / (2.0 * np.pi)), k + 1)


def terms_of(layout: Layout, frame: Frame, standing: Footings, *, one_sided: bool = True) -> tuple[Term, ...]:
    """Every part of the flow that is no sum of poles, the rings' left out.

    one_sided : whether a line on a ring shows the water's side there, rather than the mean of both
    """
    terms: list[Term] = []
    if layout.ambient.has_gradient:
        terms.append(GradientTerm.of(layout.ambient, owner=0))
    for k, element in enumerate(layout.elements):
        match element:
            case LineSource() | LineSink():
                terms.append(_line(layout, k, frame, standing.get(k) if one_sided else None, k in standing))
            case Vortex(core=Core() as core):
                terms.append(core_term(element.at, element.circulation, core, owner=k + 1, frame=frame))
            case _:
                continue
    return tuple(terms)


def _line(layout: Layout, k: int, frame: Frame, footing: Footing | None, doubled: bool) -> Term:  # noqa: FBT001
    element = layout.elements[k]
    if not isinstance(element, LineSource | LineSink):
        raise TypeError(element)
    flux = (DOUBLED if doubled else 1.0) * outflow(element) / layout.depth
    seen = frame if footing is None else replace(frame, walls=(*frame.walls, footing.wall))
    offset = offset_of(layout, frame)
    return line_term(element.start, element.end, flux, owner=k + 1, frame=seen, offset=offset)


def _imaging(at: complex, layout: Layout) -> tuple[Pier, ...]:
    """Piers in which an element gets exact images: all if there are few, else the near ones."""
    if len(layout.elements) * len(layout.piers) <= _FEW_IMAGES:
        return layout.piers
    return tuple(pier for pier in layout.piers if abs(at - pier.at) < _NEAR * pier.radius)


def _add_doublet(
    builder: PoleBuilder, element: Doublet, piers: tuple[Pier, ...], frame: Frame, *, owner: int
) -> None:
    """F = m / (z - at), m = -M / (2 pi); its image in a circle is -conj(m) (a / conj(at - centre))^2."""
    moment = -element.moment / (2.0 * np.pi)
    places = [(element.at, moment)]
    for pier in piers:
        ratio = pier.radius / (element.at - pier.at).conjugate()
        places.append((image_in(pier, element.at), -moment.conjugate() * ratio**2))
    for at, part in places:
        builder.add_moments(at, np.array([part * complex(frame.map.slope(np.asarray(at)))]), owner)


def add_piers(builder: PoleBuilder, piers: tuple[Pier, ...], owners: list[int]) -> None:
    """Add the circulation round every pier as a vortex at its centre."""
    for owner, pier in zip(owners, piers, strict=True):
        if pier.circulation != 0.0:
            builder.add_pole(pier.at, -1j * pier.circulation / (2.0 * np.pi), owner)


def ambient_constant(layout: Layout, frame: Frame) -> complex:
    """W_tau of the ambient velocity [m2/s], its rounding across the walls left out."""
    if layout.ambient.velocity == 0:
        return 0j
    rate = complex(frame.map.slope(np.asarray(frame.map.inverse(np.asarray(1.0 + 0j)))))
    constant = layout.ambient.velocity.conjugate() / rate
    return complex(constant.real, 0.0) if frame.mirrored else constant


def offset_of(layout: Layout, frame: Frame) -> float:
    """Offset of the kernel: which end of a channel feeds the elements.

    A current makes the end it comes from keep its speed, so elements draw on and discharge to the other
    end: 1/2 for a current along the channel, -1/2 against it, 0 without current (both ends, half each).
    In a corner 1/2, since nothing flows at the vertex.
    """
    if frame.kappa != PERIODIC:
        return 0.0
    if not frame.map.affine:
        return 0.5
    if isinstance(layout.shore, Channel):
        return 0.5 * float(np.sign((layout.ambient.velocity * layout.shore.along.conjugate()).real))
    return 0.0

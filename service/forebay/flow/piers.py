"""Piers: circles that no water enters, made of poles inside them.

Each point element outside a pier gets its images by the circle theorem (conj(g) at the inverse point,
-conj(g) at the centre; Milne-Thomson 1940), which is exact for one pier in open water. What banks and
other piers send back is cancelled by multipoles at the centres, in the shore's own basis (with all its
mirror images), such that the harmonics of the normal velocity on the circles vanish.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.errors import UnsolvedStructureError
from forebay.flow.layout import Pier
from forebay.flow.poles import PoleField
from forebay.flow.shores import Frame

Velocity = Callable[[ComplexArray], ComplexArray]
Echo = Callable[[ComplexArray, int], ComplexArray]
"""What other walls answer to unit multipoles up to an order: velocities at points, shape (2 p order, n)."""

_LADDER = (1, 2, 4, 8, 12, 16, 24, 32, 48, 64, 96, 128)
"""Highest multipole orders tried [-]."""
_ENOUGH = 1e-13
"""Normal velocity on the piers, as part of the largest speed there, that ends the ladder [-]."""
TOLERANCE = 1e-8
"""Normal velocity on the piers, as part of the largest speed there, that counts as unsolved [-]."""


@dataclass(frozen=True, slots=True)
class PierSolution:
    """Multipoles of all piers.

    moments : shape (p, n), coefficients of X(tau - centre)^n in the potential [m2/s]
    residual : largest normal velocity on an independent sample of the circles, as part of `speed` [-]
    speed : largest speed on that sample [m/s]
    unknowns : shape (2 p n,), real and imaginary parts of the moments over powers of the radius [m2/s]
    """

    moments: ComplexArray
    residual: float
    speed: float
    unknowns: FloatArray


def image_in(pier: Pier, at: complex) -> complex:
    """Inverse point centre + a^2 / conj(at - centre) of a point outside the pier, x + iy [m]."""
    return pier.at + pier.radius**2 / (at - pier.at).conjugate()


def circle(pier: Pier, count: int, start: float = 0.0) -> tuple[ComplexArray, ComplexArray]:
    """Points evenly spaced on a pier's wall from angle `start` [rad], outward normals; shape (count,)."""
    normal = np.exp(1j * (start + 2.0 * np.pi * np.arange(count) / count))
    return pier.at + pier.radius * normal, normal


def solve_piers(
    piers: tuple[Pier, ...], frame: Frame, field: PoleField, base: Velocity, echo: Echo | None = None
) -> PierSolution:
    """Multipoles that make the piers impermeable.

    Parameters
    ----------
    piers : at least one
    frame : of the shore
    field : the poles present, for its kernel only
    base : conjugate velocity [m/s] without the multipoles, including the images in the piers
    echo : of other walls, None without any

    Returns
    -------
    PierSolution with the residual on points midway between those fitted.

    Raises
    ------
    UnsolvedStructureError : the residual stays above `TOLERANCE` at order 128

    Notes
    -----
    The order climbs a ladder until the residual reaches 2e-14. Piers a gap g apart need an order of about
    30 / sqrt(g / radius): 128 suffices down to gaps of a tenth of the radius.
    """

    def columns(z: ComplexArray, order: int) -> ComplexArray:
        own = _columns(piers, frame, field, z, order)
        return own if echo is None else own + echo(z, order)

    best: PierSolution | None = None
    aim, last = 0.0, (0, 1.0)
    for order in _LADDER:
        if order < aim:
            continue
        solution = _fit(piers, _reach(piers, frame), columns, base, order)
        if best is None or solution.residual < best.residual:
            best = solution
        if best.residual <= _ENOUGH or solution.residual > 100.0 * best.residual:
            break
        aim, last = _wanted_order(last, (order, solution.residual)), (order, solution.residual)
    if best is None or not best.residual <= TOLERANCE:
        residual = np.inf if best is None else best.residual
        raise UnsolvedStructureError(
            f"the water still crosses the piers with {residual:.2g} of the largest speed on them; "
            "leave more room between structures, banks and elements",
            ("structures",),
            residual=residual,
        )
    return best


def _wanted_order(last: tuple[int, float], now: tuple[int, float]) -> float:
    """Four fifths of the order at which residuals that fall on geometrically are small enough [-]."""
    if not 0.0 < now[1] < last[1]:
        return 0.0
    rate = float(np.log(now[1] / last[1])) / (now[0] - last[0])
    return 0.8 * (now[0] + float(np.log(_ENOUGH / now[1])) / rate)


def _fit(
    piers: tuple[Pier, ...], reach: FloatArray, columns: Echo, base: Velocity, order: int
) -> PierSolution:
    """Multipoles up to an order: as many harmonics of the normal velocity vanish on each circle."""
    count = 4 * order + 12
    z, normal = _circles(piers, count, 0.0)
    matrix = _harmonics((columns(z, order) * normal).real, len(piers), order).T
    load = -_harmonics((base(z) * normal).real[None], len(piers), order)[0]
    try:
        unknowns = np.linalg.solve(matrix, load)
    except np.linalg.LinAlgError:
        return PierSolution(np.zeros((len(piers), order), dtype=np.complex128), np.inf, 0.0, load)
    moments = (unknowns[0::2] + 1j * unknowns[1::2]).reshape(len(piers), order)
    check, outward = _circles(piers, count + 1, np.pi / 7.0)
    velocity = base(check) + unknowns @ columns(check, order)
    speed = float(np.max(np.abs(velocity)))
    leak = float(np.max(np.abs((velocity * outward).real)))
    residual = leak / speed if speed > 0.0 else 0.0
    scaled = moments * reach[:, None] ** np.arange(1, order + 1)
    return PierSolution(scaled, residual, speed, unknowns)


def _harmonics(values: FloatArray, pier_count: int, order: int) -> FloatArray:
    """Fourier coefficients 1 ... order of functions sampled round each pier, shape (c, 2 p order).

    values : shape (c, p m), m samples round each of p piers
    """
    rounds = values.reshape(values.shape[0], pier_count, -1)
    spectra = np.fft.rfft(rounds, axis=2)[:, :, 1 : order + 1] / rounds.shape[2]
    parts = np.stack((spectra.real, spectra.imag), axis=3)
    return np.asarray(parts.reshape(values.shape[0], -1), dtype=np.float64)


def _circles(piers: tuple[Pier, ...], count: int, start: float) -> tuple[ComplexArray, ComplexArray]:
    rings = [circle(pier, count, start) for pier in piers]
    return np.concatenate([z for z, _ in rings]), np.concatenate([n for _, n in rings])


def _reach(piers: tuple[Pier, ...], frame: Frame) -> FloatArray:
    """Radii of the piers in the mapped plane [-]: multipoles are scaled by them."""
    centres = np.array([pier.at for pier in piers])
    return np.array([pier.radius for pier in piers]) * np.abs(frame.map.slope(centres))


def _columns(
    piers: tuple[Pier, ...], frame: Frame, field: PoleField, z: ComplexArray, order: int
) -> ComplexArray:
    """Velocities of real and imaginary unit multipoles, shape (2 p order, n), real and imaginary in turn."""
    tau, slope = frame.map.forward(z), frame.map.slope(z)
    orders = np.arange(1, order + 1)[:, None]
    columns = np.empty((len(piers), order, 2, z.size), dtype=np.complex128)
    for k, (pier, reach) in enumerate(zip(piers, _reach(piers, frame), strict=True)):
        images = frame.images(complex(frame.map.forward(np.asarray(pier.at))))
        same, mirrored = np.zeros((2, order, z.size), dtype=np.complex128)
        for at, conjugated, reversed_ in zip(
            images.positions, images.conjugated, images.reversed, strict=True
        ):
            x, change = reach * field.kernel(tau - at), reach * field.kernel_slope(tau - at)
            powers = np.cumprod(np.vstack((np.ones_like(x)[None], np.tile(x, (order - 1, 1)))), axis=0)
            part = orders * change * powers
            if reversed_:
                part *= (-1.0) ** orders
            if conjugated:
                mirrored += part
            else:
                same += part
        columns[k, :, 0] = (same + mirrored) * slope
        columns[k, :, 1] = 1j * (same - mirrored) * slope
    return columns.reshape(-1, z.size)


def multipole_potentials(
    piers: tuple[Pier, ...], frame: Frame, field: PoleField, z: ComplexArray, order: int
) -> ComplexArray:
    """Potentials of the multipoles whose velocities `solve_piers` adds up, shape (2 p order, n) [-]."""
    tau, orders = frame.map.forward(z), np.arange(1, order + 1)[:, None]
    values = np.empty((len(piers), order, 2, z.size), dtype=np.complex128)
    for k, (pier, reach) in enumerate(zip(piers, _reach(piers, frame), strict=True)):
        images = frame.images(complex(frame.map.forward(np.asarray(pier.at))))
        same, mirrored = np.zeros((2, order, z.size), dtype=np.complex128)
        for at, conjugated, reversed_ in zip(
            images.positions, images.conjugated, images.reversed, strict=True
        ):
            part = (reach * field.kernel(tau - at)) ** orders
            part = part * (-1.0) ** orders if reversed_ else part
            if conjugated:
                mirrored += part
            else:
                same += part
        values[k, :, 0], values[k, :, 1] = same + mirrored, 1j * (same - mirrored)
    return values.reshape(-1, z.size)

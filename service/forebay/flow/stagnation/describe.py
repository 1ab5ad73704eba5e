"""From a proven zero to what an engineer reads: kind, wall, strain rate, direction of outflow."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.model import FlowModel
from forebay.flow.placement import TOUCHING
from forebay.flow.stagnation.result import WATER, StagnationKind, StagnationPoint

VERTEX = "vertex"
"""Name of the corner's vertex as a wall."""

EPS = float(np.finfo(np.float64).eps)


@dataclass(frozen=True, slots=True)
class Zero:
    """A zero of the velocity whose existence and surroundings are proven.

    at : x + iy [m];  on : wall, pier or "water";  radius : of inclusion [m];  multiplicity : of the zero
    weight : what it adds to the count on the mirror-closed water
    is_artefact : it belongs to the end of a line element
    """

    at: complex
    on: str
    radius: float
    multiplicity: int
    weight: int
    is_artefact: bool = False


def wall_name(model: FlowModel, at: complex) -> str:
    """Name of the straight wall at a place, else "water"; of both in a corner, as "right bank/closed end".

    Both banks of a corner of 360 degrees are one line: a place on it is on both.
    """
    reach = TOUCHING * model.scale
    names = [wall.name for wall in model.walls if float(wall.distance(np.asarray(at))) <= reach]
    if "first bank" in names and abs(at - model.walls[0].point) <= reach:
        return VERTEX
    return "/".join(names) if names else WATER


def describe(model: FlowModel, zeros: list[Zero]) -> tuple[StagnationPoint, ...]:
    """Stagnation points at proven zeros, sorted by x; at the end of a line speed and strain mean nothing."""
    if not zeros:
        return ()
    z = np.array([zero.at for zero in zeros], dtype=np.complex128)
    psi = model.potential(z).imag
    regular = np.array([not zero.is_artefact for zero in zeros])
    jet = model.jet(np.where(regular, z, complex(np.nan, np.nan)))
    points = [
        _point(
            model,
            zero,
            float(psi[k]),
            (complex(jet.velocity[k]), complex(jet.slope[k]), complex(jet.skew[k])),
        )
        if regular[k]
        else _artefact(zero, float(psi[k]))
        for k, zero in enumerate(zeros)
    ]
    return tuple(sorted(points, key=lambda point: (point.at.real, point.at.imag)))


def _point(
    model: FlowModel, zero: Zero, psi: float, jet: tuple[complex, complex, complex]
) -> StagnationPoint:
    velocity, slope, skew = jet
    at_vertex = zero.on == VERTEX
    kind = _kind(zero, slope, skew)
    has_outflow = kind in (StagnationKind.SADDLE, StagnationKind.WALL)
    return StagnationPoint(
        at=zero.at,
        kind=kind,
        on=zero.on,
        residual_speed=0.0 if at_vertex else abs(velocity),
        strain_rate=_vertex_strain(model, slope) if at_vertex else abs(slope),
        outflow_deg=_outflow(model, zero, slope, skew) if has_outflow else float(np.nan),
        stream_function=psi,
        inclusion_radius=zero.radius,
        multiplicity=zero.multiplicity,
    )


def _artefact(zero: Zero, psi: float) -> StagnationPoint:
    nothing = float(np.nan)
    return StagnationPoint(
        at=zero.at,
        kind=StagnationKind.SADDLE if zero.on == WATER else StagnationKind.WALL,
        on=zero.on,
        residual_speed=nothing,
        strain_rate=nothing,
        outflow_deg=nothing,
        stream_function=psi,
        inclusion_radius=zero.radius,
        multiplicity=zero.multiplicity,
        is_artefact=True,
    )


def _kind(zero: Zero, slope: complex, skew: complex) -> StagnationKind:
    if zero.multiplicity > 1:
        return StagnationKind.DEGENERATE
    if zero.on != WATER:
        return StagnationKind.WALL
    return StagnationKind.SADDLE if abs(slope) > abs(skew) else StagnationKind.CENTRE


def _vertex_strain(model: FlowModel, slope: complex) -> float:
    """|dW/dz| at the vertex, W ~ (z - vertex)^(pi/alpha - 1): finite at 90 degrees, 0 below, nan above."""
    exponent = np.pi / _angle(model)
    if exponent > 2.0 + 1e-9:
        return 0.0
    return abs(slope) if exponent > 2.0 - 1e-9 else float(np.nan)


def _angle(model: FlowModel) -> float:
    first, second = model.walls
    turn = float(np.angle(-second.direction / first.direction))
    return turn if turn > 0.0 else turn + 2.0 * np.pi


def _outflow(model: FlowModel, zero: Zero, slope: complex, skew: complex) -> float:
    """Angle of the eigenvector of the velocity gradient along which water leaves [deg].

    With W = a d + b conj(d) and b imaginary, velocity along d = exp(i t) is real multiple of d where
    |a| sin(arg a + 2 t) = -Im b.
    """
    if zero.on == VERTEX:
        return _vertex_outflow(model)
    sine = np.clip(-skew.imag / abs(slope), -1.0, 1.0)
    angle = 0.5 * (np.arcsin(sine) - np.angle(slope))
    forward = complex(np.exp(1j * angle))
    turned = _points_into_land(model, zero, forward)
    if turned is None:
        return _degrees(forward, 180.0)
    return _degrees(-forward if turned else forward)


def _degrees(direction: complex, period: float = 360.0) -> float:
    """Angle of a direction in [0, period) [deg]; an angle of rounding below 0 is 0."""
    degrees = float(np.degrees(np.angle(direction))) % period
    return degrees if degrees < period * (1.0 - 4.0 * EPS) else 0.0


def _points_into_land(model: FlowModel, zero: Zero, direction: complex) -> bool | None:
    """Whether a direction points into the wall; None in the water and where it runs along the wall."""
    for pier in model.piers:
        if pier.name == zero.on:
            inward = ((zero.at - pier.at) / pier.radius * direction.conjugate()).real
            return None if abs(inward) < 0.5 else bool(inward < 0.0)
    if model.rings and zero.on in {name for ring in model.rings for name in ring.edges}:
        step = 1e-6 * model.scale * direction
        ahead, behind = model.rings_distance(np.array([zero.at + step, zero.at - step]))
        return None if min(abs(ahead), abs(behind)) < 0.5 * abs(step) else bool(ahead < 0.0)
    names = zero.on.split("/")
    heads = [(direction / wall.direction).imag for wall in model.walls if wall.name in names]
    leaving = [head for head in heads if abs(head) > 0.5]
    return bool(leaving[0] < 0.0) if leaving else None


def _vertex_outflow(model: FlowModel) -> float:
    """Bank of a corner along which water leaves the vertex [deg]; the bisector if it comes along both."""
    first, second = model.walls
    reach = 1e-6 * model.scale
    away = [first.direction, -second.direction]
    for direction in away:
        along = model.velocity(np.array([first.point + reach * direction]))[0] * direction
        if along.real > 0.0:
            return _degrees(direction)
    bisector = first.direction * np.exp(0.5j * _angle(model))
    return _degrees(bisector)

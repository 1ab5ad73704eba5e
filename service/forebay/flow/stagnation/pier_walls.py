"""Zeros on the walls of piers: there the velocity has one real component, which changes sign."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.layout import Pier
from forebay.flow.model import FlowModel

EPS = float(np.finfo(np.float64).eps)

_SAMPLE = 96
_LEAK = 8.0
"""Normal velocity accepted on a wall, in units of the model's residual [-]."""


@dataclass(frozen=True, slots=True)
class WallZero:
    """Zero of the tangential velocity: place x + iy [m] and distance to the zero of W nearby [m]."""

    at: complex
    gap: float


def fastest(model: FlowModel, pier: Pier) -> float:
    """Largest speed on a sample of a pier's wall [m/s]."""
    ring = pier.at + pier.radius * np.exp(2j * np.pi * np.arange(_SAMPLE) / _SAMPLE)
    return float(np.max(np.abs(model.velocity(ring))))


def wall_zero(model: FlowModel, pier: Pier, near: complex) -> WallZero | None:
    """Zero of the tangential velocity nearest a place, if W vanishes there up to the model's residual.

    W dz is real along the wall, f(t) = Re(W i exp(i t)); Newton in t.
    """
    angle = float(np.angle(near - pier.at))
    for _ in range(8):
        normal = complex(np.exp(1j * angle))
        jet = model.jet(np.array([pier.at + pier.radius * normal]))
        velocity, slope = complex(jet.velocity[0]), complex(jet.slope[0])
        value = (velocity * 1j * normal).real
        change = (-slope * pier.radius * normal * normal - velocity * normal).real
        step = value / change if change != 0.0 else 0.0
        angle -= float(np.clip(step, -0.1, 0.1))
        if abs(step) <= 4.0 * EPS:
            break
    at = pier.at + pier.radius * complex(np.exp(1j * angle))
    jet = model.jet(np.array([at]))
    speed, slope = abs(complex(jet.velocity[0])), complex(jet.slope[0])
    rounding = 16.0 * EPS * float(model.magnitude(np.array([at]))[0])
    allowed = _LEAK * model.boundary_residual * fastest(model, pier) + rounding
    if speed > allowed or slope == 0.0:
        return None
    return WallZero(at, (speed + allowed) / abs(slope))

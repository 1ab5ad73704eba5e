"""Mirror images of a vortex core in straight walls, as far as the core can be felt in the water."""

import numpy as np

from forebay.flow.maps import AffineMap, LogarithmMap
from forebay.flow.poles import PERIODIC
from forebay.flow.shores import Frame

REACH = 7.0
"""Radii beyond which a lamb-oseen core differs from a point vortex by less than exp(-49) = 5e-22 [-]."""

_WHOLE = 1e-9
"""Tolerance within which pi / angle counts as a whole number [-]."""

_TURN = 2.0 * np.pi

Placed = tuple[tuple[complex, ...], tuple[float, ...]]
"""Positions [m] and the signs of their circulations."""


def core_images(at: complex, reach: float, frame: Frame) -> Placed:
    """A core and all its images within `reach` of the water, the core itself first.

    Exact for straight banks, channels, dead ends, basins, and corners of pi/m. In any other corner the
    core is mirrored once in each bank that it reaches, which leaves a flow through the banks of
    exp(-(r/a)^2) for a core at a distance r from the vertex.

    Parameters
    ----------
    at : position of the vortex, x + iy [m];  reach : how far the core can be felt [m];  frame : the shore
    """
    match frame.map:
        case LogarithmMap() as corner:
            return _corner_images(at, reach, corner)
        case AffineMap() as affine:
            return _affine_images(at, reach, affine, frame=frame)
        case _:
            msg = f"no mirrors for {type(frame.map).__name__}"
            raise TypeError(msg)


def _affine_images(at: complex, reach: float, affine: AffineMap, *, frame: Frame) -> Placed:
    tau = complex(affine.forward(np.asarray(at)))
    images = frame.images(tau)
    far = reach * abs(affine.rate)
    rows = int(np.ceil(far / (2.0 * np.pi))) + 1 if frame.kappa == PERIODIC else 0
    places, signs = [at], [1.0]
    for index, (place, conjugated) in enumerate(zip(images.positions, images.conjugated, strict=True)):
        for row in range(-rows, rows + 1):
            image = complex(place) + 2j * np.pi * row
            is_core = index == 0 and row == 0
            if not is_core and _outside(image, frame) < far:
                places.append(complex(affine.inverse(np.asarray(image))))
                signs.append(-1.0 if conjugated else 1.0)
    return tuple(places), tuple(signs)


def _outside(tau: complex, frame: Frame) -> float:
    """Distance from the water [-]."""
    top = np.pi if frame.kappa == PERIODIC else np.inf
    below = max(-tau.imag, tau.imag - top, 0.0) if frame.mirrored else 0.0
    beside = max(-tau.real, tau.real - frame.length, 0.0) if frame.closed else 0.0
    return float(np.hypot(below, beside))


def _corner_images(at: complex, reach: float, corner: LogarithmMap) -> Placed:
    local = (at - corner.vertex) * corner.along.conjugate()
    log = complex(corner.forward(np.asarray(at))) / corner.exponent
    angle, distance = log.imag, abs(local)
    order = round(corner.exponent)
    if abs(corner.exponent - order) < _WHOLE:
        turns = [2.0 * corner.angle * k for k in range(order)]
        angles = [(turn + angle, 1.0) for turn in turns] + [(turn - angle, -1.0) for turn in turns]
        felt = [(phi, sign) for phi, sign in angles[1:] if distance * _off(phi, 0.0, corner.angle) < reach]
    else:
        # a bank mirrors the core if the core reaches it and the image lies on land
        mirrored = [(-angle, _off(angle, 0.0)), (2.0 * corner.angle - angle, _off(angle, corner.angle))]
        on_land = [phi for phi, gap in mirrored if distance * gap < reach and phi % _TURN > corner.angle]
        felt = [(phi, -1.0) for phi in on_land]
    spokes = [corner.vertex + corner.along * distance * complex(np.exp(1j * phi)) for phi, _ in felt]
    return (at, *spokes), (1.0, *(sign for _, sign in felt))


def _off(phi: float, *banks: float) -> float:
    """Distance of exp(i phi) from the nearest of the banks at these angles, 1 from the vertex on [-]."""
    excess = min(abs(phi - bank - _TURN * k) for bank in banks for k in (-1, 0, 1))
    return float(np.sin(excess)) if excess < 0.5 * np.pi else 1.0

"""Distinct poles of a `PoleField` with their orders, as Aberth's iteration needs them."""

import math

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.poles import PoleField
from forebay.flow.shores import Frame
from forebay.flow.stagnation.aberth import PoleOrders
from forebay.flow.stagnation.count import FarField

SAME = 1e-13
"""Poles closer than this part of their extent are one [-]."""

_NEGLIGIBLE = 1e-10
"""Multipoles of a pier below this part of its strongest, on its wall, are left out of the iteration [-]."""


def trimmed(field: PoleField, radii: FloatArray) -> PoleField:
    """The field without the multipoles that no speed outside the piers can show: starts need no more.

    radii : shape (k,), radius of the body round each multipole centre [-]; 0 for a doublet
    """
    if field.centres.size == 0:
        return field
    orders = np.arange(1, field.moments.shape[1] + 1)
    with np.errstate(divide="ignore", over="ignore", under="ignore"):
        on_wall = (
            orders * np.abs(field.moments) * np.where(radii > 0.0, radii, 1.0)[:, None] ** (-orders - 1.0)
        )
    weak = (on_wall < _NEGLIGIBLE * on_wall.max(axis=1, keepdims=True)) & (radii > 0.0)[:, None]
    moments = np.where(weak, 0.0, field.moments)
    present = np.flatnonzero(np.any(moments != 0.0, axis=0))
    width = int(present[-1]) + 1 if present.size else 1
    return PoleField(
        field.kappa,
        field.offset,
        field.constant,
        field.poles,
        field.strengths,
        field.owners,
        field.centres,
        np.ascontiguousarray(moments[:, :width]),
        field.moment_owners,
    )


def pole_orders(field: PoleField, frame: Frame, far: FarField) -> PoleOrders:
    """Distinct poles in one period (one cell of a basin) and the number of zeros there."""
    everything = _merged(field)
    present = (everything.rows >= 0) | (np.abs(everything.strengths) > 0.0)
    cell = 0.0
    if math.isfinite(frame.length):
        cell = 2.0 * frame.length
        present &= np.abs(everything.at.real / frame.length - 1e-9) <= 1.0
    lost = far.total if cell == 0.0 else 0
    orders = everything.orders[present]
    return PoleOrders(
        at=everything.at[present],
        orders=orders,
        strengths=everything.strengths[present],
        rows=everything.rows[present],
        tilt=0.5 * (far.left - far.right) if cell == 0.0 else 0.0,
        zero_count=int(orders.sum()) - lost,
        cell=cell,
    )


def _merged(field: PoleField) -> PoleOrders:
    """Poles at one place made one: their strengths add, a multipole takes in simple ones."""
    reduced = [_principal(complex(p), field.kappa) for p in np.concatenate([field.centres, field.poles])]
    places = np.array(reduced, dtype=np.complex128)
    same = SAME * float(np.max(np.abs(places), initial=0.0))
    order_of = [int(np.flatnonzero(row)[-1]) + 2 if np.any(row) else 1 for row in field.moments]
    orders = np.array(order_of + [1] * field.poles.size, dtype=np.float64)
    rows = np.where(orders > 1.0, np.arange(orders.size), -1)
    strengths = np.concatenate([np.zeros(field.centres.size), field.strengths])
    heads: list[int] = []
    for index in np.lexsort((-orders, places.imag, places.real)):
        twin = next((h for h in heads[-4:] if abs(places[h] - places[index]) <= same), None)
        if twin is None:
            heads.append(int(index))
            continue
        strengths[twin] += strengths[index]
        if orders[index] > orders[twin]:
            orders[twin], rows[twin] = orders[index], rows[index]
    return PoleOrders(places[heads], orders[heads], strengths[heads], rows[heads], 0.0, 0)


def _principal(tau: complex, kappa: float) -> complex:
    if kappa == 0.0 or -math.pi < tau.imag <= math.pi:
        return tau
    return complex(tau.real, tau.imag - 2.0 * math.pi * round(tau.imag / (2.0 * math.pi)))

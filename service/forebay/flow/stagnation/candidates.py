"""Candidate zeros in the closed water, and what lies on the straight walls of the mapped plane."""

import math

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.poles import PoleField
from forebay.flow.shores import Frame
from forebay.flow.stagnation.certificate import Certificates, certify


def depths(frame: Frame, tau: ComplexArray) -> FloatArray:
    """Distance from each straight wall of the mapped plane, positive in the water; shape (n, walls)."""
    columns = []
    if frame.mirrored:
        columns.append(tau.imag)
        if frame.kappa > 0.0:
            columns.append(math.pi - tau.imag)
    if frame.closed:
        columns.append(tau.real)
        if math.isfinite(frame.length):
            columns.append(frame.length - tau.real)
    return np.stack(columns, axis=1) if columns else np.empty((tau.size, 0))


def on_walls(frame: Frame, tau: ComplexArray, which: BoolArray) -> ComplexArray:
    """Points moved on to the walls marked in `which`, columns as `depths`."""
    real, imag = tau.real.copy(), tau.imag.copy()
    column = 0
    if frame.mirrored:
        imag[which[:, 0]] = 0.0
        column = 1
        if frame.kappa > 0.0:
            imag[which[:, 1]] = math.pi
            column = 2
    if frame.closed:
        real[which[:, column]] = 0.0
        if math.isfinite(frame.length):
            real[which[:, column + 1]] = frame.length
    return real + 1j * imag


def in_water(frame: Frame, tau: ComplexArray, margin: float) -> ComplexArray:
    """Those of one period's zeros in the closed water, or within a margin of it [-]."""
    imag, real = tau.imag, tau.real
    if frame.mirrored and frame.kappa > 0.0:
        imag = np.where(imag < margin - math.pi, imag + 2.0 * math.pi, imag)
    if math.isfinite(frame.length):
        real = np.where(real < margin - frame.length, real + 2.0 * frame.length, real)
    wrapped = real + 1j * imag
    return wrapped[np.all(depths(frame, wrapped) >= -margin, axis=1)]


def settle(field: PoleField, frame: Frame, found: Certificates) -> tuple[Certificates, BoolArray]:
    """Certificates with zeros that must lie on a wall moved on to it; and the marks of the walls.

    A disc centred on a wall is its own mirror image, and so is its only zero: the zero lies on the wall.
    """
    near = np.abs(depths(frame, found.at)) < found.unique[:, None]
    moved = near.any(axis=1) & found.granted
    if not moved.any():
        return found, near & False
    snapped = certify(field, on_walls(frame, found.at[moved], near[moved]))
    held = snapped.granted & (np.abs(snapped.at - found.at[moved]) <= snapped.unique)
    at, slope = found.at.copy(), found.slope.copy()
    radius, unique = found.radius.copy(), found.unique.copy()
    index = np.flatnonzero(moved)
    radius[index] = np.nan
    good = index[held]
    at[good], slope[good] = snapped.at[held], snapped.slope[held]
    radius[good], unique[good] = snapped.radius[held], snapped.unique[held]
    marks = np.zeros_like(near)
    marks[good] = near[good]
    return Certificates(at, slope, radius, unique), marks

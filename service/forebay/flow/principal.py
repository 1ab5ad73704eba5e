"""Principal values and directions of symmetric 3x3 tensors, oriented the same way by any library."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import FloatArray

EQUAL_VALUES = 64 * np.finfo(np.float64).eps
"""Principal values closer than this share of the largest count as one [-]: rounding."""

EQUAL_COMPONENTS = 1e-9
"""Components of a direction closer than this count as equal when its sign is chosen [-]."""


@dataclass(frozen=True, slots=True)
class PrincipalAxes:
    """Descending `values`, shape (n, 3); unit `directions`, one per row, right-handed, shape (n, 3, 3)."""

    values: FloatArray
    directions: FloatArray


def principal_axes(tensors: FloatArray) -> PrincipalAxes:
    """Principal values and directions, T d_k = s_k d_k, s_1 >= s_2 >= s_3.

    Parameters
    ----------
    tensors : float array, shape (n, 3, 3)
        Symmetric and finite; the lower triangle of each is read where it is not plane.

    Returns
    -------
    PrincipalAxes
        In the first two directions the component of largest magnitude (the first of equals) is positive;
        the third is their cross product. Where values coincide the directions are a choice: the coordinate
        axes if all three do or both lie in the plan, else the projection of the axis that lies farthest
        from the single direction.

    Notes
    -----
    Where xz = yz = 0 the plan is decomposed in closed form, so that plane fields have exact axes; elsewhere
    LAPACK's symmetric decomposition. Error of the values: below 4 eps and 16 eps of the largest. Directions
    of nearly equal values are as uncertain as eps / (relative gap).
    """
    values = np.empty((len(tensors), 3))
    directions = np.zeros((len(tensors), 3, 3))
    plane = (tensors[:, 0, 2] == 0.0) & (tensors[:, 1, 2] == 0.0)
    values[plane], directions[plane] = _plane_axes(tensors[plane])
    values[~plane], directions[~plane] = _spatial_axes(tensors[~plane])
    order = np.argsort(-values, axis=1, kind="stable")
    values = np.take_along_axis(values, order, axis=1)
    return PrincipalAxes(values, _oriented(np.take_along_axis(directions, order[:, :, None], axis=1)))


def _plane_axes(tensors: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Values and rows of directions: major and minor in the plan, then the vertical."""
    centre = 0.5 * tensors[:, 0, 0] + 0.5 * tensors[:, 1, 1]
    half = 0.5 * tensors[:, 0, 0] - 0.5 * tensors[:, 1, 1]
    radius = np.hypot(half, tensors[:, 1, 0])
    cosine, sine = _half_angle(half, tensors[:, 1, 0], radius)
    directions = np.zeros((len(tensors), 3, 3))
    directions[:, 0, 0], directions[:, 0, 1] = cosine, sine
    directions[:, 1, 0], directions[:, 1, 1] = -sine, cosine
    directions[:, 2, 2] = 1.0
    return np.stack([centre + radius, centre - radius, tensors[:, 2, 2]], axis=1), directions


def _half_angle(half: FloatArray, shear: FloatArray, radius: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Cosine and sine of half the angle of (half, shear), without cancellation; (1, 0) at radius 0."""
    safe = np.where(radius == 0.0, 1.0, radius)
    share = np.where(radius == 0.0, 1.0, np.abs(half) / safe)
    large = np.sqrt(0.5 * (1.0 + share))
    small = 0.5 * np.abs(shear) / safe / large
    sign = np.where(shear < 0.0, -1.0, 1.0)
    along_x = half >= 0.0
    return np.where(along_x, large, small), sign * np.where(along_x, small, large)


def _spatial_axes(tensors: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Values and rows of directions by the symmetric decomposition; equal values get chosen directions."""
    values, columns = np.linalg.eigh(tensors)
    directions: FloatArray = np.swapaxes(columns, 1, 2)
    tolerance = EQUAL_VALUES * np.max(np.abs(values), axis=1, initial=0.0)
    lower_pair = values[:, 1] - values[:, 0] <= tolerance
    upper_pair = values[:, 2] - values[:, 1] <= tolerance
    for index in np.flatnonzero(lower_pair | upper_pair):
        single = 2 if lower_pair[index] else 0
        alone = not (lower_pair[index] and upper_pair[index])
        directions[index] = _chosen_axes(directions[index], single) if alone else np.eye(3)
    return values, directions


def _chosen_axes(directions: FloatArray, single: int) -> FloatArray:
    """Rows with the row `single` kept and the other two chosen in the plane across it."""
    axis = directions[single]
    farthest = np.eye(3)[int(np.argmin(np.round(np.abs(axis), 9)))]
    across = farthest - (farthest @ axis) * axis
    across /= np.linalg.norm(across)
    chosen = np.empty((3, 3))
    others = [row for row in range(3) if row != single]
    chosen[single], chosen[others[0]], chosen[others[1]] = axis, across, np.cross(axis, across)
    return chosen


def _oriented(directions: FloatArray) -> FloatArray:
    """The same directions with signs chosen and the third completing a right-handed set."""
    size = np.abs(directions)
    leading = np.argmax(
        size >= (1.0 - EQUAL_COMPONENTS) * size.max(axis=2, initial=0.0, keepdims=True), axis=2
    )
    sign = np.sign(np.take_along_axis(directions, leading[:, :, None], axis=2))
    oriented = directions * sign
    oriented[:, 2] = np.cross(oriented[:, 0], oriented[:, 1])
    return oriented + 0.0

"""Mirror images of a place in straight banks, as far as their near field can be felt in the water."""

from dataclasses import dataclass
from math import pi

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.errors import TooLargeError
from forebay.flow.layout import Corner, Shore
from forebay.flow.shores import Wall

MOST_IMAGES = 4096
"""Images of one opening above which the water is too narrow for its depth."""

_SAME = 1e-9
"""Distance over the size of the walls within which two images are one [-]."""
_WHOLE = 1e-9
"""Deviation of pi over the angle of a corner from a whole number that is rounding [-]."""


@dataclass(frozen=True, slots=True)
class _Isometry:
    """z -> turn z + shift, or turn conj(z) + shift if `flips`."""

    turn: complex = 1.0 + 0j
    shift: complex = 0j
    flips: bool = False

    def apply(self, z: complex) -> complex:
        """Image of a place."""
        return self.turn * (z.conjugate() if self.flips else z) + self.shift

    def mirrored(self, wall: Wall) -> "_Isometry":
        """Followed by the reflection in a wall, z -> p + d^2 conj(z - p)."""
        square = wall.direction**2
        shift = wall.point + square * (self.shift - wall.point).conjugate()
        return _Isometry(square * self.turn.conjugate(), shift, not self.flips)


def plan_images(shore: Shore, walls: tuple[Wall, ...], at: complex, reach: float) -> ComplexArray:
    """Places whose near fields together have no flow through the banks, `at` first, shape (k,) [m].

    Parameters
    ----------
    shore : the shore
    walls : its straight walls
    at : the opening; one that stands on a bank coincides with its image and is listed twice [m]
    reach : distance from the water beyond which an image is not felt [m]

    Returns
    -------
    The images of the whole group of reflections where it is finite in the plane's sense: straight banks,
    rectangles, and corners of 180/n degrees. In any other corner the image in each bank that the place
    faces; `leak` of the field says what that leaves.

    Raises
    ------
    TooLargeError : more than `MOST_IMAGES` images
    """
    if not walls:
        return np.array([at])
    if isinstance(shore, Corner) and not _closes(shore.interior_angle):
        return _facing(walls, at)
    probe = at + (0.137 + 0.0613j) * reach  # a place without symmetry tells isometries apart
    found = [_Isometry()]
    known = np.array([probe])
    for isometry in found:  # grows while it is walked through
        for wall in walls:
            image = isometry.mirrored(wall)
            mark = image.apply(probe)
            if np.min(np.abs(known - mark)) <= _SAME * reach or _apart(walls, image.apply(at)) > reach:
                continue
            found.append(image)
            known = np.append(known, mark)
        if len(found) > MOST_IMAGES:
            raise TooLargeError(
                "the water is too narrow for its depth: too many images of an opening",
                ("layout", "shore"),
                limit=MOST_IMAGES,
            )
    return np.array([isometry.apply(at) for isometry in found])


def _apart(walls: tuple[Wall, ...], z: complex) -> float:
    return min(float(wall.distance(np.asarray(z))) for wall in walls)


def _closes(angle: float) -> bool:
    """Whether reflections in two banks at `angle` [rad] give a finite group without a source in the water."""
    count = pi / angle
    return abs(count - round(count)) <= _WHOLE * count and round(count) >= 1


def _facing(walls: tuple[Wall, ...], at: complex) -> ComplexArray:
    """The place and its image in each wall on which the foot of its perpendicular lies."""
    images = [at]
    for wall in walls:
        foot = ((at - wall.point) * wall.direction.conjugate()).real
        if -wall.before <= foot <= wall.after:
            images.append(_Isometry().mirrored(wall).apply(at))
    return np.array(images)


def wall_samples(
    walls: tuple[Wall, ...], at: complex, spacing: FloatArray
) -> tuple[ComplexArray, ComplexArray]:
    """Places on the walls about the foot of a perpendicular, and the walls' directions there.

    spacing : distances from the foot along the wall, either sign [m]; those off the wall are left out
    """
    places, directions = [], []
    for wall in walls:
        foot = ((at - wall.point) * wall.direction.conjugate()).real
        along = foot + spacing
        along = along[(along >= -wall.before) & (along <= wall.after)]
        places.append(wall.point + along * wall.direction)
        directions.append(np.full(along.size, wall.direction))
    if not places:
        return np.empty(0, dtype=np.complex128), np.empty(0, dtype=np.complex128)
    return np.concatenate(places), np.concatenate(directions)

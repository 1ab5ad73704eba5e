"""How far a channel carries a discharge until turbulence has mixed it over the width."""

from functools import lru_cache
from math import cos, exp, pi

from scipy.optimize import brentq

from forebay.flow.arrivals.release import AlongLine, AtPoint, FromOutfall, OverDisc, OverPolygon, Release
from forebay.flow.layout import Channel, Layout
from forebay.trade.applicability.geometry import ends_of

MID_STREAM = 0.1
"""Length of mixing over the width from mid-stream, over U W^2 / eps; from a bank four times that [-]."""

EVEN = 0.05
"""Largest departure of the concentration from its mean, over it, that counts as mixed [-]."""

_MODES = 12
"""Terms of the series; at the lengths in question the next is below 1e-30 [-]."""


def mixing_length(
    release: Release, layout: Layout, channel: Channel, coefficient: float, current: float
) -> float:
    """Length after which a release is mixed over a channel [m].

    k U W^2 / eps, k from `mixing_share` at the middle of the release.
    coefficient : eps [m2/s];  current : U [m/s]
    """
    across = ((middle_of(release, layout) - channel.point) * channel.along.conjugate()).imag / channel.width
    return mixing_share(min(max(across, 0.0), 1.0)) * current * channel.width**2 / coefficient


@lru_cache(maxsize=256)
def mixing_share(across: float) -> float:
    """Length of mixing over the width, over U W^2 / eps [-].

    across : place over the width, 0 at one bank and 1 at the other [-]

    The published 0.1 from mid-stream and 0.4 from a bank, and between them in the ratio in which a steady
    discharge between reflecting banks becomes even to `EVEN`:

        C / mean = 1 + 2 sum_n cos(n pi across) cos(n pi y / W) exp(-n^2 pi^2 x eps / (U W^2))

    References
    ----------
    Fischer et al. 1979, Mixing in Inland and Coastal Waters, chapter 5 (0.1; from a bank the width counts
    twice, hence 0.4; from memory).
    """
    return MID_STREAM * _even_from(across) / _even_from(0.5)


def _even_from(across: float) -> float:
    """Distance from which the series is even, over U W^2 / eps [-]."""
    return float(brentq(lambda x: unevenness(x, across) - EVEN, 0.05, 1.0, xtol=1e-12))


def unevenness(distance: float, across: float) -> float:
    """Largest departure from the mean at either bank and abreast of the discharge, over the mean [-]."""
    modes = range(1, _MODES + 1)
    parts = [2.0 * cos(n * pi * across) * exp(-((n * pi) ** 2) * distance) for n in modes]
    return max(
        abs(sum(part * cos(n * pi * y) for n, part in zip(modes, parts, strict=True)))
        for y in (0.0, across, 1.0)
    )


def middle_of(release: Release, layout: Layout) -> complex:
    """Middle of the place of a release [m]: of its ends, vertices or outfall."""
    match release.place:
        case AtPoint(at=at):
            return at
        case OverDisc(centre=centre):
            return centre
        case AlongLine(points=points) | OverPolygon(points=points):
            return sum(points) / len(points)
        case FromOutfall(outfall=name):
            ends = next(ends_of(element) for element in layout.elements if element.name == name)
            return sum(ends) / len(ends)

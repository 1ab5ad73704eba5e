"""Rates of shear that fish, larvae and eggs were seen to bear, or not: records with source and confidence.

Exposure strain rate is a difference of speed over the width of the animal, 1.8 cm for juvenile salmonids;
a computed rate of shear is compared with it as the velocity gradient of the simple shear that it equals. The
water is smooth in the model: turbulence adds to every rate.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum
from math import isfinite, pi, sqrt

from forebay.flow.errors import FlowError

FISH_WIDTH = 0.018
"""Width over which exposure strain rates of juvenile salmonids are stated [m] (from memory)."""


class Confidence(StrEnum):
    """How well a threshold is known."""

    ABSTRACT_READ = "abstract-read"
    FROM_MEMORY = "from-memory"


class UnknownThresholdError(FlowError):
    """A request names a threshold that the catalogue does not have."""

    code = "unknown-threshold"
    title = "No such threshold of exposure"


@dataclass(frozen=True, slots=True)
class Threshold:
    """A rate of shear [1/s] and what was seen there.

    effect : what happens above it, or was not seen up to it;  confidence : of number and wording
    """

    id: str
    organism: str
    life_stage: str
    rate: float
    effect: str
    confidence: Confidence
    source: str


_NEITZEL = (
    "Neitzel et al. 2004, Trans. Am. Fish. Soc. 133, 447-454: submerged jet of 6.35 cm, exposure strain "
    "rates to 1185 1/s over 1.8 cm"
)
_ONSET = "laboratory study of fall chinook 93 to 128 mm long in a submerged jet; nozzle speeds over 1.8 cm"
_NAVARRO = "Navarro et al. 2019, eggs and larvae of Murray-Darling fish in shear"

THRESHOLDS: tuple[Threshold, ...] = (
    Threshold(
        "silver-perch-egg",
        "silver perch",
        "egg",
        148.0,
        "all eggs died above it",
        Confidence.ABSTRACT_READ,
        _NAVARRO,
    ),
    Threshold(
        "murray-cod-early-larva",
        "Murray cod",
        "early larva",
        400.0,
        "most survived up to it",
        Confidence.ABSTRACT_READ,
        _NAVARRO,
    ),
    Threshold(
        "salmonid-juvenile",
        "trout, steelhead, chinook, American shad",
        "juvenile",
        517.0,
        "no significant injury up to it",
        Confidence.FROM_MEMORY,
        _NEITZEL,
    ),
    Threshold(
        "perch-cod-larva",
        "golden perch, silver perch, Murray cod",
        "larva",
        600.0,
        "most survived up to it",
        Confidence.ABSTRACT_READ,
        _NAVARRO,
    ),
    Threshold(
        "golden-perch-egg",
        "golden perch",
        "egg",
        629.0,
        "all eggs died above it",
        Confidence.ABSTRACT_READ,
        _NAVARRO,
    ),
    Threshold(
        "chinook-juvenile-minor",
        "fall chinook",
        "juvenile",
        12.2 / FISH_WIDTH,
        "minor injuries set in",
        Confidence.FROM_MEMORY,
        _ONSET,
    ),
    Threshold(
        "chinook-juvenile-major",
        "fall chinook",
        "juvenile",
        13.7 / FISH_WIDTH,
        "major injuries set in",
        Confidence.FROM_MEMORY,
        _ONSET,
    ),
    Threshold(
        "american-eel",
        "American eel",
        "eel",
        800.0,
        "no effect was seen even above it",
        Confidence.ABSTRACT_READ,
        "laboratory study of American eel in shear",
    ),
    Threshold(
        "chinook-juvenile-fatal",
        "fall chinook",
        "juvenile",
        16.8 / FISH_WIDTH,
        "fatal injuries set in",
        Confidence.FROM_MEMORY,
        _ONSET,
    ),
)
"""Thresholds by ascending rate."""


@dataclass(frozen=True, slots=True)
class Exposure:
    """A rate of shear against one threshold; `exceeded` and `margin` None where there is no rate.

    margin : rate over the threshold's rate [-]
    """

    threshold: Threshold
    margin: float | None
    exceeded: bool | None


def chosen_thresholds(ids: Sequence[str]) -> tuple[Threshold, ...]:
    """Thresholds by id, in the order asked for; all of them without ids.

    Raises UnknownThresholdError, path ("exposure", index).
    """
    known = {threshold.id: threshold for threshold in THRESHOLDS}
    for index, wanted in enumerate(ids):
        if wanted not in known:
            raise UnknownThresholdError(f"known are {', '.join(sorted(known))}", ("exposure", index))
    return tuple(known[wanted] for wanted in ids) or THRESHOLDS


def expose(shear_rate: float, thresholds: Sequence[Threshold]) -> tuple[Exposure, ...]:
    """A rate of shear [1/s] against thresholds; nan for a place without one."""
    if not isfinite(shear_rate):
        return tuple(Exposure(threshold, None, None) for threshold in thresholds)
    return tuple(Exposure(t, shear_rate / t.rate, shear_rate > t.rate) for t in thresholds)


def reach_of(flux: float, threshold: Threshold) -> float:
    """Distance from a point opening within which its own rate of shear exceeds a threshold [m].

    flux : |q| as seen in the plane, G = q / (pi r^2) [m2/s]: twice the discharge over depth on a bank
    """
    return sqrt(flux / (pi * threshold.rate))

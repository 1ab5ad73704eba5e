"""What advection by the mean flow alone can tell of a spill, and where turbulence makes it untrue."""

import math
from collections.abc import Iterator
from dataclasses import dataclass

from forebay.flow.arrivals.release import AtPoint, Release
from forebay.flow.arrivals.result import Arrival, ReleaseArrivals, ReleaseStatus, Tail
from forebay.flow.errors import Path
from forebay.flow.layout import Channel, Layout, LineSink, Sink
from forebay.trade.applicability.friction import MIXING_COEFFICIENT, STRIP_SHARE
from forebay.trade.applicability.geometry import distance_to
from forebay.trade.applicability.site import Site, SiteData
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind
from forebay.trade.applicability.width_mixing import mixing_length

SPREAD = "sigma = sqrt(2 eps t), eps = 0.6 h u*, u* = U sqrt(c_f)"
FISCHER = "Fischer et al. 1979, Mixing in Inland and Coastal Waters, chapter 5"

ADVECTION_ONLY = WarningKind(
    code="advection-only",
    severity=Severity.NOTE,
    meaning=(
        "arrivals follow the mean flow alone: they tell which water goes where and when its centre comes, "
        "not how dilute it is; no concentration and no dilution are claimed"
    ),
    threshold="always, with the arrivals of a spill",
    formula="dz/dt = u(z), steady and depth-mean",
    source=FISCHER,
)

ARRIVAL_SPREAD = WarningKind(
    code="arrival-spread",
    severity=Severity.NOTE,
    meaning=(
        "times are those of the mean flow: longitudinal dispersion and fast surface water bring the first of "
        "a real spill earlier, and slow bank water holds its last back"
    ),
    threshold="always, where a spill reaches an intake or a transect",
    formula="advective travel time",
    source=f"{FISCHER} (longitudinal dispersion)",
)

ENDLESS_TAIL = WarningKind(
    code="endless-tail",
    severity=Severity.NOTE,
    meaning=(
        "the captured water reaches to a dividing streamline, beside which travel times grow without limit: "
        "its last arrival has no time, and what comes late depends on turbulence"
    ),
    threshold="arrivals without an end",
    formula="t ~ ln(1 / distance) / strain rate",
    source="flow past a stagnation point (Batchelor 1967, section 2.7)",
)

ON_DIVIDE = WarningKind(
    code="on-dividing-streamline",
    severity=Severity.CAUTION,
    meaning="a release lies exactly between two fates: the least turbulence decides where it goes",
    threshold="release on a dividing streamline or stagnation point, to rounding",
    formula="psi(release) = psi(stagnation point)",
    source="definition of a dividing streamline",
)

SPILL_STRIP_BLURRED = WarningKind(
    code="spill-strip-blurred",
    severity=Severity.CAUTION,
    meaning="on the way to an intake turbulence spreads a spill over much of the strip that it draws",
    threshold="sigma > w / 4 at the median travel time",
    formula=f"{SPREAD}, w = Q / (h U)",
    source=f"{FISCHER}; share customary",
    unit="m",
)

NEAR_DIVIDE = WarningKind(
    code="near-dividing-streamline",
    severity=Severity.CAUTION,
    meaning="turbulence spreads a spill across the nearest dividing streamline: either fate is possible",
    threshold="distance to the nearest dividing streamline < sigma",
    formula=f"{SPREAD}, t to the nearest intake",
    source=FISCHER,
    unit="m",
)

SPILL_MIXED = WarningKind(
    code="spill-mixed-over-width",
    severity=Severity.CAUTION,
    meaning=(
        "the way to the intake is as long as it takes to mix a spill over the channel: which streamline it "
        "began on no longer matters, and each intake gets its share of the whole river's water"
    ),
    threshold="U t > L_m at the median travel time",
    formula=(
        "L_m = k U W2 / eps, k = 0.1 from mid-stream, 0.4 from a bank, between them until the concentration "
        "is even to 5 %; eps = 0.6 h u*"
    ),
    source=FISCHER,
    unit="m",
)

SPILL_KINDS = (
    ON_DIVIDE,
    NEAR_DIVIDE,
    SPILL_STRIP_BLURRED,
    SPILL_MIXED,
    ADVECTION_ONLY,
    ARRIVAL_SPREAD,
    ENDLESS_TAIL,
)
"""Every kind of warning that spills raise."""


@dataclass(frozen=True, slots=True)
class Mixing:
    """Transverse mixing at a site.

    coefficient : eps [m2/s], nan where friction or current are unknown;  current : U [m/s]
    """

    coefficient: float
    current: float

    @classmethod
    def of(cls, layout: Layout, data: SiteData) -> "Mixing":
        """Mixing of a layout's ambient current."""
        current = Site(layout, data).current
        if data.bed_friction is None or current == 0.0:
            return cls(math.nan, current)
        return cls(MIXING_COEFFICIENT * layout.depth * current * math.sqrt(data.bed_friction), current)

    def spread(self, time: float) -> float:
        """Standard deviation across the current after a time, sigma = sqrt(2 eps t) [m]."""
        return math.sqrt(2.0 * self.coefficient * time)


def spill_notices(
    layout: Layout, data: SiteData, releases: tuple[Release, ...], answers: tuple[ReleaseArrivals, ...]
) -> tuple[ApplicabilityWarning, ...]:
    """Warnings of the answer to a spill, the most serious first; paths start at the request."""
    mixing = Mixing.of(layout, data)
    raised = [ADVECTION_ONLY.raised_in_request(_sentence(ADVECTION_ONLY), ())]
    if any(answer.arrivals or answer.transits for answer in answers):
        raised.append(ARRIVAL_SPREAD.raised_in_request(_sentence(ARRIVAL_SPREAD), ()))
    for index, (release, answer) in enumerate(zip(releases, answers, strict=True)):
        path = ("releases", index)
        raised += _about_divides(layout, mixing, release, answer, path)
        raised += [
            notice
            for arrival in answer.arrivals
            for notice in _about_arrival(layout, mixing, release, answer, arrival=arrival, path=path)
        ]
    order = tuple(reversed(Severity))
    return tuple(sorted(raised, key=lambda warning: order.index(warning.severity)))


def _about_divides(
    layout: Layout, mixing: Mixing, release: Release, answer: ReleaseArrivals, path: Path
) -> Iterator[ApplicabilityWarning]:
    if answer.status is ReleaseStatus.ON_DIVIDING_STREAMLINE:
        yield ON_DIVIDE.raised_in_request(f"{answer.name!r}: {ON_DIVIDE.meaning}.", path)
        return
    if any(arrival.tail is Tail.UNBOUNDED for arrival in answer.arrivals):
        yield ENDLESS_TAIL.raised_in_request(f"{answer.name!r}: {ENDLESS_TAIL.meaning}.", path)
    intakes = [element for element in layout.elements if isinstance(element, Sink | LineSink)]
    if not isinstance(release.place, AtPoint) or not intakes or mixing.current == 0.0:
        return
    way = min(distance_to(intake, release.place.at) for intake in intakes)
    sigma = mixing.spread(way / mixing.current)
    if answer.divide_distance < sigma:
        yield NEAR_DIVIDE.raised_in_request(
            f"{answer.name!r} is {answer.divide_distance:.2g} m from a dividing streamline, less than "
            f"turbulence spreads it ({sigma:.2g} m) over the {way:.3g} m to the nearest intake: either fate "
            "is possible.",
            path,
            value=answer.divide_distance,
            limit=sigma,
        )


def _about_arrival(
    layout: Layout, mixing: Mixing, release: Release, answer: ReleaseArrivals, *, arrival: Arrival, path: Path
) -> Iterator[ApplicabilityWarning]:
    intake = next(e for e in layout.elements if isinstance(e, Sink | LineSink) and e.name == arrival.at)
    if mixing.current == 0.0 or math.isnan(mixing.coefficient):
        return
    sigma, way = mixing.spread(arrival.median_time), mixing.current * arrival.median_time
    limit = STRIP_SHARE * intake.discharge / (layout.depth * mixing.current)
    if sigma > limit:
        yield SPILL_STRIP_BLURRED.raised_in_request(
            f"Until it reaches {arrival.at!r} turbulence spreads {answer.name!r} by {sigma:.2g} m across the "
            f"current, more than a quarter ({limit:.2g} m) of the strip drawn: the share is not sharp.",
            path,
            value=sigma,
            limit=limit,
        )
    if isinstance(layout.shore, Channel):
        length = mixing_length(release, layout, layout.shore, mixing.coefficient, mixing.current)
        if way > length:
            yield SPILL_MIXED.raised_in_request(
                f"Water from {answer.name!r} drifts about {way:.3g} m to {arrival.at!r}; after {length:.3g} "
                "m a spill from there is mixed over the width, and streamlines no longer tell where it goes.",
                path,
                value=way,
                limit=length,
            )


def _sentence(kind: WarningKind) -> str:
    return f"{kind.meaning[0].upper()}{kind.meaning[1:]}."

"""The registry: every kind of warning with the rule that raises it, and their evaluation."""

from collections.abc import Callable, Iterator, Mapping
from dataclasses import fields, replace
from functools import lru_cache
from itertools import islice
from typing import Any, NamedTuple, cast

from forebay.flow.layout import Layout
from forebay.trade.applicability import (
    banks,
    friction,
    ideal,
    missing,
    near_field,
    outfalls,
    solved_walls,
    stratification,
    surface,
    thresholds,
    unsteadiness,
    wakes,
)
from forebay.trade.applicability.site import Readings, Site, SiteData
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

Rule = Callable[[Site], Iterator[ApplicabilityWarning]]

RULES: tuple[tuple[WarningKind, Rule], ...] = (
    (solved_walls.BOUNDARY_BOUND_WIDE, solved_walls.boundary_bound_wide),
    (solved_walls.BOUNDARY_BOUND, solved_walls.boundary_bound),
    (solved_walls.OPEN_EDGE_BLUNT, solved_walls.open_edge_blunt),
    (surface.RIGID_LID_FAILED, surface.rigid_lid_failed),
    (surface.RIGID_LID, surface.rigid_lid),
    (surface.SPEED_UP, surface.speed_up),
    (near_field.NEAR_FIELD_ERROR, near_field.near_field_error),
    (near_field.NEAR_FIELD_RESULT, near_field.near_field_result),
    (near_field.NEAR_FIELD_OVERLAP, near_field.near_field_overlap),
    (near_field.NEAR_FIELD, near_field.near_field),
    (wakes.PIER_LEE, wakes.pier_lee),
    (wakes.SHALLOW_WAKE, wakes.shallow_wake),
    (unsteadiness.TIDAL_REVERSAL, unsteadiness.tidal_reversal),
    (unsteadiness.EARTH_ROTATION_STRONG, unsteadiness.earth_rotation_strong),
    (unsteadiness.EARTH_ROTATION, unsteadiness.earth_rotation),
    (stratification.LAYER_WITHDRAWAL, stratification.layer_withdrawal),
    (stratification.BUOYANT_SPREADING, stratification.buoyant_spreading),
    (outfalls.OUTFALL_JET_SPEED, outfalls.outfall_jet_speed),
    (outfalls.OUTFALL_JET_REACH, outfalls.outfall_jet_reach),
    (outfalls.OUTFALL_PASSIVE, outfalls.outfall_passive),
    (banks.SALIENT_CORNER, banks.salient_corner),
    (banks.CORE_NEAR_WALL, banks.core_near_wall),
    (banks.BANK_SHEAR, banks.bank_shear),
    (banks.CHANNEL_END_SPLIT, banks.channel_end_split),
    (friction.FRICTION_LENGTH, friction.friction_length),
    (friction.TRANSVERSE_MIXING, friction.transverse_mixing),
    (friction.MIXING_LEFT_OUT, friction.mixing_left_out),
    (friction.TURBULENCE_LEFT_OUT, friction.turbulence_left_out),
    (thresholds.THRESHOLD_FROM_MEMORY, thresholds.threshold_from_memory),
    (surface.WIND_DRIFT, surface.wind_drift),
    (surface.UNEVEN_DEPTH, surface.uneven_depth),
    (ideal.ROTATIONAL_FIELD, ideal.rotational_field),
    (ideal.LINE_ENDS, ideal.line_ends),
    (ideal.AMBIENT_ZERO, ideal.ambient_zero),
    (missing.WATER_TEMPERATURE_ASSUMED, missing.water_temperature_assumed),
    (missing.BED_FRICTION_UNKNOWN, missing.bed_friction_unknown),
    (missing.PORT_AREA_UNKNOWN, missing.port_area_unknown),
    (missing.INTAKE_ELEVATION_UNKNOWN, missing.intake_elevation_unknown),
    (missing.DEPTH_RANGE_UNKNOWN, missing.depth_range_unknown),
    (missing.DENSITY_DIFFERENCE_UNKNOWN, missing.density_difference_unknown),
    (missing.INTERFACE_UNKNOWN, missing.interface_unknown),
    (missing.WIND_UNKNOWN, missing.wind_unknown),
    (unsteadiness.TIDAL_PERIOD_UNKNOWN, unsteadiness.tidal_period_unknown),
    (unsteadiness.LATITUDE_UNKNOWN, unsteadiness.latitude_unknown),
)
"""Each kind with its own rule."""

CATALOGUE: tuple[WarningKind, ...] = tuple(kind for kind, _ in RULES)
"""Every kind of warning, for GET /v1/warnings."""

_ORDER = tuple(reversed(Severity))


MOST_OF_A_KIND = 20
"""Occurrences of one kind in one answer: after that the last says that there are more."""


def evaluate(site: Site) -> tuple[ApplicabilityWarning, ...]:
    """Warnings that a site raises, the most serious first, otherwise in the order of the catalogue.

    At most `MOST_OF_A_KIND` of each kind. Rules that look at the layout alone are evaluated once for it.
    """
    data = tuple((item.name, _hashable(getattr(site.data, item.name))) for item in fields(site.data))
    of_layout = _of_layout(_Known(site.layout, data))
    raised = [
        warning
        for (_, rule), known in zip(RULES, of_layout, strict=True)
        for warning in (_first_of(rule(site)) if known is None else known)
    ]
    return tuple(sorted(raised, key=lambda warning: _ORDER.index(warning.severity)))


def remembered_reviews() -> tuple[int, int]:
    """How often what the layout alone raises was remembered, and how often evaluated, since the start."""
    known = _of_layout.cache_info()
    return known.hits, known.misses


class AnswerNeededError(Exception):
    """A rule has asked for the answer at hand, where only the layout is given."""


class _NoAnswer:
    """Stands for the answer at hand, and says so when it is looked at."""

    def __getattr__(self, name: str) -> Any:  # noqa: ANN401
        raise AnswerNeededError(name)


class _Known(NamedTuple):
    """A site without an answer, as something that can be looked up."""

    layout: Layout
    data: tuple[tuple[str, Any], ...]

    def site(self) -> Site:
        """The site, whose readings cannot be read."""
        data: dict[str, Any] = dict(self.data)
        data |= {name: dict(value) for name, value in self.data if isinstance(value, frozenset)}
        return Site(self.layout, SiteData(**data), cast("Readings", _NoAnswer()))


def _hashable(value: Any) -> Any:  # noqa: ANN401
    return frozenset(value.items()) if isinstance(value, Mapping) else value


@lru_cache(maxsize=64)
def _of_layout(known: _Known) -> tuple[list[ApplicabilityWarning] | None, ...]:
    """Warnings of each rule in turn; None for a rule that needs the answer at hand."""
    site = known.site()
    return tuple(_without_answer(rule, site) for _, rule in RULES)


def _without_answer(rule: Rule, site: Site) -> list[ApplicabilityWarning] | None:
    try:
        return _first_of(rule(site))
    except AnswerNeededError:
        return None


def _first_of(warnings: Iterator[ApplicabilityWarning]) -> list[ApplicabilityWarning]:
    first = list(islice(warnings, MOST_OF_A_KIND))
    if next(warnings, None) is not None:
        first[-1] = replace(
            first[-1], message=f"{first[-1].message} Further places of this kind are left out."
        )
    return first

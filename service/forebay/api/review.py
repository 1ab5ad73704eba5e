"""An outcome with the warnings that its layout and its numbers raise."""

from dataclasses import replace
from typing import Any

import numpy as np

from forebay.api.boundary import written_boundary
from forebay.api.origins import original_path
from forebay.api.outcome import Outcome
from forebay.api.schemas.layout import Layout, LayoutRequest
from forebay.api.units import UnitSystem
from forebay.flow.layout import Layout as FlowLayout
from forebay.trade.applicability.site import Readings
from forebay.workflows.boundary import bound_boundary
from forebay.workflows.review import review_layout

COMPUTED = Readings()
"""An answer was computed, so that the layout is known to be right; nothing else is said of it."""


def reviewed(
    request: LayoutRequest, layout: FlowLayout, result: dict[str, Any], readings: Readings | None = COMPUTED
) -> Outcome:
    """Outcome of a request about a layout; `readings` None if nothing has been computed of it."""
    return reviewed_site(request.layout, request.unit_system, layout, result, readings)


def reviewed_site(
    site: Layout,
    units: UnitSystem,
    layout: FlowLayout,
    result: dict[str, Any],
    readings: Readings | None = COMPUTED,
) -> Outcome:
    """Outcome about a site as written, and the same as a layout in SI."""
    data, bound = site.converted(units)[1], None
    if readings is not None:
        bound = bound_boundary(layout)
        readings = replace(readings, boundary_bound=None if bound is None else bound.relative)
    notices = tuple(
        replace(notice, path=original_path(notice.path, site, units)) if notice.in_layout else notice
        for notice in review_layout(layout, readings, data=data)
    )
    walls = written_boundary(site, units, layout, bound)
    return Outcome(result, layout, data, notices, boundary=walls)


def readings_of(columns: dict[str, Any], assumed_temperature: float | None = None) -> Readings:
    """What a review looks at of sampled columns; points without a value do not count."""
    points, speeds = columns["x"] + 1j * columns["y"], columns["speed"]
    known = np.isfinite(speeds)
    return Readings(
        points=points[known],
        max_speed=float(speeds[known].max()) if known.any() else None,
        assumed_temperature=assumed_temperature,
    )

"""Results of stress: tensors, shear on bed and walls, what animals and flocs meet; of the mean flow alone."""

from collections.abc import Mapping, Sequence
from typing import Any

from forebay.api.calculation_sheet.markup import Html, joined
from forebay.api.calculation_sheet.tables import number, table, word
from forebay.api.figures import duration, figure

Json = Mapping[str, Any]

MOST_ROWS = 60
"""Places that a sheet shows; the answer as JSON has all."""


def stress_part(stress: Json | None, units: Mapping[str, str]) -> Html:
    """Everything that was read from the stress at the points asked for."""
    if stress is None:
        return Html()
    states = stress["states"][:MOST_ROWS]
    return joined(
        [
            tensor_table(stress, units),
            shear_table(states, stress.get("friction"), units),
            exposure_table(states, stress.get("thresholds", ()), units),
            floc_table(stress.get("floc"), units),
        ]
    )


def tensor_table(stress: Json, units: Mapping[str, str]) -> Html:
    """Stress and dissipation of the mean flow at the points asked for."""
    states = stress["states"]
    rows = [
        (
            *place_of(state),
            *principal_extremes(state["principal_stresses"]),
            figure(state["max_shear"]),
            figure(state["dissipation"]),
            figure(state["mean_velocity_gradient"]),
            state["status"],
        )
        for state in states[:MOST_ROWS]
    ]
    columns = (
        number("x", units["at"]),
        number("y", units["at"]),
        number("Largest stress", units["principal_stresses"]),
        number("Least stress", units["principal_stresses"]),
        number("Largest shear", units["max_shear"]),
        number("Dissipation", units["dissipation"]),
        number("G", units["mean_velocity_gradient"]),
        word("Status"),
    )
    fluid = stress["fluid"]
    more = (
        f" {len(states) - MOST_ROWS} further points are in the answer as JSON."
        if len(states) > MOST_ROWS
        else ""
    )
    note = (
        f"Of the mean flow alone, relative to the pressure; tension positive. Viscosity "
        f"{figure(fluid['dynamic_viscosity'])} {units['dynamic_viscosity']}, density "
        f"{figure(fluid['density'])} "
        f"{units['density']}. Turbulence, which dissipates far more in rivers, is not in it.{more}"
    )
    return table("Stress, dissipation and G at the points asked for", columns, rows, note)


def principal_extremes(stresses: Sequence[float | None] | None) -> tuple[str, str]:
    """Largest and least principal stress."""
    return (figure(stresses[0]), figure(stresses[-1])) if stresses else ("–", "–")


def place_of(state: Json) -> tuple[str, str]:
    """Coordinates of a state."""
    x, y = state["at"] or (None, None)
    return figure(x), figure(y)


def shear_table(states: Sequence[Json], friction: Json | None, units: Mapping[str, str]) -> Html:
    """Shear on bed and walls by the friction law given."""
    if friction is None:
        return Html()
    rows = [
        (
            *place_of(state),
            figure(state["bed_shear"]),
            figure(state["wall_shear"]),
            figure(state["friction_velocity"]),
            figure(state["turbulent_gradient"]),
        )
        for state in states
    ]
    columns = (
        number("x", units["at"]),
        number("y", units["at"]),
        number("Bed shear", units["bed_shear"]),
        number("Wall shear", units["wall_shear"]),
        number("Friction velocity", units["friction_velocity"]),
        number("G of turbulence, about", units["turbulent_gradient"]),
    )
    note = (
        f"Friction law: {friction['law']}, c_f = {figure(friction['friction_coefficient'])}. "
        f"Source: {friction['source']}."
    )
    return table("Shear on bed and walls", columns, rows, note)


def exposure_table(states: Sequence[Json], thresholds: Sequence[Json], units: Mapping[str, str]) -> Html:
    """Each threshold of animals, and where it is exceeded."""
    rows = [
        (
            f"{threshold['organism']}, {threshold['life_stage']}",
            threshold["effect"],
            figure(threshold["rate"]),
            figure(max(known, default=None)),
            f"{sum(exceeded)} of {len(exceeded)}",
            f"{threshold['source']} ({threshold['confidence']})",
        )
        for threshold in thresholds
        for known, exceeded in [readings(states, threshold["id"])]
    ]
    columns = (
        word("Organism"),
        word("Effect"),
        number("Threshold", units["rate"]),
        number("Largest reading over it"),
        number("Points beyond"),
        word("Source"),
    )
    return table("Exposure of animals to shear of the mean flow", columns, rows)


def readings(states: Sequence[Json], threshold: str) -> tuple[list[float], list[bool]]:
    """Readings of all states against one threshold: over it as a ratio, and whether beyond it."""
    found = [
        exposure
        for state in states
        for exposure in state.get("exposure", ())
        if exposure["threshold"] == threshold and exposure["margin"] is not None
    ]
    return [exposure["margin"] for exposure in found], [bool(exposure["exceeded"]) for exposure in found]


def floc_table(floc: Json | None, units: Mapping[str, str]) -> Html:
    """Flocculation along the way asked for."""
    if floc is None:
        return Html()
    row = (
        floc["status"],
        duration(floc["residence_time"]),
        figure(floc["mean_gradient"]),
        figure(floc["largest_gradient"]),
        figure(floc["camp_number"]),
        figure(floc["camp_number_error"], 1),
    )
    columns = (
        word("Way"),
        number("Residence time"),
        number("Mean G", units["mean_gradient"]),
        number("Largest G", units["largest_gradient"]),
        number("G t"),
        number("Error of G t"),
    )
    return table("Flocculation along a streamline", columns, [row], str(floc["range"]))

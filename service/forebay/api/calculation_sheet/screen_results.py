"""Results of screens: velocities before and along the face; its verdicts stand with all others."""

from collections.abc import Mapping
from typing import Any

from forebay.api.calculation_sheet.markup import Html, joined
from forebay.api.calculation_sheet.tables import number, table, word
from forebay.api.figures import duration, figure, percent

Json = Mapping[str, Any]


def screen_part(screen: Json | None, units: Mapping[str, str]) -> Html:
    """Size and velocities of every screen."""
    if screen is None:
        return Html()
    return joined([sizes_table(screen["screens"], units), velocities_table(screen["screens"], units)])


def sizes_table(screens: list[Json], units: Mapping[str, str]) -> Html:
    """Areas, and the velocities that follow from them."""
    rows = [
        (
            screen["element"],
            screen["on"],
            figure(screen["length"]),
            figure(screen["effective_area"]),
            figure(screen["discharge"]),
            figure(screen["mean_approach"]),
            figure(screen["max_approach"]),
            figure(screen["max_over_mean"]),
            figure(screen["through_slot"]),
        )
        for screen in screens
    ]
    columns = (
        word("Screen"),
        word("On"),
        number("Length", units["length"]),
        number("Effective area", units["effective_area"]),
        number("Discharge", units["discharge"]),
        number("Mean approach", units["mean_approach"]),
        number("Largest approach", units["max_approach"]),
        number("Largest over mean"),
        number("Through slots", units["through_slot"]),
    )
    note = (
        "Approach: normal to the face, through the effective area. Through slots: discharge over the open "
        "area; not to be compared with limits on the approach velocity."
    )
    return table("Screens: area and approach", columns, rows, note)


def velocities_table(screens: list[Json], units: Mapping[str, str]) -> Html:
    """Velocity and time along the face."""
    rows = [
        (
            screen["element"],
            str(screen["sweeping"]),
            figure(screen["min_sweeping"]),
            figure(screen["min_sweeping_ratio"]),
            percent(screen["share_meeting_sweeping"]),
            duration(screen["exposure_time"]),
            screen["exposure_status"] or "–",
            figure(screen["end_reach"]),
        )
        for screen in screens
    ]
    columns = (
        word("Screen"),
        word("Sweeping"),
        number("Least sweeping", units["min_sweeping"]),
        number("Least over approach"),
        number("Face swept enough", "%"),
        number("Exposure"),
        word("Status"),
        number("End reach", units["end_reach"]),
    )
    note = (
        "Extremes are between the end reaches: an even line has a tangential speed without bound at its ends."
    )
    return table("Screens: sweeping and exposure", columns, rows, note)

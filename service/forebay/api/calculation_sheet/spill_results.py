"""Results of spills: what reaches each intake and when, and what becomes of the rest."""

from collections.abc import Mapping
from typing import Any

from forebay.api.calculation_sheet.markup import Html, joined
from forebay.api.calculation_sheet.tables import number, table, word
from forebay.api.figures import duration, error_bound, percent

Json = Mapping[str, Any]


def spill_part(spill: Json | None) -> Html:
    """Arrivals, times to transects, and outcomes of every release."""
    if spill is None:
        return Html()
    releases = spill["releases"]
    return joined(
        [
            arrivals_table(releases, "arrivals", "intake", percent(spill["last_share"])),
            arrivals_table(releases, "transects", "transect", percent(spill["last_share"])),
            outcomes_table(releases),
        ]
    )


def arrivals_table(releases: list[Json], member: str, place: str, last: str) -> Html:
    """When released water is at each intake or transect."""
    rows = [
        (
            release["name"],
            arrival[place],
            percent(arrival["share"]),
            duration(arrival["first_time"]),
            duration(arrival["median_time"]),
            duration(arrival["last_time"]),
            duration(release["time_error"]),
        )
        for release in releases
        for arrival in release[member]
    ]
    columns = (
        word("Release"),
        word(f"At {place}"),
        number("Share", "%"),
        number("First"),
        number("Median"),
        number(f"{last.removesuffix('.00')} % there"),
        number("Error of times"),
    )
    note = (
        "Times from the start of the release, by the mean flow alone: turbulence lets some water arrive "
        "earlier, and no dilution is claimed."
    )
    return table(f"Spills: arrival at {place}s", columns, rows, note)


def outcomes_table(releases: list[Json]) -> Html:
    """What becomes of every release; the shares of one add to 100 %."""
    rows = [
        (
            release["name"] if index == 0 else "",
            f"{outcome['outcome']}: {outcome['meaning']}",
            outcome["to"] or "–",
            percent(outcome["share"]),
            error_bound(100 * release["share_error"] if release["share_error"] is not None else None),
            release["status"] if index == 0 else "",
        )
        for release in releases
        for index, outcome in enumerate(release["outcomes"])
    ]
    columns = (
        word("Release"),
        word("Outcome"),
        word("To"),
        number("Share", "%"),
        number("Error", "%"),
        word("Status"),
    )
    return table("Spills: what becomes of the water", columns, rows)

"""Results of solved walls: how certain they leave the flow, and the survey as it was used."""

from collections.abc import Callable, Mapping
from typing import Any

from forebay.api.calculation_sheet.markup import Html, joined
from forebay.api.calculation_sheet.tables import number, table, word
from forebay.api.figures import error_bound, figure

Json = Mapping[str, Any]


def walls_part(boundary: Json | None, units: Mapping[str, str], place_of: Callable[[str], str]) -> Html:
    """Bounds of the error, water as surveyed, and what was mended.

    place_of : name of what a pointer leads to
    """
    if boundary is None:
        return Html()
    return joined(
        [
            bounds_table(boundary["solved"], units),
            survey_table(boundary["survey"], units),
            mended_table(boundary["moved"], units, place_of),
        ]
    )


def bounds_table(solved: Json, units: Mapping[str, str]) -> Html:
    """How far off the stream function can be: everywhere, and between the banks and each island."""
    length = units["x"]
    worst = solved["worst"]
    place = f"{worst['ring']} ({figure(worst['x'], 6)}, {figure(worst['y'], 6)}) {length}".rstrip()
    rows = [
        (
            "everywhere",
            error_bound(solved["stream_function_bound"]),
            error_bound(solved["relative_bound"]),
            figure(solved["tolerance"]),
            place,
        ),
        *(
            (f"between banks and {island['name']}", error_bound(island["stream_function_bound"]), "", "", "")
            for island in solved["island_bounds"]
        ),
    ]
    columns = (
        word("Where"),
        number("Stream function within", units["stream_function_bound"]),
        number("Over the flow through"),
        number("Asked for"),
        word("Least well met at"),
    )
    note = (
        f"Flow through, per depth: {figure(solved['through_flux'])} {units['through_flux']}. The flux "
        f"between two points is certain to twice the bound. Unknowns: {solved['unknowns']}."
    )
    return table("Solved walls", columns, rows, note)


def survey_table(survey: Json | None, units: Mapping[str, str]) -> Html:
    """Water as surveyed, and its open edges."""
    if survey is None:
        return Html()
    rows = [
        (edge["name"], figure(edge["length"]), figure(edge["discharge"])) for edge in survey["open_edges"]
    ]
    columns = (
        word("Open edge"),
        number("Length", units["length"]),
        number("Discharge into the water", units["discharge"]),
    )
    grid = "" if survey["grid"] is None else f" Grid of x and y: {survey['grid']}."
    scale = survey["scale_error"]
    error = "" if scale is None else f" Largest error of lengths in the grid: {figure(scale, 2)}."
    note = (
        f"Water of {figure(survey['area'])} {units['area']}; {survey['vertices']} vertices of the "
        f"{survey['vertices_given']} given.{grid}{error}"
    )
    return table("Surveyed water", columns, rows, note)


def mended_table(moved: list[Json], units: Mapping[str, str], place_of: Callable[[str], str]) -> Html:
    """What was moved, mended or left out before anything was computed."""
    rows = [
        (
            str(change["what"]).replace("-", " "),
            place_of(change["pointer"]),
            str(change["count"]),
            figure(change["distance"]),
            figure(change["x"], 6),
            figure(change["y"], 6),
        )
        for change in moved
    ]
    length = units["x"]
    columns = (
        word("Change"),
        word("Of"),
        number("Vertices"),
        number("Farthest", units["distance"]),
        number("x", length),
        number("y", length),
    )
    return table("Changes to the geometry given", columns, rows)

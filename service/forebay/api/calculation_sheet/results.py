"""Results: a table for each part, every number with its unit and, where there is one, its error bound."""

from collections.abc import Callable, Mapping, Sequence
from itertools import islice
from typing import Any

from forebay.api.calculation_sheet.markup import Html, element, joined, section
from forebay.api.calculation_sheet.screen_results import screen_part
from forebay.api.calculation_sheet.spill_results import spill_part
from forebay.api.calculation_sheet.stress_results import stress_part
from forebay.api.calculation_sheet.submergence_results import submergence_part
from forebay.api.calculation_sheet.tables import number, table, word
from forebay.api.calculation_sheet.wall_results import walls_part
from forebay.api.figures import error_bound, figure, percent, share_with_error, unit_name

Json = Mapping[str, Any]

MOST_ROWS = 60
"""Rows of a table of points that a sheet shows; the answer as JSON has all."""


MOST_COLUMNS = 6
"""Columns of a field beside its places that fit on a page; more go into further tables."""


class Units(dict[str, str]):
    """Printed units of an answer's fields; nothing for a field that the answer does not hold."""

    def __missing__(self, _name: str) -> str:
        return ""

    def inside(self, part: str) -> "Units":
        """Units of a part's fields, where a name may have another unit than elsewhere."""
        own = {name.split(".")[1]: unit for name, unit in self.items() if name.startswith(f"{part}.")}
        return Units({**self, **own})


def results_section(envelope: Json, place_of: Callable[[str], str]) -> Html:
    """Every part that was computed, and what became of the others.

    place_of : name of what a pointer leads to
    """
    result = envelope["result"]
    units = Units({name: unit_name(code) for name, code in envelope["units"].items()})
    return section(
        "Results",
        intakes_part(result["withdrawal"], units),
        recirculation_part(result["recirculation"], units),
        stagnation_part(result["stagnation"], units),
        ends_part(result["ends"], result["boundary_residual"], units),
        walls_part(envelope.get("boundary"), units, place_of),
        transects_part(result["transects"], units),
        field_part(result["field"], units),
        stress_part(result["stress"], units.inside("stress")),
        spill_part(result["spill"]),
        screen_part(result["screen"], units.inside("screen")),
        submergence_part(result["submergence"], units.inside("submergence")),
        parts_table(result["parts"]),
    )


def intakes_part(withdrawal: Json | None, units: Units) -> Html:
    """Where each intake's water comes from: one row per origin."""
    rows = [row for intake in (withdrawal or {}).get("intakes", ()) for row in intake_rows(intake)]
    columns = (
        word("Intake"),
        number("Discharge", units["discharge"]),
        number("Strip far upstream", units["width_far_upstream"]),
        word("Water from"),
        number("Share", "%"),
        number("Error", "%"),
        word("Status"),
    )
    note = (
        "Strip far upstream: width of the water that the intake takes, far upstream of every element. "
        "Shares of one intake add to 100 %; the error bounds the largest error of any of its shares."
    )
    return table("Origin of the water of each intake", columns, rows, note)


def intake_rows(intake: Json) -> list[tuple[str, ...]]:
    """An intake's own numbers stand in the row of its first origin."""
    own = (intake["name"], figure(intake["discharge"]), figure(intake["width_far_upstream"]))
    error = intake["share_error"]
    bound = error_bound(None if error is None else 100 * max(error, 1e-12))
    shares = [(share["from"], percent(share["share"])) for share in intake["shares"]] or [("–", "–")]
    (first, *others) = shares
    return [(*own, *first, bound, intake["status"]), *(("", "", "", *other, "", "") for other in others)]


def recirculation_part(found: Sequence[Json] | None, units: Units) -> Html:
    """Water of outfalls that intakes take back."""
    rows = [
        (
            entry["intake"],
            entry["outfall"],
            share_with_error(entry["share"], entry["share_error"]),
            figure(entry["discharge"]),
        )
        for entry in found or ()
    ]
    columns = (
        word("Intake"),
        word("Takes back from"),
        number("Share of its water", "%"),
        number("Discharge", units["discharge"]),
    )
    note = "By displacement alone: a share of water, not a concentration; mixing is left out."
    return table("Recirculation", columns, rows, note)


def stagnation_part(search: Json | None, units: Units) -> Html:
    """Where the water stands still, with the count that shows whether that is all."""
    if search is None:
        return Html()
    rows = [
        (
            figure(point["x"], 6),
            figure(point["y"], 6),
            point["kind"],
            point["on"],
            figure(point["strain_rate"]),
            error_bound(point["inclusion_radius"]),
        )
        for point in islice(search["points"], MOST_ROWS)
    ]
    length = units["x"]
    columns = (
        number("x", length),
        number("y", length),
        word("Kind"),
        word("On"),
        number("Strain rate", units["strain_rate"]),
        number("Lies within", length),
    )
    return joined(
        [table("Stagnation points", columns, rows), element("p", count_text(search), class_="note")]
    )


def count_text(search: Json) -> str:
    """Outcome of the independent count, and what a long table leaves out."""
    left_out = len(search["points"]) - MOST_ROWS
    more = f" {left_out} further points are in the answer as JSON." if left_out > 0 else ""
    if search["complete"]:
        return (
            f"{search['found_count']} found. Complete: their weights add up to {search['weight']}, the "
            f"independent "
            f"count is {search['degree']} (method: {search['method']}).{more}"
        )
    return (
        f"{search['found_count']} found. NOT SHOWN TO BE COMPLETE: their weights add up to "
        f"{search['weight']}, the "
        f"independent count is {search['degree']} (method: {search['method']}).{more}"
    )


def ends_part(ends: Sequence[Json] | None, residual: float | None, units: Units) -> Html:
    """Far ends of the water, and how tight the walls are."""
    rows = [(end["name"], figure(end["inflow"]), figure(end["end_speed"])) for end in ends or ()]
    columns = (
        word("Far end"),
        number("Inflow per depth", units["inflow"]),
        number("Current", units["end_speed"]),
    )
    note = (
        "Inflow is positive into the water. Largest velocity through a structure's wall, over the reference "
        f"speed: {error_bound(residual)}."
    )
    return table("Far field", columns, rows, note)


def transects_part(transects: Sequence[Json] | None, units: Units) -> Html:
    """Discharge and circulation over each transect, with the independent integral beside them."""
    rows = [
        (
            transect["name"],
            figure(transect["length"]),
            figure(transect["discharge"], 6),
            figure(transect["circulation"]),
            error_bound(transect["quadrature"]["error_estimate"] if transect["quadrature"] else None),
            transect["status"],
        )
        for transect in transects or ()
    ]
    columns = (
        word("Transect"),
        number("Length", units["length"]),
        number("Discharge", units["discharge"]),
        number("Circulation", units["circulation"]),
        number("Error, second way", units["flux"]),
        word("Status"),
    )
    note = (
        "Discharge is positive to the right of the direction of travel. The values are exact differences "
        "of the potential; a numerical integral of the velocity, with the error stated, is the independent "
        "second way."
    )
    return table("Fluxes over transects", columns, rows, note)


def field_part(field: Json | None, units: Units) -> Html:
    """Velocity, and whatever else was wanted, at the points asked for."""
    if field is None:
        return Html()
    names = [name for name in field if name not in {"shape", "flagged", "x", "y"}]
    left_out = len(field["x"]) - MOST_ROWS
    note = f"{left_out} further points are in the answer as JSON." if left_out > 0 else ""
    return joined(
        field_table(field, names[start : start + MOST_COLUMNS], units, note)
        for start in range(0, len(names), MOST_COLUMNS)
    )


def field_table(field: Json, names: Sequence[str], units: Units, note: str) -> Html:
    """Some columns of a field beside the places."""
    shown = ["x", "y", *names]
    reasons = {flag["index"]: str(flag["status"]) for flag in field["flagged"]}
    columns = [*(number(name.replace("_", " "), units[name]) for name in shown), word("Status")]
    values = islice(zip(*(field[name] for name in shown), strict=True), MOST_ROWS)
    rows = [(*(figure(value) for value in row), reasons.get(index, "ok")) for index, row in enumerate(values)]
    return table("Field at the points asked for", columns, rows, note)


def parts_table(parts: Sequence[Json]) -> Html:
    """Parts without an answer, and why."""
    rows = [
        (str(part["part"]), str(part["status"]), reason_of(part)) for part in parts if part["status"] != "ok"
    ]
    computed = ", ".join(str(part["part"]) for part in parts if part["status"] == "ok")
    columns = (word("Part without an answer"), word("Status"), word("Reason"))
    note = element("p", f"Parts that were computed: {computed}.", class_="note")
    return joined([table("", columns, rows), note])


def reason_of(part: Json) -> str:
    """Why a part has no answer, with the code of a failure."""
    code = f" ({part['problem']})" if part["problem"] else ""
    return f"{part['reason'] or ''}{code}"

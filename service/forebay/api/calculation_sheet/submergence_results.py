"""Results of submergence: rules beside what is there, similarity numbers, swirl, reasons for a model."""

from collections.abc import Mapping
from typing import Any

from forebay.api.calculation_sheet.markup import Html, joined
from forebay.api.calculation_sheet.tables import number, table, word
from forebay.api.figures import figure, quantity

Json = Mapping[str, Any]


def submergence_part(submergence: Json | None, units: Mapping[str, str]) -> Html:
    """Rules, numbers, swirl, and what calls for a physical model."""
    if submergence is None:
        return Html()
    inlets = submergence["inlets"]
    return joined(
        [
            rules_table(inlets, units),
            numbers_table(inlets, units),
            vortex_table(inlets, units),
            model_table(inlets),
        ]
    )


def rules_table(inlets: list[Json], units: Mapping[str, str]) -> Html:
    """Required and available submergence by each rule."""
    rows = [
        (
            inlet["name"] if index == 0 else "",
            rule["rule"],
            rule["formula"],
            str(rule["datum"]),
            figure(rule["required"]),
            figure(rule["available"]),
            {True: "met", False: "NOT MET", None: rule["reason"] or "not judged"}[rule["pass"]],
        )
        for inlet in inlets
        for index, rule in enumerate(inlet["rules"])
    ]
    columns = (
        word("Inlet"),
        word("Rule"),
        word("Formula"),
        word("Down to"),
        number("Required", units["required"]),
        number("Available", units["available"]),
        word("Outcome"),
    )
    return table("Submergence: required and available", columns, rows)


def numbers_table(inlets: list[Json], units: Mapping[str, str]) -> Html:
    """Size, velocity and similarity numbers."""
    rows = [
        (
            inlet["name"],
            str(inlet["kind"]),
            figure(inlet["discharge"]),
            figure(inlet["diameter"]),
            figure(inlet["velocity"]),
            figure(inlet["submergence"]),
            figure(inlet["froude"]),
            figure(inlet["reynolds"]),
            figure(inlet["weber"]),
        )
        for inlet in inlets
    ]
    columns = (
        word("Inlet"),
        word("Kind"),
        number("Discharge", units["discharge"]),
        number("Diameter", units["diameter"]),
        number("Velocity", units["velocity"]),
        number("Submergence", units["submergence"]),
        number("Froude"),
        number("Reynolds"),
        number("Weber"),
    )
    return table("Submergence: size and similarity", columns, rows)


def vortex_table(inlets: list[Json], units: Mapping[str, str]) -> Html:
    """The vortex that the circulation of the approach flow could feed."""
    rows = [
        (
            inlet["name"],
            figure(inlet["circulation"]),
            figure(vortex["circulation_number"]),
            figure(vortex["core_radius"]),
            figure(vortex["rankine_dip"]),
            figure(vortex["burgers_dip"]),
            figure(vortex["swirl_angle_deg"]),
            "yes" if vortex["air_could_be_drawn"] else "no",
        )
        for inlet in inlets
        if (vortex := inlet["vortex"]) is not None
    ]
    columns = (
        word("Inlet"),
        number("Circulation", units["circulation"]),
        number("Circulation number"),
        number("Core radius", units["core_radius"]),
        number("Dip, Rankine", units["rankine_dip"]),
        number("Dip, Burgers", units["burgers_dip"]),
        number("Swirl angle", units["swirl_angle_deg"]),
        word("Air could be drawn"),
    )
    return table("Submergence: swirl", columns, rows)


def model_table(inlets: list[Json]) -> Html:
    """What calls for a physical model."""
    rows = [
        (
            inlet["name"],
            finding["reason"],
            quantity(finding["value"], finding["unit"]),
            quantity(finding["limit"], finding["unit"]),
            finding["source"],
        )
        for inlet in inlets
        for finding in inlet["physical_model"]
    ]
    columns = (word("Inlet"), word("Reason"), number("Value"), number("Limit"), word("Source"))
    return table("Submergence: reasons for a physical model", columns, rows)

"""Verdicts, warnings with their thresholds, and cautions."""

from collections.abc import Mapping, Sequence
from typing import Any

from forebay.api.calculation_sheet.markup import Html, element, items, section
from forebay.api.calculation_sheet.tables import number, table, word
from forebay.api.figures import quantity
from forebay.api.schemas.assessment import AssessmentRequest
from forebay.api.schemas.surveyed import SurveyedShore

Json = Mapping[str, Any]

OUTCOMES = {
    True: Html('<span class="met">met</span>'),
    False: Html('<span class="missed">NOT\N{NO-BREAK SPACE}MET</span>'),
    None: Html('<span class="open">not judged</span>'),
}

SEVERITIES = {
    "unsafe-to-use": Html('<span class="unsafe">UNSAFE TO USE</span>'),
    "caution": Html('<span class="caution">CAUTION</span>'),
    "note": Html('<span class="remark">note</span>'),
}
"""Severities of warnings, the gravest first, told apart by frame and letters and not by colour."""


def verdicts_section(verdicts: Sequence[Json]) -> Html:
    """Each rule that was applied, with value, limit, margin, outcome and source."""
    rows = [
        (
            verdict["subject"],
            f"{verdict['rule']} ({verdict['criterion']})",
            *(quantity(verdict[member], verdict["unit"]) for member in ("value", "limit", "margin")),
            OUTCOMES[verdict["pass"]],
            noted(verdict),
        )
        for verdict in verdicts
    ]
    columns = (
        word("Of"),
        word("Rule (criterion)"),
        number("Value"),
        number("Limit"),
        number("Margin"),
        word("Outcome"),
        word("Source, note"),
    )
    return section("Verdicts", table("", columns, rows))


def noted(verdict: Json) -> str:
    """Source of a rule, with what must be known of the verdict."""
    return f"{verdict['source']}; {verdict['note']}" if verdict["note"] else str(verdict["source"])


def warnings_section(warnings: Sequence[Json], request: AssessmentRequest) -> Html:
    """Warnings, the gravest first, those of one code together."""
    alike: dict[tuple[str, str], list[Json]] = {}
    for severity in SEVERITIES:
        for warning in warnings:
            if warning["severity"] == severity:
                alike.setdefault((severity, warning["code"]), []).append(warning)
    rows = [warning_row(together, request) for together in alike.values()]
    columns = (word("Severity"), word("Warning"), number("Value"), number("Threshold"), word("Source"))
    if not rows:
        return section("Warnings", element("p", "None."))
    return section("Warnings", table("", columns, rows))


def warning_row(alike: Sequence[Json], request: AssessmentRequest) -> tuple[str, ...]:
    """Warnings of one code: the first in full, then where else it holds."""
    warning = alike[0]
    others = ", ".join(dict.fromkeys(place_of(other["pointer"], request) for other in alike[1:]))
    elsewhere = f" Likewise: {others}." if others else ""
    return (
        SEVERITIES[warning["severity"]],
        Html(
            element("span", warning["message"] + elsewhere)
            + element("span", f" {warning['code']}", class_="code")
        ),
        compared(warning, "value"),
        compared(warning, "limit"),
        warning["source"],
    )


def place_of(pointer: str, request: AssessmentRequest) -> str:
    """What a pointer leads to: the name of an element, a structure or an open edge, else its steps."""
    shore = request.layout.shore
    match pointer.removeprefix("#/").split("/"):
        case ["layout", "elements" | "structures" as kind, index, *_]:
            return str(getattr(request.layout, kind)[int(index)].name)
        case ["layout", "shore", "open_edges", index, *_] if isinstance(shore, SurveyedShore):
            return shore.open_edges[int(index)].name
        case ["layout", "shore", "water", "coordinates", index, *_]:
            return f"ring {int(index) + 1} of the surveyed water"
        case steps:
            return " ".join(steps).replace("_", " ")


def compared(warning: Json, member: str) -> str:
    """Value or threshold of a warning with its unit."""
    if warning[member] is None:
        return "–"
    return quantity(warning[member], warning["unit"] or "1")


def cautions_section(cautions: Sequence[str]) -> Html:
    """What no number can take away."""
    return section("Cautions", items(cautions))

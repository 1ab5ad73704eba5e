"""The engineer's table: an assessment's answer as lines of text, whoever computed it."""

from collections.abc import Iterable, Mapping, Sequence
from textwrap import wrap
from typing import Any

Json = Mapping[str, Any]
Row = Sequence[str]

WIDTH = 100

MOST_POINTS = 20
"""Points of a field that a table shows."""

RECIRCULATION_CLOSED_FORM = 1e-12
"""Share below which an error is rounding of a closed form, and printed as such [-]."""

SEVERITIES = ("unsafe-to-use", "caution", "note")
"""Of warnings, gravest first."""


def engineers_table(request: Json, answer: Json) -> str:
    """Table of an assessment: `request` is the body that was sent, `answer` the envelope that came back."""
    result, units = answer["result"], answer["units"]
    sections = [
        heading(request["layout"], answer["provenance"], units),
        summary_section(result["summary"]),
        intakes_section(result["withdrawal"], units),
        stagnation_section(result["stagnation"], units),
        transects_section(result["transects"] or (), units),
        ends_section(result["ends"] or (), units),
        points_section(result["field"], units),
        verdicts_section(result["verdicts"]),
        failures_section(result["parts"]),
        warnings_section(answer["warnings"]),
        cautions_section(result["cautions"]),
    ]
    return "\n\n".join("\n".join(lines) for lines in sections if lines)


def heading(layout: Json, provenance: Json, units: Json) -> list[str]:
    """What was assessed, by what."""
    elements = [element["kind"].replace("-", " ") for element in layout.get("elements", [])]
    structures = [structure["kind"] for structure in layout.get("structures", [])]
    counted = counts([*elements, *structures]).items()
    things = ", ".join(f"{count} {kind}{'s' if count > 1 else ''}" for kind, count in counted)
    shore = layout.get("shore", {"kind": "open-water"})["kind"]
    digest = provenance["layout_digest"][:19]
    return [
        f"Assessment by {provenance['service']} {provenance['version']}, layout {digest}",
        f"Site: {shore}, depth {number(layout['depth'])} {units.get('depth', units.get('x', 'm'))}; {things}",
    ]


def counts(words: Iterable[str]) -> dict[str, int]:
    """How often each word occurs, in order of first occurrence."""
    totals: dict[str, int] = {}
    for word in words:
        totals[word] = totals.get(word, 0) + 1
    return totals


def summary_section(summary: Sequence[str]) -> list[str]:
    """The whole in a few lines."""
    return ["SUMMARY", *bulleted(summary)]


def bulleted(texts: Iterable[str]) -> list[str]:
    """Texts as wrapped items of a list."""
    return [line for text in texts for line in bullet(text)]


def bullet(text: str) -> list[str]:
    """One item of a list, wrapped."""
    return wrap(text, WIDTH, initial_indent="  - ", subsequent_indent="    ", break_on_hyphens=False)


def verdicts_section(verdicts: Sequence[Json]) -> list[str]:
    """Each rule that was applied, with value, limit and outcome."""
    outcomes = {True: "met", False: "NOT MET", None: "not judged"}
    rows = [
        (
            verdict["subject"],
            f"{verdict['rule']} ({verdict['criterion']})",
            number(verdict["value"]),
            number(verdict["limit"]),
            verdict["unit"],
            outcomes[verdict["pass"]],
        )
        for verdict in verdicts
    ]
    columns = ("of", "rule", "value", "limit", "unit", "outcome")
    return ["VERDICTS", *table(columns, rows, right={2, 3})] if rows else []


def failures_section(parts: Sequence[Json]) -> list[str]:
    """Parts that could not be computed, with the reason."""
    failed = [part for part in parts if part["status"] == "failed"]
    lines = [f"{part['part']}: {part['reason']} ({part['problem']})" for part in failed]
    return ["NOT COMPUTED", *bulleted(lines)] if lines else []


def intakes_section(withdrawal: Json | None, units: Json) -> list[str]:
    """Each intake: discharge, width of its zone far upstream, origins of its water, recirculation."""
    intakes = () if withdrawal is None else withdrawal["intakes"]
    rows = [row for intake in intakes for row in intake_rows(intake)]
    names = (
        "intake",
        f"discharge {units['discharge']}",
        f"width upstream {units['width_far_upstream']}",
        "water from",
    )
    columns = (*names, "share %", "recirculated %", "status")
    return ["INTAKES", *table(columns, rows, right={1, 2, 4, 5})] if rows else []


def intake_rows(intake: Json) -> list[Row]:
    """One row per origin; the intake's own numbers stand in the first."""
    own = (
        intake["name"],
        number(intake["discharge"]),
        number(intake["width_far_upstream"]),
    )
    shares = intake["shares"]
    if not shares:
        return [(*own, "-", "-", "-", intake["status"])]
    (first, *others) = [(share["from"], percent(share["share"])) for share in shares]
    return [
        (*own, *first, recirculation(intake), intake["status"]),
        *(("", "", "", *other, "", "") for other in others),
    ]


def recirculation(intake: Json) -> str:
    """Recirculated share with its error, e.g. `7.52 +- 0.00001`."""
    share, error = intake["recirculation_share"], intake["share_error"]
    if share is None:
        return "-"
    if error is None:
        return percent(share)
    bound = max(error, RECIRCULATION_CLOSED_FORM)
    return f"{percent(share)} +- {100 * bound:.1g}"


def stagnation_section(search: Json | None, units: Json) -> list[str]:
    """Where the water stands still, and whether that is all."""
    if search is None:
        return []
    points = search["points"]
    verdict = "complete" if search["complete"] else "NOT shown to be complete"
    title = f"STAGNATION POINTS: {len(points)} found, {verdict} ({search['method']})"
    rows = [
        (
            number(point["x"]),
            number(point["y"]),
            point["kind"],
            point["on"],
            number(point["strain_rate"]),
        )
        for point in points
    ]
    columns = (f"x {units['x']}", f"y {units['y']}", "kind", "on", f"strain rate {units['strain_rate']}")
    return [title, *(table(columns, rows, right={0, 1, 4}) if rows else [])]


def transects_section(transects: Sequence[Json], units: Json) -> list[str]:
    """Discharge over each transect, positive to the right of its direction."""
    rows = [
        (
            transect["name"],
            number(transect["length"]),
            number(transect["discharge"]),
            number(transect["circulation"]),
            transect["status"],
        )
        for transect in transects
    ]
    columns = (
        "transect",
        f"length {units.get('length', 'm')}",
        f"discharge {units['discharge']}",
        f"circulation {units.get('circulation', 'm2/s')}",
        "status",
    )
    title = "FLUXES OVER TRANSECTS (positive to the right of the direction of travel)"
    return [title, *table(columns, rows, right={1, 2, 3})] if rows else []


def ends_section(ends: Sequence[Json], units: Json) -> list[str]:
    """Far ends of the water: what comes in there."""
    rows = [(end["name"], number(end["inflow"]), number(end["end_speed"])) for end in ends]
    columns = ("far end", f"inflow per depth {units['inflow']}", f"speed {units['end_speed']}")
    return ["FAR ENDS (inflow positive into the water)", *table(columns, rows, right={1, 2})] if rows else []


def points_section(field: Json | None, units: Json) -> list[str]:
    """Velocity where it was asked for; the first points of many."""
    if field is None:
        return []
    shown = zip(*(field[name][:MOST_POINTS] for name in ("x", "y", "u", "v", "speed")), strict=True)
    reasons = {flag["index"]: flag["status"] for flag in field["flagged"]}
    rows = [
        (*(number(value) for value in values), reasons.get(index, "")) for index, values in enumerate(shown)
    ]
    left_out = len(field["x"]) - len(rows)
    columns = (f"x {units['x']}", f"y {units['y']}", f"u {units['u']}", "v", "speed", "")
    more = [f"  ... and {left_out} more"] if left_out else []
    return ["VELOCITY AT POINTS", *table(columns, rows, right={0, 1, 2, 3, 4}), *more]


def warnings_section(warnings: Sequence[Json]) -> list[str]:
    """Warnings by severity, those of one code together, each with value, threshold and source."""
    if not warnings:
        return ["WARNINGS: none"]
    together: dict[tuple[int, str], list[Json]] = {}
    for warning in warnings:
        rank = SEVERITIES.index(warning["severity"])
        together.setdefault((rank, warning["code"]), []).append(warning)
    ranked = sorted(together, key=lambda key: key[0])
    return ["WARNINGS", *(line for key in ranked for line in warning_lines(together[key]))]


def warning_lines(alike: Sequence[Json]) -> list[str]:
    """Warnings of one code, wrapped: the first in full, then where else it holds."""
    warning = alike[0]
    threshold = ""
    if warning["value"] is not None and warning["limit"] is not None:
        threshold = f" [value {number(warning['value'])}, threshold {number(warning['limit'])}]"
    source = f" Source: {warning['source']}." if warning["source"] else ""
    others = ", ".join(other["pointer"] for other in alike[1:])
    elsewhere = f" Likewise at {others}." if others else ""
    text = f"{warning['severity']}: {warning['message']}{threshold}{source}{elsewhere} ({warning['code']})"
    return bullet(text)


def cautions_section(cautions: Iterable[str]) -> list[str]:
    """What no number above can take away."""
    return ["CAUTIONS", *bulleted(cautions)]


def table(columns: Row, rows: Sequence[Row], right: set[int]) -> list[str]:
    """Rows under their headings, columns in `right` flush right."""
    widths = [max(len(row[index]) for row in (columns, *rows)) for index in range(len(columns))]

    def line(cells: Row) -> str:
        padded = [
            cell.rjust(width) if index in right else cell.ljust(width)
            for index, (cell, width) in enumerate(zip(cells, widths, strict=True))
        ]
        return ("  " + "  ".join(padded)).rstrip()

    return [line(columns), line(["-" * width for width in widths]), *(line(row) for row in rows)]


def number(value: float | None) -> str:
    """Four significant digits without an exponent where that is readable; `-` if there is no value."""
    if value is None:
        return "-"
    if value == 0 or 1e-3 <= abs(value) < 1e7:
        return f"{value:.4g}" if abs(value) < 1e4 else f"{value:.0f}"
    return f"{value:.3e}"


def percent(share: float | None) -> str:
    """Share as per cent to two decimals; `-` if there is no value."""
    return "-" if share is None else f"{100 * share:.2f}"

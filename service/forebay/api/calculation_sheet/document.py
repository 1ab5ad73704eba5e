"""The sheet as one HTML document that loads nothing."""

from collections.abc import Mapping
from datetime import date
from functools import cache, partial
from importlib.resources import files
from typing import Any, NamedTuple

from forebay.api.calculation_sheet.closing import (
    cautions_section,
    place_of,
    verdicts_section,
    warnings_section,
)
from forebay.api.calculation_sheet.inputs import inputs_section
from forebay.api.calculation_sheet.markup import Html, element, items, section
from forebay.api.calculation_sheet.method import method_section
from forebay.api.calculation_sheet.pictures import pictures_section
from forebay.api.calculation_sheet.results import results_section
from forebay.api.calculation_sheet.title import Heading, running_rules, title_block
from forebay.api.schemas.assessment import AssessmentRequest

POLICY = "default-src 'none'; style-src 'unsafe-inline'"
"""What a browser may load for the page: nothing."""


class Filed(NamedTuple):
    """What a sheet is made of: the request, the envelope of its answer, its pictures by caption, its date."""

    request: AssessmentRequest
    envelope: Mapping[str, Any]
    pictures: Mapping[str, bytes]
    day: date


def sheet_document(filed: Filed, page_rules: str = "") -> str:
    """The whole sheet; `page_rules` are further rules of style if it is to be set on paper.

    The same request gives the same document but for its date.
    """
    request, envelope = filed.request, filed.envelope
    result = envelope["result"]
    heading = Heading(request.sheet, filed.day, dict(envelope["provenance"]))
    body = element(
        "main",
        title_block(heading),
        section("Summary", items(result["summary"], ordered=True)),
        verdicts_section(result["verdicts"]),
        pictures_section(filed.pictures, inline=not page_rules),
        results_section(envelope, partial(place_of, request=request)),
        warnings_section(envelope["warnings"], request),
        cautions_section(result["cautions"]),
        inputs_section(request),
        method_section(request, result),
    )
    return (
        f"<!doctype html>\n{element('html', head(heading, page_rules), element('body', body), lang='en')}\n"
    )


def head(heading: Heading, page_rules: str) -> Html:
    """Title, date, and rules of style."""
    sheet = heading.sheet
    title = " · ".join(
        part for part in ("Calculation sheet", sheet.reference, sheet.project, sheet.site) if part
    )
    policy = Html(f'<meta http-equiv="Content-Security-Policy" content="{POLICY}">')
    return element(
        "head",
        element("meta", charset="utf-8"),
        policy,
        element("meta", name="viewport", content="width=device-width"),
        element("meta", name="author", content=sheet.author),
        element("meta", name="generator", content=heading.version),
        element("meta", name="dcterms.created", content=heading.day.isoformat()),
        element("title", title),
        element("style", Html(rules() + running_rules(heading) + page_rules)),
    )


@cache
def rules() -> str:
    """Rules of style of every sheet."""
    return (files("forebay") / "api" / "calculation_sheet" / "sheet.css").read_text(encoding="utf-8")

"""Pictures of a sheet: drawings set into the page, with names of their own."""

import re
from collections.abc import Mapping

from forebay.api.calculation_sheet.markup import Html, element, section

OWN_NAMES = re.compile(r'((?:\bid|xlink:href)="#?|url\(#)(?=[\w-])')
"""Places where a drawing names one of its parts."""


def pictures_section(pictures: Mapping[str, bytes]) -> Html:
    """Each picture under its caption."""
    figures = [
        figure(caption, drawing.decode(), f"p{index + 1}-")
        for index, (caption, drawing) in enumerate(pictures.items())
    ]
    return section("Pictures", *figures)


def figure(caption: str, drawing: str, prefix: str) -> Html:
    """A drawing set into the page; its parts are renamed, since two drawings use the same names.

    A drawing that could not be made is only its caption, which says so.
    """
    if not drawing:
        return element("p", caption)
    body = drawing[drawing.index("<svg") :]
    renamed = OWN_NAMES.sub(lambda place: f"{place.group(1)}{prefix}", body)
    return element("figure", Html(renamed), element("figcaption", caption))

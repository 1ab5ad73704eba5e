"""Pictures of a sheet: drawings set into the page, with names of their own."""

import re
from base64 import b64encode
from collections.abc import Mapping

from forebay.api.calculation_sheet.markup import Html, element, section

OWN_NAMES = re.compile(r'((?:\bid|xlink:href)="#?|url\(#)(?=[\w-])')
"""Places where a drawing names one of its parts."""


def pictures_section(pictures: Mapping[str, bytes], *, inline: bool) -> Html:
    """Each picture under its caption, as part of the page or, which is faster to set, as an image in it.

    A picture that could not be made is only its caption, which says so.
    """
    place = inline_drawing if inline else image
    figures = [
        element("figure", place(drawing.decode(), f"p{index + 1}-"), element("figcaption", caption))
        for index, (caption, drawing) in enumerate(pictures.items())
    ]
    return section("Pictures", *figures)


def inline_drawing(drawing: str, prefix: str) -> Html:
    """A drawing as part of the page; its parts are renamed, since two drawings use the same names."""
    if not drawing:
        return Html()
    return Html(OWN_NAMES.sub(lambda place: f"{place.group(1)}{prefix}", drawing[drawing.index("<svg") :]))


def image(drawing: str, _prefix: str) -> Html:
    """A drawing as an image that the page itself holds."""
    if not drawing:
        return Html()
    return element("img", src=f"data:image/svg+xml;base64,{b64encode(drawing.encode()).decode()}")

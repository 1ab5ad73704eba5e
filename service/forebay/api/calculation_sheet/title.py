"""Title block, and what stands at the head and foot of every page."""

from datetime import date
from typing import Any, NamedTuple

from forebay.api.calculation_sheet.markup import Html, element, style_string
from forebay.api.schemas.sheet import SheetRequest

SUBJECT = "Screening of water intakes and outfalls"

LONGEST_LEFT, LONGEST_RIGHT = 80, 40
"""Characters that the head of a page has room for on either side."""

SHOWN_DIGEST = len("sha256:") + 16
"""Characters of the digest at the foot of a page; the title block has all."""


class Heading(NamedTuple):
    """What the title block is made of."""

    sheet: SheetRequest
    day: date
    provenance: dict[str, Any]

    @property
    def version(self) -> str:
        """Service and its version."""
        return f"{self.provenance['service']} {self.provenance['version']}"

    @property
    def digest(self) -> str:
        """Digest of the layout."""
        return str(self.provenance["layout_digest"])


def title_block(heading: Heading) -> Html:
    """Who, what, where, when; and room for signatures."""
    sheet = heading.sheet
    cells = (
        ("Project", sheet.project),
        ("Site", sheet.site),
        ("Reference", sheet.reference),
        ("Date", heading.day.isoformat()),
    )
    facts = element("div", *(field(*cell) for cell in cells), class_="facts")
    signed = element(
        "div", signature("Made by", sheet.author), signature("Checked by", sheet.checker), class_="signatures"
    )
    about = element("p", f"Computed by {heading.version}; layout {heading.digest}", class_="about")
    lines = (element("p", "Calculation sheet", class_="kind"), element("h1", SUBJECT))
    return element("header", *lines, facts, signed, about)


def field(name: str, text: str) -> Html:
    """A named field of the title block."""
    return element("div", element("span", name, class_="label"), element("span", text or "–"), class_="field")


def signature(name: str, person: str) -> Html:
    """A person with room for signature and date."""
    return element(
        "div",
        element("span", name, class_="label"),
        element("span", person or "–", class_="person"),
        element("span", "Signature", class_="line"),
        element("span", "Date", class_="line short"),
        class_="signature",
    )


def running_rules(heading: Heading) -> str:
    """Style rules for the head and foot of every page but, at the head, the first."""
    sheet = heading.sheet
    left = " · ".join(part for part in (sheet.project, sheet.site) if part) or SUBJECT
    right = " · ".join(part for part in (shortened(sheet.reference, 26), heading.day.isoformat()) if part)
    foot = f"{heading.version} · layout {heading.digest[:SHOWN_DIGEST]}"
    return (
        "@page{"
        f"@top-left{{content:{style_string(shortened(left, LONGEST_LEFT))}}}"
        f"@top-right{{content:{style_string(shortened(right, LONGEST_RIGHT))}}}"
        f"@bottom-left{{content:{style_string(foot)}}}"
        '@bottom-right{content:"page " counter(page) " of " counter(pages)}'
        "}"
    )


def shortened(text: str, longest: int) -> str:
    """Text cut to a number of characters."""
    return text if len(text) <= longest else text[: longest - 1] + "…"

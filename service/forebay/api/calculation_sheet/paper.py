"""The sheet as a PDF: set on A4 or Letter, the same bytes for the same document."""

from functools import cache
from hashlib import sha256
from pathlib import Path
from typing import Any

from forebay.api.problems import Problem
from forebay.api.schemas.sheet import Paper

SIZES = {Paper.A4: "@page{size:A4}", Paper.LETTER: "@page{size:letter}"}

FACES = (
    ("Forebay Text", "STIXGeneral.ttf", "normal", "normal"),
    ("Forebay Text", "STIXGeneralItalic.ttf", "normal", "italic"),
    ("Forebay Text", "STIXGeneralBol.ttf", "bold", "normal"),
    ("Forebay Text", "STIXGeneralBolIta.ttf", "bold", "italic"),
    ("Forebay Label", "DejaVuSans.ttf", "normal", "normal"),
    ("Forebay Label", "DejaVuSans-Bold.ttf", "bold", "normal"),
)
"""Family, file, weight and style of the faces, which come with the drawing library: no machine's own."""


class UnknownAddressError(ValueError):
    """The document asks for something other than the faces."""


def page_rules(paper: Paper) -> str:
    """Rules of style for one size of paper, with its faces."""
    return SIZES[paper] + face_rules()


@cache
def face_rules() -> str:
    """Rules that name the faces and where they are."""
    return "".join(
        f'@font-face{{font-family:"{family}";src:url("{face_address(file)}");font-weight:{weight};font-style:{style}}}'
        for family, file, weight, style in FACES
    )


def face_address(file: str) -> str:
    """Address of a face on this machine."""
    import matplotlib as mpl  # noqa: PLC0415  (takes a while, and only a PDF needs it)

    return (Path(mpl.get_data_path()) / "fonts" / "ttf" / file).as_uri()


def set_pages(document: str) -> bytes:
    """PDF of an HTML document whose page rules name its paper.

    Raises
    ------
    Problem : not-acceptable, where the machine lacks the libraries that set text
    """
    weasyprint = setter()
    html = weasyprint.HTML(string=document, url_fetcher=fetcher(weasyprint))
    identifier = sha256(document.encode()).digest()[:16]
    pages: bytes = html.write_pdf(pdf_identifier=identifier)
    return pages


def setter() -> Any:  # noqa: ANN401  (a module)
    """The library that sets pages.

    Raises
    ------
    Problem : not-acceptable, where Pango is missing
    """
    try:
        import weasyprint  # noqa: PLC0415  (takes half a second, and few requests need it)
    except OSError:
        raise Problem(
            "not-acceptable",
            "A PDF needs the library Pango, which this machine lacks; ask for text/html",
            facts={"offered": ["application/json", "text/html"]},
        ) from None
    return weasyprint


def fetcher(weasyprint: Any) -> Any:  # noqa: ANN401  (modules and types of a library imported late)
    """Reader of the faces and of what the document itself holds, and of nothing else."""
    known = {face_address(file) for _, file, _, _ in FACES}

    class Faces(weasyprint.urls.URLFetcher):  # type: ignore[misc]
        """Refuses every address but those of the faces and of what the document holds."""

        def fetch(self, url: str, headers: Any = None) -> Any:  # noqa: ANN401
            """File of a face, or a part of the document."""
            if url not in known and not url.startswith("data:"):
                raise UnknownAddressError("a sheet loads nothing but its faces")
            return super().fetch(url, headers)

    return Faces(allowed_protocols=("file", "data"), fail_on_errors=True)

"""Calculation sheets: an assessment as HTML or as PDF."""

import orjson

from forebay.api.calculation_sheet.document import Filed, sheet_document
from forebay.api.calculation_sheet.paper import page_rules, set_pages
from forebay.api.envelope import encode
from forebay.api.media import HTML, PDF
from forebay.api.outcome import Answered, Encoder, Reply, warning_header
from forebay.api.schemas.assessment import AssessmentRequest

HTML_SENT = f"{HTML}; charset=utf-8"


def filed(answered: Answered) -> Filed:
    """What the sheet of an answer is made of.

    Raises TypeError for the answer of another route.
    """
    request = answered.request
    if not isinstance(request, AssessmentRequest):
        raise TypeError("only an assessment has a calculation sheet")
    envelope = orjson.loads(encode(answered.document))  # plain lists, null where there is no value
    at = None if request.at is None else request.at.written_out()
    asked = request.model_copy(update={"at": at})
    return Filed(asked, envelope, answered.outcome.pictures, request.sheet.dated())


def encode_html(answered: Answered) -> Reply:
    """The sheet as one HTML document that loads nothing."""
    return Reply(HTML_SENT, sheet_document(filed(answered)).encode(), warning_header(answered))


def encode_pdf(answered: Answered) -> Reply:
    """The sheet as PDF on the paper asked for."""
    sheet = filed(answered)
    paper = sheet.request.sheet.paper_for(sheet.request.unit_system)
    return Reply(PDF, set_pages(sheet_document(sheet, page_rules(paper))), warning_header(answered))


SHEETS = (
    Encoder(HTML, encode_html, "Calculation sheet that prints on A4 and Letter", {"type": "string"}),
    Encoder(PDF, encode_pdf, "Calculation sheet on A4 or Letter", {"type": "string", "format": "binary"}),
)

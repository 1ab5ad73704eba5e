"""What a request says of the calculation sheet that it wants."""

import datetime as dt
from enum import StrEnum
from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Strict
from forebay.api.units import UnitSystem

FreeText = Annotated[str, Field(max_length=200, pattern=r"^[^\x00-\x1f\x7f]*$")]
"""One line in the client's own words."""


class Paper(StrEnum):
    """Sizes of paper."""

    A4 = "a4"
    LETTER = "letter"


class SheetRequest(Strict):
    """Title block of the calculation sheet."""

    project: Annotated[FreeText, Field(description="Project", examples=["Lower river abstraction"])] = ""
    site: Annotated[FreeText, Field(description="Site", examples=["Mill reach"])] = ""
    author: Annotated[FreeText, Field(description="Who made it", examples=["A. Engineer"])] = ""
    checker: Annotated[FreeText, Field(description="Who checks it", examples=["B. Engineer"])] = ""
    reference: Annotated[
        FreeText, Field(description="Number or name under which it is filed", examples=["C-104"])
    ] = ""
    date: Annotated[
        dt.date | None,
        Field(description="Date on the sheet; that of its making (UTC) if absent", examples=["2026-12-01"]),
    ] = None
    paper: Annotated[
        Paper | None,
        Field(description="Of the PDF; A4 for SI and Letter for US units if absent", examples=["a4"]),
    ] = None

    def dated(self) -> dt.date:
        """Date on the sheet."""
        return self.date or dt.datetime.now(dt.UTC).date()

    def paper_for(self, units: UnitSystem) -> Paper:
        """Paper of the PDF."""
        return self.paper or (Paper.LETTER if units is UnitSystem.US else Paper.A4)

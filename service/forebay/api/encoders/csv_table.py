"""Columns as comma-separated text, for spreadsheets and data frames."""

import orjson

from forebay.api.encoders.columns import columns_of
from forebay.api.media import CSV
from forebay.api.outcome import Answered, Encoder, Reply
from forebay.flow.arrays import FloatArray

MEDIA_TYPE = f"{CSV}; charset=utf-8; header=present"
"""Media type as sent."""


def encode_csv(answered: Answered) -> Reply:
    """Table of the columns and a column `status`; headers say the rest.

    An empty cell is a value that does not exist; `status` then says why. Units and warning codes do not fit
    into a table, so they travel in the headers Forebay-Units and Forebay-Warnings.
    """
    columns = columns_of(answered)
    words = [status.encode() for status in columns.statuses]
    cells = [_cells(column) for column in columns.values.values()]
    lines = [",".join((*columns.values, "status")).encode()]
    lines += map(b",".join, zip(*cells, (words[index] for index in columns.status.tolist()), strict=True))
    return Reply(MEDIA_TYPE, b"\r\n".join(lines) + b"\r\n", columns.headers)


def _cells(column: FloatArray) -> list[bytes]:
    """Shortest text of each number that reads back as the same one; nothing for nan."""
    text = orjson.dumps(column, option=orjson.OPT_SERIALIZE_NUMPY)[1:-1]
    return text.replace(b"null", b"").split(b",")


TABLE = Encoder(
    CSV,
    encode_csv,
    "A header row and a row for each point; units in the header Forebay-Units",
    {"type": "string"},
)

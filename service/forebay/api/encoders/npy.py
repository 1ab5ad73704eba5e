"""Columns as one structured NumPy array, the fast way for large fields into Python."""

import io

import numpy as np

from forebay.api.encoders.columns import columns_of
from forebay.api.media import NPY
from forebay.api.outcome import Answered, Encoder, Reply


def encode_npy(answered: Answered) -> Reply:
    """Array in the .npy format: float64 fields by name, nan where there is no value, and `status`.

    `status` is 0 where the values are plain; the header Forebay-Statuses names the other numbers.
    """
    columns = columns_of(answered)
    kinds = [(name, "<f8") for name in columns.values]
    table = np.empty(len(columns.status), dtype=[*kinds, ("status", "<u1")])
    for name, column in columns.values.items():
        table[name] = column
    table["status"] = columns.status
    file = io.BytesIO()
    np.save(file, table, allow_pickle=False)
    names = ", ".join(f"{number}={word}" for number, word in enumerate(columns.statuses) if word)
    statuses = {"Forebay-Statuses": names} if names else {}
    return Reply(NPY, file.getvalue(), columns.headers | statuses)


ARRAY = Encoder(
    NPY,
    encode_npy,
    "A structured NumPy array (.npy) with a float64 field for each column and a field `status`",
    {"type": "string", "format": "binary"},
)

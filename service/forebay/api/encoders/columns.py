"""Columns of an answer, as every table-like media type needs them."""

from typing import Any, NamedTuple

import numpy as np

from forebay.api.outcome import Answered, warning_header
from forebay.flow.arrays import FloatArray, IntArray

Document = dict[str, Any]


class Columns(NamedTuple):
    """Columns of one length.

    values : by name, nan where there is none, in the client's units
    statuses : the words in use, "" first;  status : index into `statuses` of each row
    headers : units, statuses and warnings, for media types without room for them
    """

    values: dict[str, FloatArray]
    statuses: tuple[str, ...]
    status: IntArray
    headers: dict[str, str]


def columns_of(answered: Answered) -> Columns:
    """Every one-dimensional column of a sampled field, and why a row has no values."""
    result, units = answered.document["result"], answered.document["units"]
    values = {name: column for name, column in result.items() if isinstance(column, np.ndarray)}
    flagged = result["flagged"]
    statuses = ("", *sorted({str(flag["status"]) for flag in flagged}))
    status = np.zeros(len(result["x"]), dtype=np.int64)
    status[[flag["index"] for flag in flagged]] = [statuses.index(str(flag["status"])) for flag in flagged]
    headers = {"Forebay-Units": ", ".join(f"{name}={units[name]}" for name in values)}
    return Columns(values, statuses, status, headers | warning_header(answered))

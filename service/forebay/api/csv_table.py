"""Columns as comma-separated text, for spreadsheets and data frames."""

from typing import Any

import numpy as np

from forebay.api.media import CSV


def encode_csv(document: dict[str, Any]) -> tuple[bytes, dict[str, str]]:
    """Table of an envelope's one-dimensional columns and a column `status`; headers say the rest.

    An empty cell is a value that does not exist; `status` then says why. Units and warning codes do not fit
    into a table, so they travel in the headers Forebay-Units and Forebay-Warnings.
    """
    result, units = document["result"], document["units"]
    columns = {name: column for name, column in result.items() if isinstance(column, np.ndarray)}
    status = [""] * len(result["x"])
    for flag in result["flagged"]:
        status[flag["index"]] = str(flag["status"])
    cells = [map(_cell, column.tolist()) for column in columns.values()]
    lines = [",".join((*columns, "status"))]
    lines += [",".join(row) for row in zip(*cells, status, strict=True)]
    headers = {"Forebay-Units": ", ".join(f"{name}={units[name]}" for name in columns)}
    codes = ", ".join(dict.fromkeys(notice["code"] for notice in document["warnings"]))
    if codes:
        headers["Forebay-Warnings"] = codes
    return ("\r\n".join(lines) + "\r\n").encode(), headers


def _cell(value: float) -> str:
    return "" if value != value else repr(value)  # noqa: PLR0124  (NaN)


MEDIA_TYPE = f"{CSV}; charset=utf-8; header=present"
"""Media type as sent."""

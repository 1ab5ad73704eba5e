"""Columns as an Apache Arrow stream, for data frames in many languages; needs the extra `arrow`."""

from functools import cache
from importlib.util import find_spec

import numpy as np
import orjson

from forebay.api.encoders.columns import Columns, columns_of
from forebay.api.media import ARROW
from forebay.api.outcome import Answered, Encoder, Reply


@cache
def is_installed() -> bool:
    """Whether the library is there; without it the media type is not offered."""
    return find_spec("pyarrow") is not None


def encode_arrow(answered: Answered) -> Reply:
    """One record batch: a float64 column for each quantity, null where there is no value, and `status`.

    The unit stands in each field's metadata, warnings and provenance as JSON in the schema's.
    """
    return Reply(ARROW, _stream(columns_of(answered), answered.document), {})


def _stream(columns: Columns, document: dict[str, object]) -> bytes:
    import pyarrow as pa  # noqa: PLC0415  (an optional dependency that takes long to import)

    units = document["units"]
    fields = [
        pa.field(name, pa.float64(), metadata={"unit": units[name]})  # type: ignore[index]
        for name in columns.values
    ]
    arrays = [pa.array(column, from_pandas=True) for column in columns.values.values()]
    words = pa.DictionaryArray.from_arrays(columns.status.astype(np.int8), list(columns.statuses))
    facts = {name: orjson.dumps(document[name]) for name in ("warnings", "provenance")}
    schema = pa.schema([*fields, pa.field("status", words.type)], metadata=facts)
    batch = pa.record_batch([*arrays, words], schema=schema)
    sink = pa.BufferOutputStream()
    with pa.ipc.new_stream(sink, schema) as writer:
        writer.write_batch(batch)
    stream: bytes = sink.getvalue().to_pybytes()
    return stream


STREAM = Encoder(
    ARROW,
    encode_arrow,
    "An Apache Arrow stream, if the service was installed with the extra `arrow`",
    {"type": "string", "format": "binary"},
    is_installed,
)

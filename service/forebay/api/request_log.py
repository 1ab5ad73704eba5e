"""The log: a line of JSON for each request, written by a thread, so that nobody waits for the disk."""

import logging
import sys
from datetime import UTC, datetime
from logging.handlers import QueueHandler, QueueListener
from queue import Full, Queue
from typing import Any

import orjson
from typing_extensions import override

NAME = "forebay"

ROOM = 10_000
"""Lines that may wait to be written; further ones are dropped and counted, so that memory stays bounded."""


class JsonLines(logging.Formatter):
    """A record as one line of JSON: time, level, message, and the fields it was given."""

    @override
    def format(self, record: logging.LogRecord) -> str:
        """One line."""
        line: dict[str, Any] = {
            "time": datetime.fromtimestamp(record.created, UTC).isoformat(timespec="milliseconds"),
            "level": record.levelname.lower(),
            "message": record.getMessage(),
            **getattr(record, "fields", {}),
        }
        if record.exc_info:
            line["trace"] = self.formatException(record.exc_info)
        return orjson.dumps(line, default=str).decode()


class Dropping(QueueHandler):
    """Puts records into a queue; what does not fit is dropped and counted."""

    dropped = 0

    @override
    def enqueue(self, record: logging.LogRecord) -> None:
        """Put one record in, if there is room."""
        try:
            self.queue.put_nowait(record)
        except Full:
            self.dropped += 1

    @override
    def prepare(self, record: logging.LogRecord) -> logging.LogRecord:
        """Nothing: the queue stays in this process, and the thread formats."""
        return record


def start_log() -> QueueListener:
    """Send what the service logs to standard error as lines of JSON; `stop` of the result writes the rest."""
    writer = logging.StreamHandler(sys.stderr)
    writer.setFormatter(JsonLines())
    queue: Queue[logging.LogRecord] = Queue(ROOM)
    log = logging.getLogger(NAME)
    log.handlers = [Dropping(queue)]
    log.setLevel(logging.INFO)
    log.propagate = False
    listener = QueueListener(queue, writer)
    listener.start()
    return listener

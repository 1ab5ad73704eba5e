"""Counters for Prometheus, and the middleware that feeds them and the log."""

import logging
import re
from collections.abc import Iterator
from time import perf_counter
from typing import Any

from prometheus_client import CollectorRegistry, Counter, Gauge, Histogram
from prometheus_client.core import CounterMetricFamily, GaugeMetricFamily, Metric
from prometheus_client.registry import Collector
from starlette.datastructures import Headers
from starlette.types import ASGIApp, Message, Receive, Scope, Send
from typing_extensions import override

from forebay.api.work import Workshop

LOG = logging.getLogger("forebay")

BUCKETS = (0.001, 0.003, 0.01, 0.03, 0.1, 0.3, 1.0, 3.0, 10.0, 30.0, 100.0)
"""Upper ends of the duration buckets [s]."""

METHODS = frozenset({"GET", "HEAD", "POST", "OPTIONS"})
"""Methods that are counted by their name."""

TRACE_PARENT = re.compile(r"[0-9a-f]{2}-([0-9a-f]{32})-([0-9a-f]{16})-[0-9a-f]{2}(?:-.*)?")
"""Trace and span of a caller (W3C Trace Context)."""


class Metrics:
    """Counters of one application; each application has its own registry."""

    def __init__(self, workshop: Workshop) -> None:
        self.registry = CollectorRegistry()
        labels = ("route", "method", "status")
        self.requests = Counter("forebay_requests", "Requests answered", labels, registry=self.registry)
        self.seconds = Histogram(
            "forebay_request_seconds",
            "Time to answer",
            ("route",),
            buckets=BUCKETS,
            registry=self.registry,
        )
        self.sent = Counter("forebay_sent_bytes", "Bytes of bodies sent", ("route",), registry=self.registry)
        self.running = Gauge("forebay_requests_running", "Requests being answered", registry=self.registry)
        self._show_work(workshop)
        self.registry.register(EndedWorkers(workshop))
        self.registry.register(Expenses(workshop))

    def _show_work(self, workshop: Workshop) -> None:
        """Gauges that look at the workshop when they are read."""
        limits = workshop.limits
        gauges = {
            "forebay_computations_waiting_or_running": (
                "Computations given to worker processes and not yet back",
                lambda: workshop.waiting,
            ),
            "forebay_workers_busy": (
                "Worker processes at work",
                lambda: min(workshop.waiting, limits.workers),
            ),
            "forebay_queue_length": (
                "Computations that wait for a worker",
                lambda: max(workshop.waiting - limits.workers, 0),
            ),
        }
        for name, (meaning, value) in gauges.items():
            Gauge(name, meaning, registry=self.registry).set_function(value)


class EndedWorkers(Collector):
    """Workers that ended before their work did, by reason, as the pool counts them."""

    def __init__(self, workshop: Workshop) -> None:
        self._workshop = workshop

    @override
    def collect(self) -> list[CounterMetricFamily]:
        """Every reason, at 0 where it has not happened."""
        family = CounterMetricFamily(
            "forebay_workers_ended", "Workers ended before their work was done", labels=("reason",)
        )
        for reason in ("deadline", "client", "memory", "lost"):
            family.add_metric((reason,), self._workshop.pool.ended[reason])
        return [family]


class Expenses(Collector):
    """What answers have cost, in this process and in workers; memos as of each worker's last answer."""

    def __init__(self, workshop: Workshop) -> None:
        self._workshop = workshop

    @override
    def collect(self) -> Iterator[Metric]:
        """Pairs by operation, and how often each memo helped."""
        pairs = CounterMetricFamily(
            "forebay_kernel_pairs",
            "Pairs of element and point of the answers, other work counted as pairs that take as long",
            labels=("operation",),
        )
        for operation, count in self._workshop.ledger.pairs.items():
            pairs.add_metric((operation,), count)
        yield pairs
        yield from self._memos()

    def _memos(self) -> Iterator[Metric]:
        labels = ("memo",)
        hits = CounterMetricFamily("forebay_memo_hits", "Times that a memo held it", labels=labels)
        misses = CounterMetricFamily("forebay_memo_misses", "Times that it did not", labels=labels)
        size = GaugeMetricFamily("forebay_memo_bytes", "Memory of factorisations that are kept")
        states = self._workshop.ledger.memos()
        for name, state in states.items():
            hits.add_metric((name,), state.hits)
            misses.add_metric((name,), state.misses)
        size.add_metric((), states["walls"].size)
        yield from (hits, misses, size)


class Measured:
    """Counts, times and logs every request by its route, never by its raw path."""

    def __init__(self, app: ASGIApp, metrics: Metrics, *, is_logging: bool = False) -> None:
        self.app = app
        self.metrics = metrics
        self.is_logging = is_logging

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request and count it."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        started, status, size = perf_counter(), 0, 0

        async def watched(message: Message) -> None:
            nonlocal status, size
            if message["type"] == "http.response.start":
                status = int(message["status"])
            size += len(message.get("body", b""))
            await send(message)

        with self.metrics.running.track_inprogress():
            try:
                await self.app(scope, receive, watched)
            finally:
                self._note(scope, status or 499, perf_counter() - started, size)

    def _note(self, scope: Scope, status: int, seconds: float, size: int) -> None:
        route = getattr(scope.get("route"), "path", "none")
        method = scope["method"] if scope["method"] in METHODS else "other"
        self.metrics.requests.labels(route, method, str(status)).inc()
        self.metrics.seconds.labels(route).observe(seconds)
        self.metrics.sent.labels(route).inc(size)
        if self.is_logging:
            facts = {"method": method, "route": route, "status": status, "bytes_out": size}
            LOG.info("request", extra={"fields": {**_caller(scope), **facts, "ms": round(1e3 * seconds, 2)}})


def _caller(scope: Scope) -> dict[str, Any]:
    """Who asks, as far as it helps to find the request elsewhere: never an address, a token or a body."""
    headers = Headers(scope=scope)
    facts: dict[str, Any] = {"request_id": scope.get("state", {}).get("request_id", "unknown")}
    if parent := TRACE_PARENT.fullmatch(headers.get("traceparent", "")):
        facts |= {"trace_id": parent.group(1), "parent_id": parent.group(2)}
    if (length := headers.get("content-length", "")).isdecimal():
        facts["bytes_in"] = int(length[:20])
    return facts

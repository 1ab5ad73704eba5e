"""Counters for Prometheus, and the middleware that feeds them."""

from time import perf_counter

from prometheus_client import CollectorRegistry, Counter, Gauge, Histogram
from starlette.types import ASGIApp, Message, Receive, Scope, Send

BUCKETS = (0.001, 0.003, 0.01, 0.03, 0.1, 0.3, 1.0, 3.0, 10.0, 30.0, 100.0)
"""Upper ends of the duration buckets [s]."""


class Metrics:
    """Counters of one application; each application has its own registry."""

    def __init__(self) -> None:
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
        self.running = Gauge("forebay_requests_running", "Requests being answered", registry=self.registry)
        self.lengthy = Gauge(
            "forebay_computations_waiting_or_running",
            "Computations given to worker processes and not yet back",
            registry=self.registry,
        )


class Measured:
    """Counts and times every request by its route, never by its raw path."""

    def __init__(self, app: ASGIApp, metrics: Metrics) -> None:
        self.app = app
        self.metrics = metrics

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request and count it."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        started, status = perf_counter(), 0

        async def watched(message: Message) -> None:
            nonlocal status
            if message["type"] == "http.response.start":
                status = int(message["status"])
            await send(message)

        with self.metrics.running.track_inprogress():
            try:
                await self.app(scope, receive, watched)
            finally:
                route = getattr(scope.get("route"), "path", "none")
                method = scope["method"] if scope["method"] in {"GET", "HEAD", "POST", "OPTIONS"} else "other"
                self.metrics.requests.labels(route, method, str(status or 499)).inc()
                self.metrics.seconds.labels(route).observe(perf_counter() - started)

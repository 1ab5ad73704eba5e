"""Run the service under its HTTP server."""

import asyncio
import signal
from types import FrameType

import uvicorn
from typing_extensions import override

from forebay.api.request_log import start_log
from forebay.app import Application, create_app
from forebay.kernel_cache import pass_over_full_disks
from forebay.settings import Settings

GRACE = 10
"""Time that requests have to end after the service has stopped listening [s]."""


class Server(uvicorn.Server):
    """Says that it stops before it does, so that a proxy can send new requests elsewhere."""

    def __init__(self, config: uvicorn.Config, app: Application, drain: float) -> None:
        super().__init__(config)
        self._app = app
        self._drain = drain
        self._loop: asyncio.AbstractEventLoop | None = None

    @override
    async def startup(self, sockets: list[object] | None = None) -> None:  # type: ignore[override]
        """Listen."""
        self._loop = asyncio.get_running_loop()
        await super().startup(sockets)  # type: ignore[arg-type]

    @override
    def handle_exit(self, sig: int, frame: FrameType | None) -> None:
        """On the first SIGTERM turn /readyz at once and stop listening later; else stop at once."""
        if sig != signal.SIGTERM or self._app.state.readiness.is_draining or self._loop is None:
            super().handle_exit(sig, frame)
            return
        self._app.state.readiness.drain()
        stop = super().handle_exit
        self._loop.call_soon_threadsafe(self._loop.call_later, self._drain, stop, sig, frame)


def run_server(*, host: str | None, port: int | None) -> int:
    """Listen on `host` and `port`, by default those of the settings, until a signal comes.

    Raises SettingsError if others could reach the service without a token, and nobody has allowed it.
    """
    settings = Settings.from_environment()
    address = host if host is not None else settings.host
    settings.check_access(address)
    app = create_app(settings)
    config = uvicorn.Config(
        app,
        host=address,
        port=port if port is not None else settings.port,
        server_header=False,
        access_log=False,
        timeout_graceful_shutdown=GRACE,
    )
    log = start_log()
    pass_over_full_disks()
    try:
        Server(config, app, settings.drain).run()
    finally:
        log.stop()
    return 0

"""Run the service under its HTTP server."""

import uvicorn

from forebay.app import create_app
from forebay.settings import Settings


def run_server(*, host: str | None, port: int | None) -> int:
    """Listen on `host` and `port`, by default those of the settings, until a signal comes."""
    settings = Settings.from_environment()
    uvicorn.run(
        create_app(settings),
        host=host if host is not None else settings.host,
        port=port if port is not None else settings.port,
        server_header=False,
        access_log=False,
        timeout_graceful_shutdown=10,
    )
    return 0

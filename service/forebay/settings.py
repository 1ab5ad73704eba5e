"""Settings of the service: read once from the environment, then fixed."""

import os
from collections.abc import Mapping
from ipaddress import ip_address
from pathlib import Path
from typing import Annotated, Any, Self

from pydantic import BaseModel, ConfigDict, Field, ValidationError, field_validator, model_validator
from pydantic_core import PydanticCustomError

PREFIX = "FOREBAY_"
"""Every variable of the environment starts with it."""


class SettingsError(Exception):
    """The environment holds a setting that cannot be used."""


def available_processors() -> int:
    """Processors this process may run on."""
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


Token = Annotated[str, Field(min_length=16, max_length=200, pattern=r"^[A-Za-z0-9._~+/=-]+$")]
"""A bearer token (RFC 6750), long enough not to be guessed."""


class Settings(BaseModel):
    """Facts about one running service; `FOREBAY_<NAME>` in the environment sets each."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    host: Annotated[str, Field(min_length=1, description="Address to listen on")] = "127.0.0.1"
    port: Annotated[int, Field(ge=0, le=65535, description="Port to listen on; 0 takes a free one")] = 8620
    root_path: Annotated[str, Field(pattern=r"^(/[^/?#]+)*$", description="Path prefix of a proxy")] = ""
    workers: Annotated[int, Field(ge=1, le=256, description="Processes for large computations")] = Field(
        default_factory=available_processors
    )
    queue: Annotated[
        int, Field(ge=0, le=10000, description="Large computations that may wait for a worker")
    ] = 16
    deadline: Annotated[float, Field(gt=0, le=3600, description="Longest large computation [s]")] = 30.0
    max_body: Annotated[int, Field(ge=1024, le=2**31, description="Largest request body [bytes]")] = (
        64 * 2**20
    )
    max_points: Annotated[int, Field(ge=1, le=10**8, description="Most points of one request")] = 1_000_000
    max_elements: Annotated[
        int, Field(ge=1, le=2000, description="Most elements and structures of a layout")
    ] = 1000
    max_pairs: Annotated[int, Field(ge=1, le=10**12, description="Most pairs of element and point")] = (
        200_000_000
    )
    cors_origins: Annotated[
        tuple[str, ...],
        Field(description="Origins whose pages may call the service, comma-separated; * for all"),
    ] = ("*",)
    docs: Annotated[bool, Field(description="Whether /docs is served")] = True
    worker_memory: Annotated[
        int, Field(ge=2**29, le=2**40, description="Memory that a worker process may take [bytes]")
    ] = 2 * 2**30
    drain: Annotated[
        float,
        Field(ge=0, le=600, description="Time from SIGTERM, when /readyz turns, to the end of listening [s]"),
    ] = 5.0
    tokens_file: Annotated[
        Path | None, Field(description="File of bearer tokens, one a line, read again when it changes")
    ] = None
    tokens: Annotated[tuple[Token, ...], Field(description="Bearer tokens, comma-separated", repr=False)] = ()
    token_concurrency: Annotated[
        int, Field(ge=1, le=10000, description="Computations of one token at a time")
    ] = 16
    anonymous: Annotated[bool, Field(description="Whether to listen beyond this machine without tokens")] = (
        False
    )
    log: Annotated[bool, Field(description="Whether a line is logged for each request, as JSON")] = True

    @field_validator("cors_origins", "tokens", mode="before")
    @classmethod
    def _split(cls, value: Any) -> Any:  # noqa: ANN401
        """Several values from one comma-separated variable."""
        return (
            tuple(part.strip() for part in value.split(",") if part.strip())
            if isinstance(value, str)
            else value
        )

    @property
    def has_tokens(self) -> bool:
        """Whether a token is asked for."""
        return self.tokens_file is not None or bool(self.tokens)

    @model_validator(mode="after")
    def _readable(self) -> Self:
        """Check that the file of tokens is there."""
        if self.tokens_file is not None and not os.access(self.tokens_file, os.R_OK):
            raise PydanticCustomError("unreadable", "TOKENS_FILE: no such file, or it cannot be read")
        return self

    def check_access(self, host: str) -> None:
        """Refuse to listen where others are without a token, unless told to.

        Raises SettingsError.
        """
        if not (self.has_tokens or self.anonymous or _is_loopback(host)):
            raise SettingsError(
                f"{host} can be reached from other machines and no token is asked for: set "
                f"{PREFIX}TOKENS_FILE or {PREFIX}TOKENS, or {PREFIX}ANONYMOUS=true behind a proxy that asks"
            )

    @classmethod
    def from_environment(cls, environment: Mapping[str, str] | None = None) -> Self:
        """Read the settings.

        Raises SettingsError, which names each variable at fault, and those that mean nothing.
        """
        variables = os.environ if environment is None else environment
        given = {
            name.removeprefix(PREFIX).lower(): value
            for name, value in variables.items()
            if name.startswith(PREFIX)
        }
        try:
            return cls.model_validate(given)
        except ValidationError as error:
            faults = [
                f"{PREFIX}{_name(fault['loc'])}{_reason(fault['type'], fault['msg'])}"
                for fault in error.errors(include_url=False, include_input=False)
            ]
            raise SettingsError("; ".join(faults)) from None


def _name(location: tuple[int | str, ...]) -> str:
    return f"{str(location[0]).upper()}: " if location else ""


def _is_loopback(host: str) -> bool:
    try:
        return ip_address(host).is_loopback
    except ValueError:
        return host == "localhost"


def _reason(kind: str, message: str) -> str:
    return "no such setting" if kind == "extra_forbidden" else message

"""Settings of the service: read once from the environment, then fixed."""

import os
from collections.abc import Mapping
from typing import Annotated, Any, Self

from pydantic import BaseModel, ConfigDict, Field, ValidationError, field_validator

PREFIX = "FOREBAY_"
"""Every variable of the environment starts with it."""


class SettingsError(Exception):
    """The environment holds a setting that cannot be used."""


def available_processors() -> int:
    """Processors this process may run on."""
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


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

    @field_validator("cors_origins", mode="before")
    @classmethod
    def _split(cls, value: Any) -> Any:  # noqa: ANN401
        """Origins from one comma-separated variable."""
        return (
            tuple(part.strip() for part in value.split(",") if part.strip())
            if isinstance(value, str)
            else value
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
                f"{PREFIX}{str(fault['loc'][0]).upper()}: {_reason(fault['type'], fault['msg'])}"
                for fault in error.errors(include_url=False)
            ]
            raise SettingsError("; ".join(faults)) from None


def _reason(kind: str, message: str) -> str:
    return "no such setting" if kind == "extra_forbidden" else message

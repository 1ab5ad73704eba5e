"""What every request, answer and schema shares."""

from collections.abc import Mapping
from types import MappingProxyType
from typing import Annotated, ClassVar

from pydantic import BaseModel, ConfigDict, Field

from forebay.api.schemas.quantities import Digits
from forebay.api.units import UnitSystem


class Strict(BaseModel):
    """Part of a request: unknown fields are refused."""

    model_config = ConfigDict(extra="forbid", frozen=True, protected_namespaces=(), populate_by_name=False)


class Answer(BaseModel):
    """Part of an answer: documents names and units; values never pass through it at run time."""

    model_config = ConfigDict(extra="forbid", protected_namespaces=())

    SCOPES: ClassVar[Mapping[str, type["Answer"]]] = MappingProxyType({})
    """Members that hold the answer of another route, whose names may have other units than elsewhere."""


class ComputeRequest(Strict):
    """What every compute route takes."""

    unit_system: Annotated[
        UnitSystem,
        Field(description="Units of every number in the request and in its answer", examples=["si"]),
    ] = UnitSystem.SI
    digits: Annotated[
        Digits, Field(description="Significant digits of the answer's numbers; 17 gives each exactly")
    ] = 9


Name = Annotated[
    str, Field(min_length=1, max_length=80, pattern=r"^[^\x00-\x1f\x7f]+$", examples=["town intake"])
]
"""Name of an element, structure, contour or state."""

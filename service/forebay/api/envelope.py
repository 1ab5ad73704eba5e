"""The envelope of an answer: result in the client's units, the units' codes, warnings, provenance."""

import dataclasses
import hashlib
import re
from collections.abc import Mapping
from enum import StrEnum
from functools import cache, lru_cache
from types import MappingProxyType
from typing import Any

import numpy as np
import orjson

from forebay import __version__
from forebay.api.numbers import round_array, round_number
from forebay.api.schemas.boundary import BoundaryValue
from forebay.api.schemas.common import Answer, ComputeRequest
from forebay.api.units import UnitSystem
from forebay.api.warnings import Notice, written_warnings
from forebay.flow.layout import Layout
from forebay.trade.applicability.site import SiteData

Json = dict[str, Any]

Site = tuple[Layout, SiteData | None]
"""A layout, and what else is known of the site."""

Notices = tuple[Notice, ...]

REFERENCE = re.compile(r"'#/\$defs/([^']+)'")
"""Reference to a definition in a schema written out as text."""


@dataclasses.dataclass(frozen=True)
class Written:
    """How an answer is to be written."""

    unit_system: UnitSystem = UnitSystem.SI
    digits: int = 9


@cache
def units_of(model: type[Answer]) -> Mapping[str, str]:
    """SI unit of every numeric field that an answer can hold, by name; those of its scopes left out.

    Raises ValueError if one name has two units, since an answer could not say which is meant.
    """
    schema = model.model_json_schema(by_alias=True)
    units: dict[str, str] = {}
    own = {name: field for name, field in schema.get("properties", {}).items() if name not in model.SCOPES}
    for fields in (own, *_referred(own, schema.get("$defs", {})).values()):
        for name, field in fields.items():
            unit = unit_in(field)
            if unit is not None and units.setdefault(name, unit) != unit:
                raise ValueError(f"{model.__name__}: {name} is in {units[name]} and in {unit}")
    return units


def _referred(part: Json, definitions: Json) -> dict[str, Json]:
    """Fields of every definition that a part of a schema refers to, directly or not, by name."""
    found: dict[str, Json] = {}
    ahead = [part]
    while ahead:
        for name in REFERENCE.findall(str(ahead.pop())):
            if name not in found:
                found[name] = definitions[name].get("properties", {})
                ahead.append(definitions[name])
    return found


def unit_in(field: Json) -> str | None:
    """SI unit of a field in a JSON schema, None if it holds no number or one with a unit elsewhere."""
    if "unit" in field:
        return str(field["unit"])
    items = field.get("items")
    inner = [items] if isinstance(items, dict) else []
    inner += [*field.get("prefixItems", ()), *field.get("anyOf", ()), *field.get("oneOf", ())]
    return next((unit for unit in map(unit_in, inner) if unit is not None), None)


class Presenter:
    """Turns SI results into the client's units and digits, and keeps the units it used.

    scopes : answers of other routes inside the result, by the member that holds each; a name that has another
        unit there than outside is kept as `member.name`
    """

    def __init__(
        self,
        si_units: Mapping[str, str],
        system: UnitSystem,
        digits: int,
        scopes: Mapping[str, type[Answer]] = MappingProxyType({}),
    ) -> None:
        self._si_units = si_units
        self._system = system
        self._digits = digits
        self._scopes = scopes
        self.units: dict[str, str] = {}

    def present(self, value: Any, name: str = "") -> Any:  # noqa: ANN401
        """Value of the field `name` in the client's units; arrays stay arrays, NaN is null once encoded."""
        if name in self._si_units:
            self.units[name] = self._system.code(self._si_units[name])
        match value:
            case bool() | str() | None:
                return str(value) if isinstance(value, StrEnum) else value
            case Mapping():
                return {key: self._member(inner, key) for key, inner in value.items()}
            case list() | tuple():
                return [self.present(inner, name) for inner in value]
            case np.ndarray():
                return self._array(value, name)
            case complex():
                return [self._number(value.real, name), self._number(value.imag, name)]
            case _:
                return int(value) if isinstance(value, int | np.integer) else self._number(float(value), name)

    def _member(self, value: Any, name: str) -> Any:  # noqa: ANN401
        if name not in self._scopes:
            return self.present(value, name)
        inner = Presenter(units_of(self._scopes[name]), self._system, self._digits)
        presented = inner.present(value)
        for field, unit in inner.units.items():
            outside = self._system.code(self._si_units[field]) if field in self._si_units else unit
            is_same = outside == unit == self.units.get(field, unit)
            self.units[field if is_same else f"{name}.{field}"] = unit
        return presented

    def _number(self, value: float, name: str) -> float | None:
        return round_number(self._system.write(value, self._si_units[name]), self._digits)

    def _array(self, values: np.ndarray[Any, Any], name: str) -> np.ndarray[Any, Any]:
        if values.dtype.kind in "iub":
            return np.ascontiguousarray(values)
        if values.dtype.kind == "c":
            values = np.stack((values.real, values.imag), axis=-1)
        written = self._system.write(values.astype(np.float64, copy=False), self._si_units[name])
        return round_array(written, self._digits)


def digest(site: Site) -> str:
    """Digest of a site in SI: the same for every way of writing the same site in one unit system."""
    layout, data = site
    text = orjson.dumps(_canonical(data), option=orjson.OPT_SORT_KEYS)
    return "sha256:" + hashlib.sha256(_layout_text(layout) + text).hexdigest()


@lru_cache(maxsize=64)
def _layout_text(layout: Layout) -> bytes:
    """The layout as it goes into the digest; clients ask several questions of one layout."""
    return orjson.dumps(_canonical(layout), option=orjson.OPT_SORT_KEYS)


def _canonical(value: Any) -> Any:  # noqa: ANN401
    if dataclasses.is_dataclass(value):
        fields = {field.name: _canonical(getattr(value, field.name)) for field in dataclasses.fields(value)}
        return {"kind": type(value).__name__, **fields}
    match value:
        case Mapping():
            return {str(key): _canonical(item) for key, item in value.items()}
        case tuple():
            return [_canonical(item) for item in value]
        case complex():
            return [value.real + 0.0, value.imag + 0.0]
        case float():
            return value + 0.0
        case _:
            return value


def provenance(site: Site | None) -> Json:
    """Which service and version computed the answer, and of which layout."""
    facts = {"service": "forebay", "version": __version__}
    return facts if site is None else {**facts, "layout_digest": digest(site)}


def document(
    model: type[Answer],
    result: Json,
    *,
    request: Written | ComputeRequest,
    site: Site | None = None,
    notices: Notices = (),
    boundary: Json | None = None,
) -> Json:
    """The whole envelope of a result in SI, in the units and digits that the request asks for."""
    units = {**units_of(BoundaryValue), **units_of(model)}
    presenter = Presenter(units, request.unit_system, request.digits, model.SCOPES)
    presented = presenter.present(result)
    walls = {} if boundary is None else {"boundary": presenter.present(boundary)}
    return {
        "result": presented,
        **walls,
        "units": dict(sorted(presenter.units.items())),
        "warnings": written_warnings(notices, request.unit_system, request.digits),
        "provenance": provenance(site),
    }


def encode(document: Json) -> bytes:
    """JSON of an answer; arrays without a detour through lists, NaN as null."""
    return orjson.dumps(document, option=orjson.OPT_SERIALIZE_NUMPY)

"""What a request gives and what it leaves to defaults, read off its model: name, value, unit."""

from collections.abc import Iterator, Sequence
from functools import cache
from typing import Any, NamedTuple

from pydantic import BaseModel, TypeAdapter

from forebay.api.envelope import unit_in
from forebay.api.figures import unit_name
from forebay.api.schemas.discharges import UnitDischarge
from forebay.api.schemas.water import Water
from forebay.api.units import UnitSystem

MOST_POSITIONS = 40
"""Members of a list that are written out; of a longer one the first and the number."""


class Given(NamedTuple):
    """One value of a request.

    name : in words, its owner first;  value : as given;  unit : printed, as the client reads it
    is_default : whether the request left it out
    """

    name: str
    value: str
    unit: str
    is_default: bool


class Reading(NamedTuple):
    """How a part of a request is read.

    units : its unit system;  prefix : its name so far;  is_default : whether a default made it
    in_row : whether lists of models go into one value; otherwise they are left to tables of their own
    """

    units: UnitSystem
    prefix: str = ""
    is_default: bool = False
    in_row: bool = False

    def inside(self, name: str, *, is_default: bool) -> "Reading":
        """Reading of a member."""
        return self._replace(prefix=name, is_default=self.is_default or is_default)


NONE: frozenset[str] = frozenset()


def values_of(model: BaseModel, reading: Reading, *, but: frozenset[str] = NONE) -> Iterator[Given]:
    """Every value of a model and of the models in it that is there, without the fields `but`."""
    for field, name, value in members_of(model, reading.prefix, but):
        is_default = reading.is_default or field not in model.model_fields_set
        if value is None or (is_many(value) and not reading.in_row):
            continue
        if has_models(value):
            yield Given(name, "; ".join(in_line(item, reading.units) for item in value), "", is_default)
        elif isinstance(value, UnitDischarge):
            yield Given(name, number_text(value.value), unit_name(value.unit), is_default)
        elif isinstance(value, BaseModel):
            yield from values_of(value, reading.inside(name, is_default=is_default))
        else:
            text = value_text(shown(model, field, value, reading.units))
            yield Given(name, text, printed_unit(type(model), field, reading.units), is_default)


def members_of(model: BaseModel, prefix: str, but: frozenset[str] = NONE) -> Iterator[tuple[str, str, Any]]:
    """Fields of a model, each with its name in words and its value."""
    for field, info in type(model).model_fields.items():
        if field not in but:
            yield field, f"{prefix} {words(info.alias or field)}".strip(), getattr(model, field)


def in_line(model: Any, units: UnitSystem) -> str:  # noqa: ANN401
    """All values of a model in one line; something else as it is."""
    if not isinstance(model, BaseModel):
        return value_text(model)
    values = values_of(model, Reading(units, in_row=True))
    return ", ".join(f"{given.name} {given.value} {given.unit}".strip() for given in values)


def shown(model: BaseModel, field: str, value: Any, units: UnitSystem) -> Any:  # noqa: ANN401
    """Value in the client's units; an assumed temperature is in SI whatever they are."""
    if isinstance(model, Water) and field == "temperature" and model.assumed_temperature is not None:
        return units.write(model.assumed_temperature, "Cel")
    return value


def absent_in(model: BaseModel, prefix: str = "") -> Iterator[str]:
    """Names of what could have been given and was not, in a model and in those in it."""
    for _, name, value in members_of(model, prefix):
        if value is None:
            yield name
        elif isinstance(value, BaseModel) and not isinstance(value, UnitDischarge):
            yield from absent_in(value, name)


def lists_in(
    model: BaseModel, prefix: str = "", *, but: frozenset[str] = NONE
) -> Iterator[tuple[str, list[BaseModel]]]:
    """Lists of models in a model and in those in it, each with its name."""
    for _, name, value in members_of(model, prefix, but):
        if is_many(value):
            yield name, value
        elif isinstance(value, BaseModel):
            yield from lists_in(value, name)


def is_many(value: Any) -> bool:  # noqa: ANN401
    """Whether a value is a list of models, which becomes a table of its own."""
    return has_models(value) and all(isinstance(item, BaseModel) for item in value)


def has_models(value: Any) -> bool:  # noqa: ANN401
    """Whether a value is a list that holds models."""
    return isinstance(value, list) and any(isinstance(item, BaseModel) for item in value)


def printed_unit(model: type[BaseModel], field: str, units: UnitSystem) -> str:
    """Unit of a field as the client reads it; empty if it has none."""
    unit = si_unit(model, field)
    return "" if unit is None else unit_name(units.code(unit))


@cache
def si_unit(model: type[BaseModel], field: str) -> str | None:
    """SI unit of a field: its own, or that of what it is a list or one of."""
    info = model.model_fields[field]
    own = info.json_schema_extra
    if isinstance(own, dict) and "unit" in own:
        return str(own["unit"])
    kind: Any = info.annotation
    return unit_in(TypeAdapter(kind).json_schema())


def words(name: str) -> str:
    """Name of a field in words."""
    return name.removesuffix("_deg").replace("_", " ")


def value_text(value: Any) -> str:  # noqa: ANN401
    """Value as given: numbers with every digit, positions in brackets, long lists cut with their number."""
    match value:
        case bool():
            return "yes" if value else "no"
        case int() | float():
            return number_text(value)
        case list():
            return list_text(value)
        case dict():
            return "; ".join(f"{key} {value_text(inner)}" for key, inner in value.items())
        case _:
            return str(value)


def list_text(values: Sequence[Any]) -> str:
    """Members of a list: a pair or a row of a matrix in brackets, others one after the other."""
    if values and all(isinstance(value, int | float) for value in values) and len(values) <= 3:
        return f"({', '.join(number_text(value) for value in values)})"
    texts = [value_text(value) for value in values[:MOST_POSITIONS]]
    rest = len(values) - len(texts)
    return "; ".join([*texts, f"and {rest} more"] if rest else texts)


def number_text(value: float) -> str:
    """Number with every digit that was given."""
    text = repr(value)
    return text.removesuffix(".0").replace("-", "−").replace("e", "·10^")

"""Errors that a request has caused, as problems in the client's units."""

from typing import Any

from forebay.api.numbers import round_number
from forebay.api.problems import API_NAMES, Problem, pointer
from forebay.api.units import UnitSystem
from forebay.flow.errors import FlowError

FACT_UNITS = {
    "through": "m/s",
    "trace": "1/s",
    "net_discharge": "m3/s",
    "temperature": "Cel",
    "salinity": "g/kg",
}
"""SI units of measured facts, by the fact's name or by the field that its error is about."""

FACT_DIGITS = 6
"""Significant digits of a measured fact."""


def from_flow(error: FlowError, system: UnitSystem = UnitSystem.SI) -> Problem:
    """Problem of a FlowError: the pointer starts at the layout where the error belongs to it."""
    steps = tuple(API_NAMES.get(step, step) if isinstance(step, str) else step for step in error.path)
    path = ("layout", *steps) if error.in_layout else steps
    errors = ({"pointer": pointer(path), "detail": error.detail},) if path else ()
    return Problem(error.code, error.detail, errors=errors, facts=written_facts(error, system))


def written_facts(error: FlowError, system: UnitSystem) -> dict[str, Any]:
    """Facts in the client's units, six digits of each measured one; `unit` names the unit they share."""
    unit = next((unit for name, unit in FACT_UNITS.items() if name in {*error.facts, *error.path[-1:]}), None)
    if unit is None:
        return dict(error.facts)
    facts = {
        name: round_number(system.write(float(fact), unit), FACT_DIGITS) for name, fact in error.facts.items()
    }
    return {**facts, "unit": system.code(unit)} if facts else {}

"""Inputs: every value that was given, and every default that was assumed instead."""

from collections.abc import Iterable, Iterator, Sequence

from pydantic import BaseModel

from forebay.api.calculation_sheet.given import Given, Reading, absent_in, lists_in, values_of
from forebay.api.calculation_sheet.markup import Html, element, section
from forebay.api.calculation_sheet.tables import Column, number, table, word
from forebay.api.schemas.assessment import AssessmentRequest
from forebay.api.schemas.layout import Layout
from forebay.api.units import UnitSystem

ASSUMED = Html('<span class="assumed">assumed</span>')

LEGEND = "Values marked * were not given; the service's default was assumed."

OF_ITSELF = frozenset({"layout", "sheet"})
"""Members of a request that are not questions."""


VALUE_COLUMNS = (word("Quantity"), number("Value"), word("Unit"), word("Origin"))


def inputs_section(request: AssessmentRequest) -> Html:
    """Site, elements, structures, and what was asked."""
    layout, reading = request.layout, Reading(request.unit_system)
    site = [row_of(given) for given in values_of(layout, reading)]
    asked = [row_of(given) for given in values_of(request, reading, but=OF_ITSELF)]
    return section(
        "Inputs",
        table("Site, water, current and banks", VALUE_COLUMNS, site),
        absent_note(layout),
        *list_tables(lists_in(layout), reading.units),
        table("Asked, and how the answer is written", VALUE_COLUMNS, asked),
        *list_tables(lists_in(request, but=OF_ITSELF), reading.units),
    )


def row_of(given: Given) -> tuple[str, ...]:
    """A value as a row: whether it was given or assumed stands last."""
    return given.name, given.value, given.unit, ASSUMED if given.is_default else "given"


def list_tables(lists: Iterable[tuple[str, list[BaseModel]]], units: UnitSystem) -> Iterator[Html]:
    """A table for each kind of thing in each list, in order of first occurrence."""
    for title, things in lists:
        kinds: dict[str, list[BaseModel]] = {}
        for thing in things:
            kinds.setdefault(str(getattr(thing, "kind", "")), []).append(thing)
        for kind, alike in kinds.items():
            named = f"{title}: {kind.replace('-', ' ')}" if kind else title
            yield thing_table(named[:1].upper() + named[1:], alike, units)


def thing_table(title: str, things: Sequence[BaseModel], units: UnitSystem) -> Html:
    """A row for each thing, a column for each value that any of them has."""
    read = [
        {given.name: given for given in values_of(thing, Reading(units, in_row=True)) if given.name != "kind"}
        for thing in things
    ]
    names = list(dict.fromkeys(name for values in read for name in values))
    columns = [column_of(name, read) for name in names]
    rows = [
        tuple(cell_of(values.get(name), column) for name, column in zip(names, columns, strict=True))
        for values in read
    ]
    is_assumed = any(given.is_default for values in read for given in values.values())
    return table(title, columns, rows, LEGEND if is_assumed else "")


def column_of(name: str, read: Iterable[dict[str, Given]]) -> Column:
    """Column of one value: with the unit in its head if every thing has the same."""
    present = [values[name] for values in read if name in values]
    units = {given.unit for given in present}
    is_number = all(given.value[:1] in "−0123456789" for given in present)
    return Column(name, units.pop() if len(units) == 1 else "", is_number=is_number)


def cell_of(given: Given | None, column: Column) -> str:
    """Value in its cell, with a unit of its own if the column has none, and a star if it was assumed."""
    if given is None:
        return "–"
    unit = given.unit if given.unit != column.unit else ""
    return f"{given.value} {unit}".rstrip() + ("*" if given.is_default else "")


def absent_note(layout: Layout) -> Html:
    """What could have been given of the site and was not."""
    missing = list(absent_in(layout))
    if not missing:
        return Html()
    text = f"Not given, so that the checks that need it were left out: {', '.join(missing)}."
    return element("p", text, class_="note")

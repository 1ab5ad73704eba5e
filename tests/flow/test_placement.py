"""Layouts that cannot be are refused, and the path names the value."""

from dataclasses import replace

import numpy as np
import pytest

from forebay.flow import errors
from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Core,
    CoreModel,
    Corner,
    DeadEnd,
    Doublet,
    Layout,
    LineSink,
    Pier,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout

BANK = Layout(4.0, shore=StraightBank(0j, 1 + 0j))
CHANNEL = replace(BANK, shore=Channel(0j, 1 + 0j, 20.0))
RIGHT_CORNER = replace(BANK, shore=Corner(0j, 1 + 0j, np.pi / 2))


def with_elements(layout, *elements, structures=()):
    return replace(layout, elements=elements, structures=structures)


WRONG = {
    "same name twice": (
        with_elements(BANK, Sink("a", 1 + 1j, 1.0), Sink("a", 2 + 1j, 1.0)),
        errors.DuplicateNameError,
        ("elements", 1, "name"),
    ),
    "element and pier of one name": (
        with_elements(BANK, Sink("a", 1 + 1j, 1.0), structures=(Pier("a", 9 + 9j, 1.0),)),
        errors.DuplicateNameError,
        ("structures", 0, "name"),
    ),
    "sink on land": (
        with_elements(BANK, Sink("a", 1 - 1j, 1.0)),
        errors.ElementOnLandError,
        ("elements", 0, "at"),
    ),
    "beyond the far bank": (
        with_elements(CHANNEL, Sink("a", 1 + 1j, 1.0), Source("b", 1 + 21j, 1.0)),
        errors.ElementOnLandError,
        ("elements", 1, "at"),
    ),
    "line that ends on land": (
        with_elements(BANK, LineSink("a", 1 + 1j, 1 - 1j, 1.0)),
        errors.ElementOnLandError,
        ("elements", 0, "to"),
    ),
    "line across a reentrant corner": (
        with_elements(
            replace(BANK, shore=Corner(0j, 1 + 0j, 1.5 * np.pi)), LineSink("a", 2 + 1j, -1 - 2j, 1.0)
        ),
        errors.ElementOnLandError,
        ("elements", 0, "to"),
    ),
    "line without length": (
        with_elements(BANK, LineSink("a", 1 + 1j, 1 + 1j, 1.0)),
        errors.ElementMisplacedError,
        ("elements", 0, "to"),
    ),
    "vortex on a bank": (
        with_elements(BANK, Vortex("a", 1 + 0j, 1.0)),
        errors.ElementMisplacedError,
        ("elements", 0, "at"),
    ),
    "doublet on a bank": (
        with_elements(BANK, Doublet("a", 1 + 0j, 1 + 0j)),
        errors.ElementMisplacedError,
        ("elements", 0, "at"),
    ),
    "sink in a corner": (
        with_elements(RIGHT_CORNER, Sink("a", 0j, 1.0)),
        errors.ElementMisplacedError,
        ("elements", 0, "at"),
    ),
    "core that reaches land": (
        with_elements(BANK, Vortex("a", 1 + 1j, 1.0, Core(CoreModel.RANKINE, 1.1))),
        errors.ElementOnLandError,
        ("elements", 0, "core", "radius"),
    ),
    "sink in a pier": (
        with_elements(BANK, Sink("a", 5 + 5j, 1.0), structures=(Pier("p", 5.5 + 5j, 1.0),)),
        errors.ElementInStructureError,
        ("elements", 0, "at"),
    ),
    "line through a pier": (
        with_elements(BANK, LineSink("a", 1 + 5j, 9 + 5j, 1.0), structures=(Pier("p", 5 + 5j, 1.0),)),
        errors.ElementInStructureError,
        ("elements", 0, "to"),
    ),
    "piers that overlap": (
        with_elements(BANK, structures=(Pier("p", 5 + 5j, 1.0), Pier("q", 6 + 5j, 1.0))),
        errors.OverlappingStructuresError,
        ("structures", 1, "at"),
    ),
    "pier in the bank": (
        with_elements(BANK, structures=(Pier("p", 5 + 0.5j, 1.0),)),
        errors.OverlappingStructuresError,
        ("structures", 0, "radius"),
    ),
    "pier on land": (
        with_elements(BANK, structures=(Pier("p", 5 - 5j, 1.0),)),
        errors.ElementOnLandError,
        ("structures", 0, "at"),
    ),
    "two sinks at one place": (
        with_elements(BANK, Sink("a", 1 + 1j, 1.0), Vortex("v", 1 + 1j, 1.0), Sink("b", 1 + 1j, 1.0)),
        errors.CoincidentElementsError,
        ("elements", 2, "at"),
    ),
    "current through a bank": (
        replace(BANK, ambient=Ambient(0.3 + 0.01j)),
        errors.CurrentThroughWallError,
        ("ambient", "velocity"),
    ),
    "current in a corner": (
        replace(RIGHT_CORNER, ambient=Ambient(0.3 + 0j)),
        errors.CurrentThroughWallError,
        ("ambient", "velocity"),
    ),
    "current into a dead end": (
        replace(BANK, shore=DeadEnd(0j, 1 + 0j, 9.0), ambient=Ambient(-0.3 + 0j)),
        errors.CurrentThroughWallError,
        ("ambient", "velocity"),
    ),
    "strain through a bank": (
        replace(BANK, ambient=Ambient(gradient=((0.0, 0.0), (0.1, 0.0)))),
        errors.CurrentThroughWallError,
        ("ambient", "gradient"),
    ),
    "gradient with a trace": (
        Layout(4.0, ambient=Ambient(gradient=((0.1, 0.0), (0.0, 0.1)))),
        errors.DivergentAmbientError,
        ("ambient", "gradient"),
    ),
    "basin that fills": (
        with_elements(
            replace(BANK, shore=Basin(0j, 1 + 0j, 30.0, 20.0)),
            Source("a", 3 + 3j, 1.0),
            Sink("b", 9 + 9j, 1.001),
        ),
        errors.UnbalancedDischargeError,
        ("elements",),
    ),
}


@pytest.mark.parametrize(("layout", "error", "path"), WRONG.values(), ids=WRONG.keys())
def test_wrong_layouts_are_refused(layout, error, path):
    with pytest.raises(error) as caught:
        compile_layout(layout)
    assert type(caught.value) is error
    assert caught.value.path == path
    assert caught.value.detail


ALLOWED = {
    "current along a bank to nine digits": replace(
        BANK, shore=StraightBank(0j, complex(np.exp(0.3j))), ambient=Ambient(0.286600947 + 0.0886560620j)
    ),
    "nothing at all": BANK,
    "sink on the bank": with_elements(BANK, Sink("a", 1 + 0j, 1.0)),
    "sink on the far bank": with_elements(CHANNEL, Sink("a", 1 + 20j, 1.0)),
    "sink with swirl": with_elements(BANK, Sink("a", 1 + 1j, 1.0), Vortex("v", 1 + 1j, 1.0)),
    "shear along the bank": replace(BANK, ambient=Ambient(gradient=((0.0, 0.1), (0.0, 0.0)))),
    "strain into a right corner": replace(RIGHT_CORNER, ambient=Ambient(gradient=((0.1, 0.0), (0.0, -0.1)))),
    "current along a corner of 180 degrees": replace(
        BANK, shore=Corner(0j, 1 + 0j, np.pi), ambient=Ambient(0.3 + 0j)
    ),
    "balanced basin": with_elements(
        replace(BANK, shore=Basin(0j, 1 + 0j, 30.0, 20.0)), Source("a", 3 + 3j, 1.0), Sink("b", 9 + 9j, 1.0)
    ),
}


@pytest.mark.parametrize("layout", ALLOWED.values(), ids=ALLOWED.keys())
def test_unusual_layouts_are_accepted(layout):
    assert compile_layout(layout).layout is layout

"""Assess a layout: everything that is asked of one site, in one answer."""

from dataclasses import dataclass, field

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.contour import ContourIntegral, integrate_contour
from forebay.flow.ends import End
from forebay.flow.layout import Layout, LineSink, Sink
from forebay.flow.model import compile_layout
from forebay.flow.paths import Contour
from forebay.flow.stagnation.result import StagnationSearch
from forebay.flow.stagnation.search import search_model
from forebay.flow.stress_state import StressState
from forebay.flow.withdrawal.analysis import withdraw
from forebay.flow.withdrawal.result import IntakeWithdrawal
from forebay.workflows.layout_stress import compute_layout_stress
from forebay.workflows.sample import FieldSamples, sample_field

NOWHERE = np.empty(0, dtype=np.complex128)
"""No points."""


@dataclass(frozen=True, slots=True)
class Questions:
    """What an assessment looks at beside intakes and stagnation points.

    transects : contours over which circulation and flux are wanted
    points : where the field and its stress are wanted, x + iy [m];  quantities : as in `sample_field`
    """

    transects: tuple[Contour, ...] = ()
    points: ComplexArray = field(default_factory=NOWHERE.copy)
    quantities: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Assessment:
    """Everything about one site.

    intakes : where each intake's water comes from;  stagnation : where the water stands still
    ends : the far field
    boundary_residual : largest velocity through a pier's wall over the reference speed [-]
    transects, samples, stress : answers to the questions asked, empty or None if there were none
    """

    intakes: tuple[IntakeWithdrawal, ...]
    stagnation: StagnationSearch
    ends: tuple[End, ...]
    boundary_residual: float
    transects: tuple[ContourIntegral, ...]
    samples: FieldSamples | None
    stress: tuple[StressState, ...]


def assess_layout(layout: Layout, questions: Questions | None = None) -> Assessment:
    """Withdrawal, stagnation points, far field, and fluxes, field and stress where asked for.

    Parameters
    ----------
    layout : the site
    questions : transects and points; default: none

    Returns
    -------
    Assessment; the stagnation search serves the withdrawal too, so that both rest on the same points.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    WaterRangeError : its water is outside the range in which viscosity is known, if points are given
    """
    questions = questions or Questions()
    model = compile_layout(layout)
    search = search_model(model, None)
    names = tuple(element.name for element in layout.elements if isinstance(element, Sink | LineSink))
    has_points = questions.points.size > 0
    return Assessment(
        intakes=withdraw(model, search, names) if names else (),
        stagnation=search,
        ends=model.ends,
        boundary_residual=model.boundary_residual,
        transects=tuple(integrate_contour(model, transect) for transect in questions.transects),
        samples=sample_field(layout, questions.points, questions.quantities) if has_points else None,
        stress=compute_layout_stress(layout.water, layout, questions.points) if has_points else (),
    )

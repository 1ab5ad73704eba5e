"""Assess a layout: everything that is asked of one site, in one answer."""

from dataclasses import dataclass, field
from functools import partial

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.contour import ContourIntegral, integrate_contour
from forebay.flow.ends import End
from forebay.flow.layout import Layout, LineSink, Sink
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.paths import Contour
from forebay.flow.stagnation.result import StagnationSearch
from forebay.flow.stagnation.search import search_model
from forebay.flow.withdrawal.analysis import withdraw
from forebay.flow.withdrawal.result import IntakeWithdrawal, OriginKind
from forebay.workflows.parts import Part, attempt
from forebay.workflows.sample import FieldSamples, sample_field

NOWHERE = np.empty(0, dtype=np.complex128)
"""No points."""

NO_INTAKE = "The layout has no intake"
NO_TRANSECTS = "The request has no `transects`"
NO_POINTS = "The request has no `at`"


@dataclass(frozen=True, slots=True)
class Questions:
    """What an assessment looks at beside intakes and stagnation points.

    transects : contours over which circulation and flux are wanted
    points : where the field is wanted, x + iy [m];  quantities : as in `sample_field`
    """

    transects: tuple[Contour, ...] = ()
    points: ComplexArray = field(default_factory=NOWHERE.copy)
    quantities: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class FarField:
    """The flow far away, and how well it meets the walls.

    ends : far ends of the water
    boundary_residual : largest velocity through a pier's wall over the reference speed [-]
    wall_bound : error of psi that outlines and surveyed shores leave, over the flow through [-]; None without
    """

    ends: tuple[End, ...]
    boundary_residual: float
    wall_bound: float | None = None


@dataclass(frozen=True, slots=True)
class Recirculation:
    """Water of an outfall in an intake.

    share, share_error : part of the intake's water and its error [-];  discharge : the same as a flow [m3/s]
    """

    intake: str
    outfall: str
    share: float
    share_error: float
    discharge: float


@dataclass(frozen=True, slots=True)
class Assessment:
    """Everything about one site, part by part; a part that failed leaves the others as they are.

    flow : the far field;  stagnation : where the water stands still
    withdrawal : where each intake's water comes from;  recirculation : what of it outfalls gave
    transects, field : answers to the questions asked
    """

    flow: Part[FarField]
    stagnation: Part[StagnationSearch]
    withdrawal: Part[tuple[IntakeWithdrawal, ...]]
    recirculation: Part[tuple[Recirculation, ...]]
    transects: Part[tuple[ContourIntegral, ...]]
    field: Part[FieldSamples]


def assess_layout(layout: Layout, questions: Questions | None = None) -> Assessment:
    """Withdrawal, stagnation points, far field, and fluxes and field where asked for.

    Parameters
    ----------
    layout : the site
    questions : transects and points; default: none

    Returns
    -------
    Assessment; the stagnation search serves the withdrawal too, so that both rest on the same points.

    Raises
    ------
    LayoutError : the layout describes something that cannot be; whatever else goes wrong is the status of
        the part that it went wrong in
    """
    questions = questions or Questions()
    model = compile_layout(layout)
    search = attempt(partial(search_model, model, None))
    withdrawal = _withdrawal(model, search)
    return Assessment(
        flow=Part.of(FarField(model.ends, model.boundary_residual, _wall_bound(model))),
        stagnation=search,
        withdrawal=withdrawal,
        recirculation=_recirculation(withdrawal),
        transects=_transects(model, questions),
        field=_field(layout, questions),
    )


def _withdrawal(model: FlowModel, search: Part[StagnationSearch]) -> Part[tuple[IntakeWithdrawal, ...]]:
    elements = model.layout.elements
    names = tuple(element.name for element in elements if isinstance(element, Sink | LineSink))
    if not names:
        return Part.not_asked(NO_INTAKE)
    if search.answer is None:
        return Part(search.status, None, search.problem, search.reason)
    return attempt(partial(withdraw, model, search.answer, names))


def _recirculation(withdrawal: Part[tuple[IntakeWithdrawal, ...]]) -> Part[tuple[Recirculation, ...]]:
    if withdrawal.answer is None:
        return Part(withdrawal.status, None, withdrawal.problem, withdrawal.reason)
    return Part.of(
        tuple(
            Recirculation(
                intake.name, share.origin, share.share, intake.share_error, share.share * intake.arriving
            )
            for intake in withdrawal.answer
            for share in intake.shares
            if share.kind is OriginKind.OUTFALL
        )
    )


def _transects(model: FlowModel, questions: Questions) -> Part[tuple[ContourIntegral, ...]]:
    if not questions.transects:
        return Part.not_asked(NO_TRANSECTS)
    return attempt(lambda: tuple(integrate_contour(model, transect) for transect in questions.transects))


def _field(layout: Layout, questions: Questions) -> Part[FieldSamples]:
    if questions.points.size == 0:
        return Part.not_asked(NO_POINTS)
    return attempt(partial(sample_field, layout, questions.points, questions.quantities))


def _wall_bound(model: FlowModel) -> float | None:
    """Bound of psi over the flow through [-], None where no wall had to be solved."""
    return None if model.bound is None else model.bound.relative

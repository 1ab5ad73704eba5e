"""Method: what was done, by which formula, after which source; only what this assessment has used."""

from collections.abc import Callable, Iterable, Mapping
from typing import Any, NamedTuple

from forebay.api.calculation_sheet.markup import Html, element, section
from forebay.api.schemas.assessment import AssessmentRequest
from forebay.trade.water import SOURCES

Json = Mapping[str, Any]


class Step(NamedTuple):
    """One step of the method.

    title, text : in words;  formula : as it is computed;  source : where it stands
    applies : whether an assessment of this request, with this result, has used it
    """

    title: str
    text: str
    formula: Html
    source: str
    applies: Callable[[AssessmentRequest, Json], bool]


def always(_request: AssessmentRequest, _result: Json) -> bool:
    """A step of every assessment."""
    return True


def has_kind(*kinds: str) -> Callable[[AssessmentRequest, Json], bool]:
    """A step for layouts with an element or a structure of one of these kinds."""

    def applies(request: AssessmentRequest, _result: Json) -> bool:
        things = (*request.layout.elements, *request.layout.structures)
        return any(thing.kind in kinds for thing in things)

    return applies


def has_answer(part: str) -> Callable[[AssessmentRequest, Json], bool]:
    """A step for results in which a part has an answer."""

    def applies(_request: AssessmentRequest, result: Json) -> bool:
        return bool(result[part])

    return applies


def has_bank(request: AssessmentRequest, _result: Json) -> bool:
    """A step for layouts with banks that a map makes straight."""
    return request.layout.shore.kind not in {"open-water", "surveyed"}


def has_solved_walls(request: AssessmentRequest, result: Json) -> bool:
    """A step for layouts with walls that have to be solved for."""
    return request.layout.shore.kind == "surveyed" or has_kind("outline")(request, result)


STEPS: tuple[Step, ...] = (
    Step(
        "Flow",
        "Depth-mean, steady, irrotational flow in plan: the current and every element are superposed. A "
        "discharge Q over the depth h is a source of strength q = Q/h; circulation Γ is anticlockwise "
        "positive.",
        Html(
            "<i>W</i>(<i>z</i>) = <i>u</i> − i<i>v</i> = d<i>F</i>/d<i>z</i> = "
            "<i>W</i><sub>current</sub>(<i>z</i>) + Σ<sub>k</sub> (<i>q<sub>k</sub></i> − iΓ<sub>k</sub>) / "
            "[2π (<i>z</i> − <i>z<sub>k</sub></i>)], &emsp;<i>F</i> = φ + iψ"
        ),
        "Milne-Thomson, Theoretical Hydrodynamics, 5th ed. 1968, chapter VIII; Batchelor, An Introduction "
        "to Fluid Dynamics, 1967, section 6.6",
        always,
    ),
    Step(
        "Line elements",
        "A screen bay or a diffuser from a to b of length L draws or gives evenly along its length.",
        Html(
            "<i>W</i>(<i>z</i>) = <i>q</i> / (2π<i>L</i>) · e<sup>−iθ</sup> · "
            "ln[(<i>z</i> − <i>a</i>) / (<i>z</i> − <i>b</i>)], &emsp;θ = arg(<i>b</i> − <i>a</i>)"
        ),
        "integral of the point source along the line",
        has_kind("line-source", "line-sink"),
    ),
    Step(
        "Doublets",
        "Source and sink at one place, with the moment M from the sink to the source.",
        Html("<i>F</i>(<i>z</i>) = −<i>M</i> / [2π (<i>z</i> − <i>z</i><sub>0</sub>)]"),
        "Milne-Thomson 1968, chapter VIII",
        has_kind("doublet"),
    ),
    Step(
        "Banks",
        "Banks are walls without friction. A conformal map τ(z) makes them straight; there each element "
        "has mirror images, so that no water crosses a bank.",
        Html(
            "<i>W</i><sub><i>z</i></sub> = <i>W</i><sub>τ</sub> · dτ/d<i>z</i>, &emsp;"
            "Im(<i>W</i> e<sup>iβ</sup>) = 0 on a bank with direction β"
        ),
        "Milne-Thomson 1968, chapters VIII and X",
        has_bank,
    ),
    Step(
        "Piers",
        "Images by the circle theorem, and multipoles at the centres against what banks and other piers "
        "send back; the velocity left through the walls is stated with the far field.",
        Html(
            "<i>F</i>(<i>z</i>) = <i>f</i>(<i>z</i>) + <i>f̄</i>(<i>a</i>²/<i>z</i>) about one pier of "
            "radius <i>a</i>"
        ),
        "Milne-Thomson, Hydrodynamical images, Proc. Cambridge Phil. Soc. 36, 1940, 246-247",
        has_kind("pier"),
    ),
    Step(
        "Outlines and surveyed shores",
        "Their walls are sheets over straight elements, whose density μ is solved for so that the stream "
        "function is constant along each wall and, where asked for, the potential along an open edge; "
        "elements are split until the flow obeys. Check: the walls are looked at again, at twelve points of "
        "every element between those at which they were made to hold. The error of ψ is harmonic, so that "
        "nowhere in the water is it larger than what is left along the walls, with what each island and the "
        "open edges may add: the bound stated.",
        Html(
            "<i>F</i>(<i>z</i>) = <i>f</i>(<i>z</i>) + (1/2πi) ∫<sub>walls</sub> μ(<i>t</i>) d<i>t</i> / "
            "(<i>t</i> − <i>z</i>), &emsp;|ψ − ψ<sub>exact</sub>| ≤ max<sub>walls</sub> |residual of ψ| + "
            "max<sub>islands</sub> |<i>d<sub>k</sub></i>| + edges"
        ),
        "Muskhelishvili, Singular Integral Equations, 1953 (Cauchy integrals); Kress, Linear Integral "
        "Equations, 3rd ed. 2014, chapters 6 and 13; maximum principle for harmonic functions",
        has_solved_walls,
    ),
    Step(
        "Stagnation points",
        "Zeros of the velocity, each enclosed in a disc that is proved to hold it; whether they are all is "
        "judged by an independent count: the degree of the rational velocity, or its turning along the "
        "edge of the water. A zero in the water weighs 2, one on a wall 1.",
        Html("<i>W</i>(<i>z</i>) = 0, &emsp;(1/2π) ∮ d arg <i>W</i> = zeros − poles"),
        "argument principle; Kantorovich and Akilov, Functional Analysis, 2nd ed. 1982, chapter XVIII",
        has_answer("stagnation"),
    ),
    Step(
        "Origin of water, recirculation",
        "The streamlines that end at stagnation points divide the water of an intake into parts of one "
        "origin each. A part is the difference of the stream function between its two dividing "
        "streamlines, not a count of streamlines. The strip far upstream has the width at which the "
        "current carries the same flow.",
        Html("share = (ψ<sub>2</sub> − ψ<sub>1</sub>) / <i>q</i>, &emsp;width = share · <i>q</i> / <i>U</i>"),
        "Batchelor 1967, section 2.2 (stream function); Bear, Hydraulics of Groundwater, 1979, chapter 8 "
        "(divides)",
        has_answer("withdrawal"),
    ),
    Step(
        "Fluxes over transects",
        "Exact differences of the potential along the transect; beside them, as a second way, a numerical "
        "integral of the velocity with its error.",
        Html(
            "flux = Im ∫<sub>A</sub><sup>B</sup> <i>W</i> d<i>z</i> = ψ(<i>B</i>) − ψ(<i>A</i>), &emsp;"
            "circulation = Re ∫<sub>A</sub><sup>B</sup> <i>W</i> d<i>z</i>"
        ),
        "Piessens and others, QUADPACK, 1983, section 2.2",
        has_answer("transects"),
    ),
    Step(
        "Stress, dissipation and G",
        "From the exact velocity gradient, for water at the temperature and salinity given, with Stokes' "
        "hypothesis; of the mean flow alone. Viscosity: "
        + SOURCES["dynamic_viscosity"]
        + ". Density: "
        + SOURCES["density"]
        + ".",
        Html(
            "<b>D</b> = ½ (∇<b>u</b> + ∇<b>u</b><sup>T</sup>), &emsp;<b>τ</b> = 2μ<b>D</b> − ⅔ μ (tr "
            "<b>D</b>) <b>I</b>, "
            "&emsp;Φ = <b>τ</b> : <b>D</b>, &emsp;<i>G</i> = √(Φ/μ)"
        ),
        "Batchelor 1967, section 3.3; Camp and Stein, J. Boston Soc. Civ. Eng. 30, 1943, 203-221",
        has_answer("stress"),
    ),
    Step(
        "Spills",
        "Released water is followed along the streamlines of the mean flow. Shares change only across "
        "dividing streamlines; times are integrals along streamlines, splines between them, with the error "
        "stated.",
        Html("<i>t</i> = ∫ d<i>s</i> / |<i>W</i>| along a streamline, &emsp;ψ constant"),
        "Dormand and Prince, J. Comp. Appl. Math. 6, 1980, 19-26 (integration); Bear 1979, chapter 8 (times)",
        has_answer("spill"),
    ),
    Step(
        "Screens",
        "Approach velocity is normal to the face, through the effective area; sweeping velocity is along "
        "it. Parts of the face that meet a limit end at roots of the profile, not at samples.",
        Html(
            "<i>V</i><sub>a</sub> = |Im(<i>W</i> e<sup>iβ</sup>)| · gross / effective area, &emsp;"
            "<i>V</i><sub>s</sub> = Re(<i>W</i> e<sup>iβ</sup>), &emsp;"
            "exposure = ∫ d<i>s</i> / <i>V</i><sub>s</sub>, &emsp;"
            "through slots = <i>Q</i> / open area"
        ),
        "definitions of the criteria named in the verdicts",
        has_answer("screen"),
    ),
    Step(
        "Submergence",
        "Each rule is evaluated as it is published, down to its own datum, and held against what is there. "
        "The circulation is that of the approach flow round the inlet.",
        Html(
            "<i>Fr</i> = <i>V</i> / √(<i>gD</i>), &emsp;<i>Re</i> = <i>VD</i>/ν, &emsp;"
            "<i>We</i> = ρ<i>V</i>²<i>D</i>/σ, &emsp;<i>N</i><sub>Γ</sub> = Γ<i>S</i>/<i>Q</i>"
        ),
        "the rules named in the verdicts; Burgers, Adv. Appl. Mech. 1, 1948, 171-199 (vortex)",
        has_answer("submergence"),
    ),
)
"""Every step that an assessment can have, in the order in which they are told."""


def method_section(request: AssessmentRequest, result: Json) -> Html:
    """The steps that this assessment has used."""
    return section("Method", *steps_written(step for step in STEPS if step.applies(request, result)))


def steps_written(steps: Iterable[Step]) -> list[Html]:
    """Each step with its formula and its source."""
    return [
        element(
            "div",
            element("h3", step.title),
            element("p", step.text),
            element("p", step.formula, class_="formula"),
            element("p", f"Source: {step.source}.", class_="source"),
            class_="step",
        )
        for step in steps
    ]

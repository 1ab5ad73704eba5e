"""Verdicts of an assessment: every rule that was applied to it, with its outcome."""

from collections.abc import Mapping
from typing import Any

from forebay.api.units import UnitSystem
from forebay.flow.layout import Layout
from forebay.flow.stagnation.result import StagnationSearch
from forebay.flow.withdrawal.result import IntakeWithdrawal, WithdrawalStatus
from forebay.trade.applicability.solved_walls import WIDE
from forebay.workflows.assessment import Assessment

Verdict = dict[str, Any]

OWN = "forebay"
"""Criterion of the rules by which this service judges its own numbers."""

OWN_SOURCE = "own check of the numbers"

CERTAIN_SHARE = 1e-2
"""Error of a share up to which the service calls it certain [-]: one part in a hundred of an intake's water,
less than turbulence and an uneven bed change (convention of this service)."""

TIGHT_WALL = 1e-6
"""Velocity through a wall, over the reference speed, up to which the service calls it tight [-]."""


def verdicts_of(assessment: Assessment, layout: Layout) -> list[Verdict]:
    """Every verdict, in the order of the parts; walls of piers are judged where there are piers."""
    flow, search, withdrawal = (
        assessment.flow.answer,
        assessment.stagnation.answer,
        assessment.withdrawal.answer,
    )
    verdicts = [wall_verdict(flow.boundary_residual)] if flow is not None and layout.piers else []
    if flow is not None and flow.wall_bound is not None:
        verdicts.append(solved_wall_verdict(flow.wall_bound))
    verdicts += [] if search is None else [completeness_verdict(search)]
    return [*verdicts, *(share_verdict(intake) for intake in withdrawal or ())]


def rule_verdicts(result: Mapping[str, Any], units: UnitSystem) -> list[Verdict]:
    """Verdicts of the rules of screens and submergence, from the answers of these parts."""
    screens = (result["screen"] or {}).get("screens", ())
    inlets = (result["submergence"] or {}).get("inlets", ())
    return [
        *(screen_verdict(screen["element"], verdict) for screen in screens for verdict in screen["verdicts"]),
        *(submergence_verdict(inlet["name"], rule, units) for inlet in inlets for rule in inlet["rules"]),
    ]


def submergence_verdict(inlet: str, rule: Mapping[str, Any], units: UnitSystem) -> Verdict:
    """What one rule says of one inlet: its value is the submergence there is, its limit the one required."""
    names = {"value": "available", "limit": "required", "margin": "margin"}
    numbers = {name: rule[member] for name, member in names.items()}
    return {
        "part": "submergence",
        "subject": inlet,
        "criterion": str(rule["rule"]),
        "rule": f"least submergence down to the {rule['datum']}",
        **{name: None if value is None else units.write(value, "m") for name, value in numbers.items()},
        "unit": units.code("m"),
        "pass": rule["pass"],
        "note": "; ".join(part for part in (rule["reason"], rule["note"]) if part),
        "source": rule["source"],
    }


def screen_verdict(screen: str, verdict: Mapping[str, Any]) -> Verdict:
    """What one limit says of one screen."""
    from_memory = "limit from memory" if verdict["confidence"] == "from-memory" else ""
    kept = {
        name: verdict[name] for name in ("criterion", "value", "limit", "margin", "unit", "pass", "source")
    }
    note = "; ".join(part for part in (verdict["reason"], from_memory) if part)
    return {
        "part": "screen",
        "subject": screen,
        "rule": str(verdict["rule"]).replace("_", " ").replace("-", " "),
        **kept,
        "note": note,
    }


def wall_verdict(residual: float) -> Verdict:
    """Whether no water passes the walls of piers."""
    return _of_the_solution(
        "walls of piers", "velocity through them, over the reference speed", most(residual, TIGHT_WALL, "1")
    )


def solved_wall_verdict(bound: float) -> Verdict:
    """Whether outlines and surveyed shores are solved well enough."""
    rule = "bound of the stream function's error, over the flow through"
    return _of_the_solution("outlines and surveyed shores", rule, most(bound, WIDE, "1"))


def _of_the_solution(subject: str, rule: str, judged: Verdict) -> Verdict:
    return {
        "part": "flow",
        "subject": subject,
        "criterion": OWN,
        "rule": rule,
        **judged,
        "note": "",
        "source": OWN_SOURCE,
    }


def completeness_verdict(search: StagnationSearch) -> Verdict:
    """Whether every stagnation point was found."""
    return {
        "part": "stagnation",
        "subject": "stagnation points",
        "criterion": OWN,
        "rule": "found, weighted, equal to the independent count",
        "value": float(search.weight),
        "limit": float(search.degree),
        "margin": None,
        "unit": "1",
        "pass": search.complete,
        "note": "",
        "source": OWN_SOURCE,
    }


def share_verdict(intake: IntakeWithdrawal) -> Verdict:
    """Whether the origins of an intake's water are certain."""
    verdict = {
        "part": "withdrawal",
        "subject": intake.name,
        "criterion": OWN,
        "rule": "error of the shares of its water",
        **most(intake.share_error, CERTAIN_SHARE, "1"),
        "note": "",
        "source": OWN_SOURCE,
    }
    doubtful = intake.status in {WithdrawalStatus.INCOMPLETE, WithdrawalStatus.UNRESOLVED}
    return verdict | {"pass": False} if doubtful else verdict


def most(value: float, limit: float, unit: str) -> Verdict:
    """Outcome of a rule that puts an upper limit on a value; NaN does not meet it."""
    return {
        "value": value,
        "limit": limit,
        "margin": limit - value,
        "unit": unit,
        "pass": bool(value <= limit),
    }

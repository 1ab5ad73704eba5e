"""The summary of an assessment: what an engineer wants to know, in ten lines at most."""

from collections.abc import Sequence
from typing import Any, NamedTuple

from forebay.api.figures import counted, percent, quantity, share_with_error
from forebay.api.units import UnitSystem
from forebay.api.warnings import Notice
from forebay.flow.layout import Layout, LineSink, LineSource, Sink, Source
from forebay.flow.withdrawal.result import IntakeWithdrawal
from forebay.trade.applicability.warning import Severity
from forebay.workflows.assessment import Assessment
from forebay.workflows.parts import PartStatus

MOST_LINES = 10

MOST_INTAKES = 3
"""Intakes that have a line of their own."""

MOST_ORIGINS = 3
"""Origins of an intake's water that its line names."""

NAMES = {
    Severity.UNSAFE_TO_USE: ("UNSAFE TO USE", "UNSAFE TO USE"),
    Severity.CAUTION: ("caution", "cautions"),
    Severity.NOTE: ("note", "notes"),
}
"""Severities in words, the gravest first."""

CAUTION = (
    "Screening level, not for the safety of divers, swimmers or craft; regulators' criteria and licensed "
    "engineers decide."
)


class Told(NamedTuple):
    """What a summary is made of."""

    layout: Layout
    assessment: Assessment
    parts: Sequence[dict[str, Any]]
    verdicts: Sequence[dict[str, Any]]
    notices: Sequence[Notice]
    units: UnitSystem

    def write(self, value: float, unit: str) -> str:
        """Quantity in the client's units."""
        return quantity(self.units.write(value, unit), self.units.code(unit))


def summary_of(told: Told) -> list[str]:
    """At most ten lines, the caution last."""
    lines = [
        site_line(told),
        *intake_lines(told),
        *stagnation_lines(told),
        *failure_lines(told),
        verdict_line(told.verdicts),
        warning_line(told.notices),
    ]
    return [*lines[: MOST_LINES - 1], CAUTION]


def site_line(told: Told) -> str:
    """Depth, current, and what is drawn and given."""
    layout = told.layout
    drawn = [element.discharge for element in layout.elements if isinstance(element, Sink | LineSink)]
    given = [element.discharge for element in layout.elements if isinstance(element, Source | LineSource)]
    current = told.write(abs(layout.ambient.velocity), "m/s")
    depth = told.write(layout.depth, "m")
    parts = [f"Mean depth {depth}, current far upstream {current}"]
    parts += [f"{counted(len(drawn), 'intake')} drawing {told.write(sum(drawn), 'm3/s')}"] if drawn else []
    parts += [f"{counted(len(given), 'outfall')} giving {told.write(sum(given), 'm3/s')}"] if given else []
    return "; ".join(parts) + "."


def intake_lines(told: Told) -> list[str]:
    """One line for each of a few intakes, those that recirculate most first; one for the rest."""
    intakes = told.assessment.withdrawal.answer or ()
    ranked = sorted(intakes, key=lambda intake: -intake.recirculation_share)
    lines = [intake_line(intake, told) for intake in ranked[:MOST_INTAKES]]
    rest = ranked[MOST_INTAKES:]
    if rest:
        largest = percent(rest[0].recirculation_share)
        lines.append(
            f"{counted(len(rest), 'further intake')}: each takes back at most {largest} % from outfalls."
        )
    return lines


def intake_line(intake: IntakeWithdrawal, told: Told) -> str:
    """Width of its strip, and the origins of its water."""
    width = intake.width_far_upstream
    strip = f"takes a strip {told.write(width, 'm')} wide far upstream; " if width == width else ""  # noqa: PLR0124
    named = [f"{percent(share.share)} % from {share.origin}" for share in intake.shares[:MOST_ORIGINS]]
    rest = sum(share.share for share in intake.shares[MOST_ORIGINS:])
    named += [f"{percent(rest)} % from elsewhere"] if rest else []
    back = share_with_error(intake.recirculation_share, intake.share_error)
    draws = told.write(intake.discharge, "m3/s")
    origins = ", ".join(named) or "no origin resolved"
    return f"{intake.name} ({draws}): {strip}{origins}; recirculation {back} %; {intake.status}."


def stagnation_lines(told: Told) -> list[str]:
    """How many stagnation points there are, and whether that is all."""
    search = told.assessment.stagnation.answer
    if search is None:
        return []
    closed = "an independent count shows that these are all" if search.complete else "there MAY BE MORE"
    return [f"{counted(search.found_count, 'stagnation point')} found; {closed}."]


def failure_lines(told: Told) -> list[str]:
    """Parts that failed, with the first reason."""
    failed = [part for part in told.parts if part["status"] == PartStatus.FAILED]
    if not failed:
        return []
    names = ", ".join(str(part["part"]) for part in failed)
    return [f"NOT COMPUTED: {names} ({failed[0]['reason']})."]


def verdict_line(verdicts: Sequence[dict[str, Any]]) -> str:
    """How many rules are met, and which are not."""
    missed = [verdict for verdict in verdicts if verdict["pass"] is False]
    text = f"{counted(len(verdicts), 'rule')} applied, {len(missed)} not met"
    if not missed:
        return f"{text}."
    return f"{text}: " + "; ".join(f"{verdict['subject']}, {verdict['rule']}" for verdict in missed[:3]) + "."


def warning_line(notices: Sequence[Notice]) -> str:
    """How many warnings of each severity, and which of the graver ones."""
    counts = {kind: sum(notice.severity == kind for notice in notices) for kind in NAMES}
    grave = dict.fromkeys(notice.code for notice in notices if notice.severity != Severity.NOTE)
    named = f": {', '.join(grave)}" if grave else ""
    told = ", ".join(counted(count, *NAMES[kind]) for kind, count in counts.items() if count) or "none"
    return f"Warnings: {told}{named}."

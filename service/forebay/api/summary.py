"""The summary of an assessment: what an engineer wants to know, in ten lines at most."""

import math
from collections.abc import Mapping, Sequence
from typing import Any, NamedTuple

from forebay.api.figures import counted, duration, percent, quantity, share_with_error
from forebay.api.units import UnitSystem
from forebay.api.warnings import Notice
from forebay.flow.ends import ends_of
from forebay.flow.layout import Basin, DeadEnd, Layout, LineSink, LineSource, Sink, Source, Surveyed
from forebay.flow.withdrawal.result import IntakeWithdrawal
from forebay.trade.applicability.warning import Severity
from forebay.workflows.assessment import Assessment
from forebay.workflows.parts import PartStatus

Json = Mapping[str, Any]

MOST_LINES = 10

MOST_NAMED = 3
"""Things of one kind that a line names; the rest are counted."""

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
    """What a summary is made of; `result` holds the answers of the parts in SI."""

    layout: Layout
    assessment: Assessment
    result: Json
    notices: Sequence[Notice]
    units: UnitSystem

    def write(self, value: float | None, unit: str) -> str:
        """Quantity in the client's units."""
        known = value is not None and math.isfinite(value)
        return quantity(self.units.write(value, unit) if known else None, self.units.code(unit))  # type: ignore[arg-type]


def summary_of(told: Told, parts: Sequence[Json], verdicts: Sequence[Json]) -> list[str]:
    """At most ten lines, the caution last; intakes share the lines that the rest leaves."""
    after = [
        *spill_lines(told),
        *screen_lines(told, verdicts),
        *submergence_lines(told, verdicts),
        *failure_lines(parts),
        verdict_line(verdicts),
        warning_line(told.notices),
        CAUTION,
    ]
    room = MOST_LINES - 1 - len(after)
    return [site_line(told), *intake_lines(told, room), *after]


def site_line(told: Told) -> str:
    """Depth, current, what is drawn and given, and where the water stands still."""
    layout = told.layout
    drawn = [element.discharge for element in layout.elements if isinstance(element, Sink | LineSink)]
    given = [element.discharge for element in layout.elements if isinstance(element, Source | LineSource)]
    parts = [f"Mean depth {told.write(layout.depth, 'm')}, {current_text(told)}"]
    parts += [f"{counted(len(drawn), 'intake')} drawing {told.write(sum(drawn), 'm3/s')}"] if drawn else []
    parts += [f"{counted(len(given), 'outfall')} giving {told.write(sum(given), 'm3/s')}"] if given else []
    return "; ".join([*parts, *stagnation_words(told)]) + "."


def current_text(told: Told) -> str:
    """The current far upstream, or through an end of water that has ends of its own instead."""
    if not isinstance(told.layout.shore, Surveyed | DeadEnd | Basin):
        return f"current far upstream {told.write(abs(told.layout.ambient.velocity), 'm/s')}"
    speeds = [end.speed for end in ends_of(told.layout)]
    return f"current through open ends up to {told.write(max(speeds), 'm/s')}" if speeds else "no open end"


def intake_lines(told: Told, room: int) -> list[str]:
    """One line for each of as many intakes as there is room for, those that recirculate most first."""
    intakes = told.assessment.withdrawal.answer or ()
    ranked = sorted(intakes, key=lambda intake: -known_or(intake.recirculation_share, math.inf))
    if len(ranked) <= room:
        return [intake_line(intake, told) for intake in ranked]
    own = max(room - 1, 0)
    lines = [intake_line(intake, told) for intake in ranked[:own]]
    rest = ranked[own:]
    largest = percent(rest[0].recirculation_share)
    named = "further intake" if own else "intake"
    return [
        *lines,
        f"{counted(len(rest), named)}: at most {largest} % taken back from outfalls ({rest[0].name}).",
    ]


def known_or(value: float, otherwise: float) -> float:
    """The value, or something else where it is nan."""
    return otherwise if math.isnan(value) else value


def intake_line(intake: IntakeWithdrawal, told: Told) -> str:
    """Width of its strip, and the origins of its water."""
    width = intake.width_far_upstream
    strip = "" if math.isnan(width) else f"takes a strip {told.write(width, 'm')} wide far upstream; "
    named = [f"{percent(share.share)} % from {share.origin}" for share in intake.shares[:MOST_NAMED]]
    rest = sum(share.share for share in intake.shares[MOST_NAMED:])
    named += [f"{percent(rest)} % from elsewhere"] if rest else []
    back = share_with_error(intake.recirculation_share, intake.share_error)
    draws = told.write(intake.discharge, "m3/s")
    origins = ", ".join(named) or "no origin resolved"
    return f"{intake.name} ({draws}): {strip}{origins}; recirculation {back} %; {intake.status}."


def stagnation_words(told: Told) -> list[str]:
    """How many stagnation points there are, and whether that is all."""
    search = told.assessment.stagnation.answer
    if search is None:
        return []
    closed = "shown to be all" if search.complete else "there MAY BE MORE"
    return [f"{counted(search.found_count, 'stagnation point')}, {closed}"]


def line_about(title: str, noun: str, texts: Sequence[str]) -> list[str]:
    """One line with what is told of the first things of a kind, the rest counted; none without any."""
    if not texts:
        return []
    rest = len(texts) - MOST_NAMED
    more = f"; {counted(rest, f'further {noun}')}" if rest > 0 else ""
    return [f"{title}: {'; '.join(texts[:MOST_NAMED])}{more}."]


def spill_lines(told: Told) -> list[str]:
    """What reaches intakes of each of the first releases, and when."""
    releases = (told.result["spill"] or {}).get("releases", ())
    return line_about("Spills", "release", [release_text(release) for release in releases])


def release_text(release: Json) -> str:
    """Shares of one release with their first arrivals."""
    reached = [
        f"{percent(arrival['share'])} % to {arrival['intake']} from {duration(arrival['first_time'])} on"
        for arrival in release["arrivals"]
    ]
    return f"{release['name']}: {', '.join(reached) or 'reaches no intake'}"


def screen_lines(told: Told, verdicts: Sequence[Json]) -> list[str]:
    """Largest approach velocity of each of the first screens, and the limits it meets."""
    texts = [
        f"{screen['element']} approach at most {told.write(screen['max_approach'], 'm/s')}, "
        f"{met_text(screen['element'], 'screen', verdicts)}"
        for screen in (told.result["screen"] or {}).get("screens", ())
    ]
    return line_about("Screens", "screen", texts)


def submergence_lines(told: Told, verdicts: Sequence[Json]) -> list[str]:
    """Submergence of each of the first inlets, and the rules that it meets."""
    texts = [
        f"{inlet['name']} {told.write(inlet['submergence'], 'm')} deep, "
        f"{met_text(inlet['name'], 'submergence', verdicts)}"
        for inlet in (told.result["submergence"] or {}).get("inlets", ())
    ]
    return line_about("Submergence", "inlet", texts)


def met_text(subject: str, part: str, verdicts: Sequence[Json]) -> str:
    """How many limits something meets."""
    own = [verdict for verdict in verdicts if (verdict["part"], verdict["subject"]) == (part, subject)]
    if not own:
        return "no rule applied"
    met = sum(verdict["pass"] is True for verdict in own)
    return f"{met} of {counted(len(own), 'rule')} met"


def failure_lines(parts: Sequence[Json]) -> list[str]:
    """Parts that failed, with the first reason."""
    failed = [part for part in parts if part["status"] == PartStatus.FAILED]
    if not failed:
        return []
    names = ", ".join(str(part["part"]) for part in failed)
    return [f"NOT COMPUTED: {names} ({failed[0]['reason']})."]


def verdict_line(verdicts: Sequence[Json]) -> str:
    """How many rules are met, and which are not."""
    missed = [verdict for verdict in verdicts if verdict["pass"] is False]
    open_ones = sum(verdict["pass"] is None for verdict in verdicts)
    unjudged = f", {open_ones} not judged" if open_ones else ""
    text = f"{counted(len(verdicts), 'rule')} applied, {len(missed)} not met{unjudged}"
    if not missed:
        return f"{text}."
    named = [
        f"{verdict['subject']}, {verdict['rule']} ({verdict['criterion']})" for verdict in missed[:MOST_NAMED]
    ]
    more = f" and {len(missed) - MOST_NAMED} more" if len(missed) > MOST_NAMED else ""
    return f"{text}: {'; '.join(named)}{more}."


def warning_line(notices: Sequence[Notice]) -> str:
    """How many warnings of each severity, and which of the graver ones."""
    counts = {kind: sum(notice.severity == kind for notice in notices) for kind in NAMES}
    grave = dict.fromkeys(notice.code for notice in notices if notice.severity != Severity.NOTE)
    named = f": {', '.join(grave)}" if grave else ""
    told = ", ".join(counted(count, *NAMES[kind]) for kind, count in counts.items() if count) or "none"
    return f"Warnings: {told}{named}."

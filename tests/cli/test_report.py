"""The engineer's table says what the answer says: every number, unit, status and caution."""

import copy
import re
from typing import Any

import pytest

from forebay.report import (
    MOST_POINTS,
    engineers_table,
    number,
    percent,
    table,
    warning_lines,
    warnings_section,
)

REQUEST: dict[str, Any] = {
    "layout": {
        "depth": 4.0,
        "shore": {"kind": "channel", "point": [0, 0], "along": [1, 0], "width": 110},
        "elements": [
            {"kind": "sink", "name": "town intake", "at": [190, 40], "discharge": 1.4},
            {"kind": "source", "name": "works", "at": [0, 40], "discharge": 0.5},
        ],
        "structures": [{"kind": "pier", "name": "P1", "at": [120, 37], "radius": 1.6}],
    }
}
ANSWER: dict[str, Any] = {
    "result": {
        "withdrawal": {
            "intakes": [
                {
                    "name": "town intake",
                    "discharge": 1.4,
                    "width_far_upstream": 5.25,
                    "shares": [
                        {"from": "upstream", "kind": "ambient", "share": 0.625},
                        {"from": "works", "kind": "source", "share": 0.375},
                    ],
                    "recirculation_share": 0.375,
                    "share_error": 2e-9,
                    "status": "ok",
                }
            ]
        },
        "stagnation": {
            "points": [{"x": 191.5, "y": 40.25, "kind": "saddle", "on": "water", "strain_rate": 0.0431}],
            "expected_count": 1,
            "found_count": 1,
            "complete": True,
            "method": "winding",
        },
        "transects": [
            {"name": "bridge", "length": 110.0, "discharge": 30.8, "circulation": 0.0, "status": "ok"}
        ],
        "ends": [
            {"name": "upstream", "inflow": 7.7, "end_speed": 0.07},
            {"name": "downstream", "inflow": -7.3, "end_speed": 0.06636},
        ],
        "field": {
            "x": [32.0, 190.0],
            "y": [2.0, 40.0],
            "u": [0.01, None],
            "v": [-0.12, None],
            "speed": [0.1204, None],
            "flagged": [{"index": 1, "status": "on-singularity"}],
        },
        "summary": ["Mean depth 4 m.", "Engineers decide."],
        "verdicts": [
            {
                "part": "stagnation",
                "subject": "stagnation points",
                "criterion": "own",
                "rule": "all found",
                "value": 1.0,
                "limit": 1.0,
                "margin": None,
                "unit": "1",
                "pass": True,
                "source": "own check",
            }
        ],
        "parts": [{"part": "flow", "status": "ok", "problem": None, "reason": None}],
        "cautions": ["Screening level.", "Engineers decide."],
    },
    "units": {
        "discharge": "m3/s",
        "width_far_upstream": "m",
        "x": "m",
        "y": "m",
        "u": "m/s",
        "strain_rate": "1/s",
        "inflow": "m2/s",
        "end_speed": "m/s",
    },
    "warnings": [
        {
            "code": "rigid-lid",
            "severity": "caution",
            "message": "The surface is not flat here.",
            "pointer": "#/layout",
            "value": 0.42,
            "limit": 0.3,
            "source": "Open-channel hydraulics",
        }
    ],
    "provenance": {"service": "forebay", "version": "0.1.0", "layout_digest": "sha256:0123456789abcdef0123"},
}


def changed(**result):
    answer = copy.deepcopy(ANSWER)
    answer["result"].update(result)
    return answer


def line_with(text, part):
    (line,) = [line for line in text.splitlines() if part in line]
    return line.split()


def test_names_the_site_and_the_maker():
    text = engineers_table(REQUEST, ANSWER)
    assert "forebay 0.1.0, layout sha256:0123456789ab" in text
    assert "channel, depth 4 m; 1 sink, 1 source, 1 pier" in text


def test_gives_each_share_its_row():
    text = engineers_table(REQUEST, ANSWER)
    assert (
        " ".join(line_with(text, "town intake ")) == "town intake 1.4 5.25 upstream 62.50 37.50 +- 2e-07 ok"
    )
    assert line_with(text, " works ") == ["works", "37.50"]


def test_gives_an_intake_without_shares_its_status():
    intake = {**ANSWER["result"]["withdrawal"]["intakes"][0], "shares": [], "status": "not-converged"}
    text = engineers_table(REQUEST, changed(withdrawal={"intakes": [intake]}))
    assert line_with(text, "town intake")[-2:] == ["-", "not-converged"]


def test_gives_stagnation_points_with_their_certificate():
    text = engineers_table(REQUEST, ANSWER)
    assert "STAGNATION POINTS: 1 found, complete (winding)" in text
    assert line_with(text, "saddle") == ["191.5", "40.25", "saddle", "water", "0.0431"]


def test_says_when_the_stagnation_search_is_not_complete():
    search = {**ANSWER["result"]["stagnation"], "complete": False}
    assert "NOT shown to be complete" in engineers_table(REQUEST, changed(stagnation=search))


def test_begins_with_the_summary():
    lines = engineers_table(REQUEST, ANSWER).splitlines()
    assert lines[lines.index("SUMMARY") + 1 :][:2] == ["  - Mean depth 4 m.", "  - Engineers decide."]


@pytest.mark.parametrize(
    ("passed", "word"),
    [(True, "met"), (False, "NOT MET"), (None, "not judged")],
    ids=["met", "missed", "open"],
)
def test_gives_verdicts_with_their_outcome(passed, word):
    verdict = {**ANSWER["result"]["verdicts"][0], "pass": passed}
    text = engineers_table(REQUEST, changed(verdicts=[verdict]))
    assert " ".join(line_with(text, "all found")) == f"stagnation points all found (own) 1 1 1 {word}"


def test_says_which_parts_failed_and_why():
    parts = [{"part": "stress", "status": "failed", "problem": "water-range", "reason": "Too hot."}]
    text = engineers_table(REQUEST, changed(parts=parts, stagnation=None, withdrawal=None))
    assert "NOT COMPUTED\n  - stress: Too hot. (water-range)" in text
    assert "STAGNATION" not in text


def test_gives_fluxes_with_their_sign_convention():
    text = engineers_table(REQUEST, ANSWER)
    assert "positive to the right" in text
    assert line_with(text, "bridge") == ["bridge", "110", "30.8", "0", "ok"]


def test_gives_warnings_with_value_threshold_and_source():
    text = " ".join(engineers_table(REQUEST, ANSWER).split())
    assert "caution: The surface is not flat here. [value 0.42, threshold 0.3]" in text
    assert "Source: Open-channel hydraulics. (rigid-lid)" in text


def test_leaves_out_the_threshold_of_a_warning_that_has_none():
    (line,) = warning_lines([{**ANSWER["warnings"][0], "value": None, "limit": None, "source": None}])
    assert line == "  - caution: The surface is not flat here. (rigid-lid)"


def test_says_that_there_are_no_warnings():
    assert "WARNINGS: none" in engineers_table(REQUEST, {**ANSWER, "warnings": []})


def test_ends_with_the_cautions():
    text = engineers_table(REQUEST, ANSWER)
    assert text.splitlines()[-3:] == ["CAUTIONS", "  - Screening level.", "  - Engineers decide."]


def test_gives_the_far_ends_with_their_sign():
    text = engineers_table(REQUEST, ANSWER)
    assert "positive into the water" in text
    assert line_with(text, "downstream") == ["downstream", "-7.3", "0.06636"]


def test_gives_velocities_and_says_where_there_is_none():
    text = engineers_table(REQUEST, ANSWER)
    assert line_with(text, "-0.12") == ["32", "2", "0.01", "-0.12", "0.1204"]
    assert line_with(text, "on-singularity") == ["190", "40", "-", "-", "-", "on-singularity"]


def test_says_nothing_of_a_field_that_was_not_asked_for():
    assert "VELOCITY" not in engineers_table(REQUEST, changed(field=None))


def test_shows_the_first_points_of_many():
    many = {name: [1.0] * (MOST_POINTS + 5) for name in ("x", "y", "u", "v", "speed")}
    assert "... and 5 more" in engineers_table(REQUEST, changed(field={**many, "flagged": []}))


def test_gravest_warnings_come_first_and_those_of_a_kind_together():
    given = [
        {**ANSWER["warnings"][0], "severity": "note", "code": "b", "pointer": "#/1"},
        {**ANSWER["warnings"][0], "severity": "note", "code": "b", "pointer": "#/2"},
        {**ANSWER["warnings"][0], "severity": "unsafe-to-use", "code": "a"},
    ]
    first, second = re.findall(r"- (\S+): ", "\n".join(warnings_section(given)))
    assert (first, second) == ("unsafe-to-use", "note")
    assert "Likewise at #/2. (b)" in " ".join("\n".join(warnings_section(given)).split())


def test_takes_units_from_the_answer():
    units = {**ANSWER["units"], "discharge": "ft3/s", "x": "ft"}
    text = engineers_table(REQUEST, {**ANSWER, "units": units})
    assert "discharge ft3/s" in text
    assert "x ft" in text


@pytest.mark.parametrize(
    ("value", "text"),
    [(None, "-"), (0.0, "0"), (0.07, "0.07"), (41.23456, "41.23"), (12345.6, "12346"), (1e-7, "1.000e-07")],
    ids=["none", "zero", "small", "usual", "large", "tiny"],
)
def test_numbers_are_readable(value, text):
    assert number(value) == text


def test_percent_of_nothing_is_a_dash():
    assert percent(None) == "-"


def test_table_aligns_columns():
    assert table(("name", "m"), [("a", "1.5"), ("longer", "10")], right={1}) == [
        "  name      m",
        "  ------  ---",
        "  a       1.5",
        "  longer   10",
    ]

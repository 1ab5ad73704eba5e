"""assessment: parts, summary, verdicts, and what they say of failures."""

import pytest

from support.http import a_layout

ROUTE = "/v1/assessment"
PAIR = [
    {"kind": "sink", "name": "intake", "at": [0, 0], "discharge": 2},
    {"kind": "source", "name": "outfall", "at": [3, 0], "discharge": 2},
]
BAY = {"kind": "line-sink", "name": "bay", "from": [0, 0], "to": [12, 0], "discharge": 2.2}
BANK = {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}
SCREEN = {"element": "bay", "height": 2.5, "open_fraction": 0.5, "cleaning": "active"}
PIPE = {
    "name": "pipe",
    "kind": "horizontal-pipe",
    "diameter": 0.9,
    "discharge": 1.0,
    "submergence": 1.6,
}


def assessed(client, **body):
    response = client.post(
        ROUTE, json={"layout": a_layout(ambient={"velocity": [0.1, 0]}, elements=PAIR)} | body
    )
    assert response.status_code == 200, response.text
    return response.json()


def parts(envelope):
    return {part["part"]: part for part in envelope["result"]["parts"]}


def test_every_part_has_a_status_and_a_member(ready_client):
    envelope = assessed(ready_client)
    result = envelope["result"]
    for name, part in parts(envelope).items():
        if name != "flow":  # its answer is `ends` and `boundary_residual`
            assert (result[name] is None) == (part["status"] != "ok")
        assert (part["reason"] is None) == (part["status"] == "ok")
    assert parts(envelope)["spill"]["reason"] == "The request has no `spill`"


def test_a_spill_that_cannot_be_fails_alone_and_points_at_itself(ready_client):
    envelope = assessed(ready_client, spill={"releases": [{"name": "none", "outfall": "no such outfall"}]})
    part = parts(envelope)["spill"]
    assert (part["status"], part["problem"]) == ("failed", "unknown-name")
    assert part["pointer"].startswith("#/spill/releases/0")
    assert envelope["result"]["withdrawal"]["intakes"][0]["status"] == "ok"
    assert any(line.startswith("NOT COMPUTED: spill") for line in envelope["result"]["summary"])


def test_water_without_known_viscosity_fails_the_stress_alone(ready_client):
    envelope = assessed(
        ready_client,
        layout=a_layout(elements=PAIR, water={"temperature": 80}),
        at={"points": [[10, 5]]},
    )
    assert parts(envelope)["stress"]["problem"] == "water-out-of-range"
    assert parts(envelope)["field"]["status"] == "ok"


def test_stress_brings_the_readings_asked_for(ready_client):
    asked = {"exposure": [], "friction": {"manning_n": 0.03}}
    envelope = assessed(ready_client, at={"points": [[10, 5]]}, stress=asked)
    assert envelope["result"]["stress"]["thresholds"]
    assert envelope["result"]["stress"]["states"][0]["bed_shear"] > 0
    assert parts(envelope)["stress"]["status"] == "ok"


def test_a_part_answers_what_its_route_answers(ready_client):
    layout = a_layout(ambient={"velocity": [0.1, 0]}, elements=PAIR)
    asked = {"releases": [{"name": "drum", "at": [-20, 0.5]}]}
    envelope = assessed(ready_client, spill=asked)
    alone = ready_client.post("/v1/spill/arrivals", json={"layout": layout} | asked).json()
    assert envelope["result"]["spill"] == alone["result"]


@pytest.mark.parametrize(("system", "length", "speed"), [("si", "m", "m/s"), ("us", "[ft_i]", "[ft_i]/s")])
def test_screens_and_inlets_bring_their_verdicts(ready_client, system, length, speed):
    envelope = assessed(
        ready_client,
        unit_system=system,
        layout=a_layout(shore=BANK, elements=[BAY], water={"temperature": 12 if system == "si" else 54}),
        screen={"screens": [SCREEN], "criteria": [{"name": "permit", "max_approach": 0.1}]},
        submergence={"inlets": [PIPE]},
    )
    verdicts = {(v["part"], v["criterion"]): v for v in envelope["result"]["verdicts"]}
    permit = verdicts["screen", "permit"]
    assert (permit["unit"], permit["limit"]) == (speed, 0.1)
    assert permit["pass"] == (permit["value"] <= 0.1)
    rules = envelope["result"]["submergence"]["inlets"][0]["rules"]
    for rule in rules:
        verdict = verdicts["submergence", rule["rule"]]
        assert (verdict["unit"], verdict["pass"]) == (length, rule["pass"])
        assert verdict["value"] == pytest.approx(rule["available"], rel=1e-8)  # nine digits are written
        assert verdict["limit"] == pytest.approx(rule["required"], rel=1e-8)


def test_a_name_with_two_units_is_told_apart(ready_client):
    units = assessed(ready_client, submergence={"inlets": [PIPE]})["units"]
    assert units["margin"] == "{unit}"
    assert units["submergence.margin"] == "m"


def test_warnings_of_parts_come_once_and_point_into_the_request(ready_client):
    envelope = assessed(
        ready_client,
        layout=a_layout(shore=BANK, elements=[BAY]),
        screen={"screens": [SCREEN], "criteria": [{"name": "permit", "max_approach": 0.1}]},
    )
    warnings = envelope["warnings"]
    assert len({str(warning) for warning in warnings}) == len(warnings)
    pointers = {warning["pointer"].split("/")[1] for warning in warnings if "/" in warning["pointer"]}
    assert pointers <= {"layout", "screen"}
    ranks = ["unsafe-to-use", "caution", "note"]
    order = [ranks.index(warning["severity"]) for warning in warnings]
    assert order == sorted(order)


def test_the_summary_has_ten_lines_at_most(ready_client):
    many = [
        {"kind": "sink", "name": f"intake {i}", "at": [10 * i, 7 * (i % 3)], "discharge": 0.5}
        for i in range(6)
    ]
    envelope = assessed(
        ready_client,
        layout=a_layout(elements=[*many, PAIR[1] | {"at": [3, 3]}]),
        spill={"releases": [{"name": "drum", "at": [-20, 0.5]}]},
        submergence={"inlets": [PIPE]},
    )
    lines = envelope["result"]["summary"]
    assert 5 < len(lines) <= 10
    assert "licensed engineers decide" in lines[-1]
    assert any("further intake" in line for line in lines)


DEAD_END = {"kind": "dead-end", "point": [0, -20], "along": [1, 0], "width": 40}
BASIN = {"kind": "basin", "corner": [0, -20], "along": [1, 0], "length": 60, "width": 40}


@pytest.mark.parametrize(
    ("shore", "given", "words"),
    [
        # 2 m3/s in 40 m by 4 m
        (DEAD_END, [], "current through open ends up to 0.0125 m/s"),
        (DEAD_END | {"kind": "channel"}, [], "current far upstream 0 m/s"),
        (BASIN, [{"kind": "source", "name": "outfall", "at": [30, 0], "discharge": 2.0}], "no open end"),
    ],
    ids=["dead-end", "channel", "basin"],
)
def test_the_summary_tells_the_current_where_the_water_has_one(ready_client, shore, given, words):
    intake = {"kind": "sink", "name": "intake", "at": [10, 0], "discharge": 2.0}
    layout = {"depth": 4.0, "shore": shore, "elements": [intake, *given]}
    assert words in assessed(ready_client, layout=layout)["result"]["summary"][0]


@pytest.mark.parametrize(("apart", "comes_back"), [(3.0, True), (4.0, False)])
def test_what_outfalls_give_back_is_told(ready_client, apart, comes_back):
    # between intake and outfall u = U - q/(2 pi) (1/x + 1/(d - x)), which has no zero, so that all of it runs
    # back, once 2 q / (pi U d) > 1: q/U = 0.5/0.1 m gives 1.06 at d = 3 m and 0.80 at 4 m
    outfall = PAIR[1] | {"at": [apart, 0]}
    layout = a_layout(ambient={"velocity": [0.1, 0]}, elements=[PAIR[0], outfall])
    shares = [entry["share"] for entry in assessed(ready_client, layout=layout)["result"]["recirculation"]]
    assert any(share > 1e-12 for share in shares) is comes_back  # rounding of a closed form

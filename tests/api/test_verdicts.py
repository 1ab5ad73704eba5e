"""What the service says of its own numbers: walls and shares, on and off solved walls."""

import pytest

from forebay.api.verdicts import OWN

OPEN = {
    "depth": 5.0,
    "ambient": {"velocity": [0.3, 0.0]},
    "elements": [{"kind": "sink", "name": "s", "at": [40, 20], "discharge": 3.0}],
}
MOLE = {"kind": "outline", "name": "mole", "points": [[0, 0], [6, 0], [6, 4], [0, 4]]}


def _own(client, layout):
    answer = client.post("/v1/assessment", json={"layout": layout})
    assert answer.status_code == 200
    return {v["subject"]: v for v in answer.json()["result"]["verdicts"] if v["criterion"] == OWN}


@pytest.mark.parametrize("tolerance", [1e-3, 1e-5])
def test_solved_walls_are_judged_by_their_bound(ready_client, tolerance):
    verdicts = _own(ready_client, OPEN | {"structures": [MOLE], "tolerance": tolerance})
    wall = verdicts["outlines and surveyed shores"]
    assert wall["pass"]
    assert 0.0 < wall["value"] <= 20.0 * tolerance  # the bound adds up residuals of land and of islands
    assert wall["limit"] == 1e-3  # as the warning boundary-bound-wide
    # a share may be off by two bounds at every divide, so that a finer solution must be surer
    assert verdicts["s"]["value"] <= 40.0 * tolerance * (0.3 * 40 + 0.6) / 0.6


def test_without_solved_walls_and_piers_nothing_is_said_of_them(ready_client):
    assert not {"outlines and surveyed shores", "walls of piers"} & set(_own(ready_client, OPEN))


def test_walls_of_piers_are_judged_where_there_are_piers(ready_client):
    pier = {"kind": "pier", "name": "P", "at": [20, 10], "radius": 1.5}
    assert _own(ready_client, OPEN | {"structures": [pier]})["walls of piers"]["pass"]

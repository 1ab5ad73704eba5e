"""Bodies of surveyed water in a review: groynes that became land, and islands, with their places."""

import json
from pathlib import Path

RIVER = Path(__file__).parents[2] / "openapi" / "examples" / "layout-river-bend.json"


def test_lee_of_a_groyne_and_of_an_island_in_a_surveyed_reach(ready_client):
    layout = json.loads(RIVER.read_text(encoding="utf-8")) | {"bed_friction": 0.004}
    answer = ready_client.post("/v1/layout/review", json={"layout": layout})
    assert answer.status_code == 200, answer.text
    raised = [(w["code"], w["message"], w["pointer"]) for w in answer.json()["warnings"]]
    lees = {message.split("'")[1]: pointer for code, message, pointer in raised if code == "pier-lee"}
    assert lees["eyot"] == "#/layout/shore/water/coordinates/1"
    assert set(lees) == {"eyot", "groyne"}
    (wake,) = [message for code, message, _ in raised if code == "shallow-wake"]
    assert "eyot" in wake  # water passes the groyne on one side only

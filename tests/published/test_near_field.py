"""Speed near a point opening over its depth mean, through `field/sample`.

Table: ratio of the true velocity to Q / (2 pi r h) between a level bed and a rigid surface, recomputed with
two hundred thousand vertical images.
"""

import numpy as np
import pytest

from support.layouts import source

RATIOS = {
    (0.5, 0.5): (2.06948, 1.22617, 1.01243, 1.00065, 1.00003, 1.00000),
    (0.5, 1.0): (0.38285, 0.79870, 0.98763, 0.99936, 0.99997, 1.00000),
    (0.0, 0.0): (4.01841, 2.06948, 1.22617, 1.05320, 1.01243, 1.00065),
    (0.0, 1.0): (0.12056, 0.38285, 0.79870, 0.94809, 0.98763, 0.99936),
}
DISTANCES = (0.25, 0.5, 1.0, 1.5, 2.0, 3.0)
DEPTH = 4.0


def asked(elevation, height, **extra):
    layout = {"depth": DEPTH, "elements": [source(0j, 2.0) | {"elevation": elevation * DEPTH}]}
    points = [[r * DEPTH, 0.0, height * DEPTH] for r in DISTANCES]
    return {"layout": layout, "model": "point-intake-3d", "at": {"points": points}, **extra}


@pytest.mark.parametrize("case", RATIOS, ids=str)
def test_table_of_ratios(service, case):
    result = service.post("field/sample", asked(*case))["result"]
    mean = 2.0 / (2 * np.pi * np.array(DISTANCES) * DEPTH**2)
    assert np.array(result["u"]) / mean == pytest.approx(RATIOS[case], abs=6e-6)  # five decimals are given
    assert np.hypot(result["u"], result["w"]) == pytest.approx(result["speed"], rel=1e-12)
    assert result["wall_leak"] == 0.0


def test_heights_in_a_column_say_the_same(service):
    one = service.post("field/sample", asked(0.5, 0.25))["result"]
    body = asked(0.5, 0.25) | {"at": {"x": [r * DEPTH for r in DISTANCES], "y": [0.0] * 6, "z": DEPTH / 4}}
    assert service.post("field/sample", body)["result"] == one


def test_us_units(service):
    si = service.post("field/sample", asked(0.5, 0.25))["result"]
    foot = 0.3048
    layout = {
        "depth": DEPTH / foot,
        "elements": [source(0j, 2.0 / foot**3) | {"elevation": DEPTH / 2 / foot}],
    }
    points = [[r * DEPTH / foot, 0.0, DEPTH / 4 / foot] for r in DISTANCES]
    body = {"layout": layout, "model": "point-intake-3d", "at": {"points": points}, "unit_system": "us"}
    envelope = service.post("field/sample", body)
    assert np.array(envelope["result"]["speed"]) * foot == pytest.approx(si["speed"], rel=1e-12)
    assert envelope["units"]["w"] == "[ft_i]/s"

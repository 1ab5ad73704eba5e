"""Discharges with their own unit: exact factors, independence of the unit system, refusals."""

from fractions import Fraction

import pytest

from forebay.api.schemas.discharges import FACTORS, DischargeUnit
from support.http import SAMPLE, a_sample, assert_problem

PUBLISHED = {
    DischargeUnit.CUBIC_FOOT_PER_SECOND: 2.831685e-2,
    DischargeUnit.US_GALLON_PER_MINUTE: 6.309020e-5,
    DischargeUnit.MILLION_US_GALLONS_PER_DAY: 4.381264e-2,
}
"""NIST Special Publication 811 (2008), appendix B.8, to seven digits; per day: 4.381264e-8 a gallon."""

SIMPLE = {
    DischargeUnit.CUBIC_METRE_PER_SECOND: Fraction(1),
    DischargeUnit.LITRE_PER_SECOND: Fraction(1, 1000),
    DischargeUnit.CUBIC_METRE_PER_HOUR: Fraction(1, 60 * 60),
    DischargeUnit.CUBIC_METRE_PER_DAY: Fraction(1, 24 * 60 * 60),
    DischargeUnit.MEGALITRE_PER_DAY: Fraction(1000, 24 * 60 * 60),
}
"""By definition of the litre, the hour and the day."""


def sampled(discharge, unit_system="si"):
    body = a_sample(digits=17)
    layout = body["layout"]
    sink = layout["elements"][0] | {"discharge": discharge}
    return body | {"unit_system": unit_system, "layout": layout | {"elements": [sink]}}


def test_every_unit_is_checked():
    assert set(PUBLISHED) | set(SIMPLE) == set(DischargeUnit) == set(FACTORS)


@pytest.mark.parametrize("unit", PUBLISHED)
def test_factor_is_the_published_one(unit):
    # seven digits are printed
    assert float(FACTORS[unit]) == pytest.approx(PUBLISHED[unit], rel=5e-7 / 2.8)


@pytest.mark.parametrize("unit", SIMPLE)
def test_factor_follows_from_definitions(unit):
    assert FACTORS[unit] == SIMPLE[unit]


@pytest.mark.parametrize("unit", DischargeUnit)
@pytest.mark.parametrize("unit_system", ["si", "us"])
def test_value_with_unit_is_the_same_in_both_systems(ready_client, unit, unit_system):
    number = 1.8 / float(FACTORS[unit])
    plain = 1.8 if unit_system == "si" else 1.8 / 0.3048**3
    asked, known = (
        ready_client.post(SAMPLE, json=sampled(discharge, unit_system)).json()["result"]
        for discharge in ({"value": number, "unit": unit}, plain)
    )
    for name in ("u", "v"):
        # the discharge itself has two or three roundings of 1e-16
        assert asked[name] == pytest.approx(known[name], rel=1e-14, abs=1e-17)


@pytest.mark.parametrize(
    ("discharge", "pointer"),
    [
        ({"value": 12, "unit": "acre-foot"}, "/unit"),
        ({"value": 12}, "/unit"),
        ({"unit": "gpm"}, "/value"),
        ({"value": -12, "unit": "gpm"}, "/value"),
        ({"value": "12", "unit": "gpm"}, "/value"),
        ({"value": 12, "unit": "gpm", "of": "water"}, "/of"),
        ({"value": 1e10, "unit": "m3/s"}, ""),
        ({"value": 1e-7, "unit": "m3/d"}, ""),
        ("12 gpm", ""),
        (0, ""),
        ([12, "gpm"], ""),
    ],
)
def test_wrong_discharge_is_pointed_at(client, discharge, pointer):
    problem = assert_problem(client.post(SAMPLE, json=sampled(discharge)), 422, "invalid-request")
    assert [error["pointer"] for error in problem["errors"]] == [f"#/layout/elements/0/discharge{pointer}"]

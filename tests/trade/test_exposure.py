"""Thresholds of exposure: the records, and comparisons at, below and above."""

import math
import re

import pytest

from forebay.trade.exposure import (
    FISH_WIDTH,
    THRESHOLDS,
    UnknownThresholdError,
    chosen_thresholds,
    expose,
    reach_of,
)

BY_ID = {threshold.id: threshold for threshold in THRESHOLDS}


@pytest.mark.parametrize("threshold", THRESHOLDS, ids=lambda threshold: threshold.id)
def test_record_is_complete(threshold):
    assert re.fullmatch(r"[a-z]+(-[a-z]+)*", threshold.id)
    assert all([threshold.organism, threshold.life_stage, threshold.effect, threshold.source])
    assert 0.0 < threshold.rate < 2000.0


def test_ids_are_unique_and_rates_ascend():
    assert len(BY_ID) == len(THRESHOLDS)
    rates = [threshold.rate for threshold in THRESHOLDS]
    assert rates == sorted(rates)


# nozzle speeds over 1.8 cm: 678, 761 and 933 1/s
@pytest.mark.parametrize(
    ("id_", "rate"),
    [("chinook-juvenile-minor", 678), ("chinook-juvenile-major", 761), ("chinook-juvenile-fatal", 933)],
)
def test_nozzle_speeds_become_rates(id_, rate):
    assert BY_ID[id_].rate == pytest.approx(rate, abs=0.5)


def test_scale_of_the_exposure_strain_rates():
    # 21.3 m/s and 1185 1/s belong together to the digits given
    assert pytest.approx(1185, abs=2) == 21.3 / FISH_WIDTH


@pytest.mark.parametrize(("share", "exceeded"), [(1 - 1e-9, False), (1.0, False), (1 + 1e-9, True)])
def test_threshold_itself_is_not_exceeded(share, exceeded):
    (found,) = expose(517.0 * share, [BY_ID["salmonid-juvenile"]])
    assert found.exceeded is exceeded
    assert found.margin == pytest.approx(share, rel=1e-12)


def test_place_without_a_rate_has_no_verdict():
    (found,) = expose(math.nan, [BY_ID["american-eel"]])
    assert (found.exceeded, found.margin) == (None, None)


def test_without_ids_all_are_meant():
    assert chosen_thresholds([]) == THRESHOLDS
    assert chosen_thresholds(["american-eel"]) == (BY_ID["american-eel"],)


def test_unknown_id_is_refused():
    with pytest.raises(UnknownThresholdError) as caught:
        chosen_thresholds(["american-eel", "sturgeon"])
    assert caught.value.path == ("exposure", 1)


def test_reach_near_a_sink():
    # q = 0.1 m2/s reaches 517 1/s only inside 7.8 mm
    assert reach_of(0.1, BY_ID["salmonid-juvenile"]) == pytest.approx(7.8e-3, abs=5e-5)

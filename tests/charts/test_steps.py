"""Round numbers for tubes, bands and bars."""

import numpy as np
import pytest

from forebay.charts.steps import (
    BANDS,
    LINES_INTO_ONE,
    TOLERANCE,
    choose_tube,
    common_divisor,
    figures,
    round_down,
    round_number,
    speed_levels,
)


class TestTube:
    @pytest.mark.parametrize(
        ("discharges", "divisor"),
        [([1.8, 1.5, 2.2, 0.9], 0.1), ([12.0, 12.0, 1.4, 0.4, 0.6], 0.2), ([64.0], 64.0), ([], 0.0)],
    )
    def test_common_divisor(self, discharges, divisor):
        assert common_divisor(discharges) == pytest.approx(divisor, rel=1e-12)

    def test_divides_every_discharge_where_it_can(self):
        tube = choose_tube([1.8, 1.5, 2.2, 0.9], 2.4)
        assert tube.whole
        shares = np.array([1.8, 1.5, 2.2, 0.9]) / tube.discharge
        np.testing.assert_allclose(shares, np.round(shares), atol=1e-9)  # rounding of a quotient

    def test_divides_the_largest_where_the_others_do_not_fit(self):
        tube = choose_tube([1.837, 1.301, 1.117], 4.0)
        assert not tube.whole
        assert 1.837 / tube.discharge == pytest.approx(round(1.837 / tube.discharge), abs=1e-9)

    def test_is_a_round_number_where_the_current_carries_far_more(self):
        assert choose_tube([1.8, 1.5], 2200.0).discharge == 100.0

    @pytest.mark.parametrize("across", [0.01, 1.0, 57.0, 1e4])
    @pytest.mark.parametrize("discharges", [[], [1.0], [1.8, 1.5, 2.2, 0.9], [np.pi, 1.0]])
    def test_keeps_near_the_wanted_number_and_never_crowds_a_sink(self, across, discharges):
        tube = choose_tube(discharges, across)
        assert max(discharges, default=0.0) / tube.discharge <= LINES_INTO_ONE * TOLERANCE
        assert across / tube.discharge <= 22 * TOLERANCE


class TestRoundNumbers:
    @pytest.mark.parametrize(
        ("value", "nearest", "below"),
        [(0.9, 1.0, 0.5), (1.0, 1.0, 1.0), (3.4, 2.5, 2.0), (0.0068, 0.005, 0.005), (740.0, 1000.0, 500.0)],
    )
    def test_nearest_and_below(self, value, nearest, below):
        assert round_number(value) == pytest.approx(nearest, rel=1e-12)
        assert round_down(value) == pytest.approx(below, rel=1e-12)

    @pytest.mark.parametrize(
        ("value", "text"),
        [
            (0.35, "0.35"),
            (1234.0, "1234"),
            (0.000123, "0.000123"),
            (1.23e-9, "1.23e-09"),
            (12345678.0, "1.23e+07"),
        ],
    )
    def test_figures(self, value, text):
        assert figures(value) == text


class TestSpeedLevels:
    @pytest.mark.parametrize("scale", [1e-4, 0.03, 1.0, 47.0])
    def test_starts_from_zero_and_covers_the_map(self, scale):
        speeds = scale * np.linspace(0.0, 1.0, 1001)
        levels = speed_levels(speeds)
        assert levels[0] == 0.0
        assert 2 <= levels.size <= BANDS + 1
        assert levels[-1] >= np.percentile(speeds, 97)

    def test_resolves_a_narrow_range(self):
        levels = speed_levels(np.linspace(0.33, 0.37, 1001))
        # the first band takes all that is slow, the others resolve 0.33 to 0.37
        assert levels[0] == 0.0
        assert levels[1] > 0.3
        assert levels.size >= 5

    @pytest.mark.parametrize("speeds", [np.zeros(5), np.array([]), np.full(7, 0.35)])
    def test_exists_for_a_uniform_or_empty_map(self, speeds):
        levels = speed_levels(speeds)
        assert levels.size >= 2
        assert np.all(np.diff(levels) > 0)

    def test_few_fast_cells_do_not_take_the_colours(self):
        speeds = np.concatenate([np.linspace(0.0, 0.1, 1000), np.full(10, 50.0)])
        assert speed_levels(speeds)[-1] <= 0.2

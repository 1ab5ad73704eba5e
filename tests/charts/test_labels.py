"""Places of labels."""

import itertools

import numpy as np
import pytest

from forebay.charts.labels import Ground, Wish, nearest_on, place_labels
from forebay.charts.sheet import Box

FRAME = Box(0.0, 0.0, 800.0, 500.0)


def a_wish(x: float, y: float, text: str = "label") -> Wish:
    return Wish(text, (90.0, 30.0), (x, y), 7.0)


def symbols(wishes: list[Wish]) -> list[Box]:
    return [Box(w.anchor[0] - 7, w.anchor[1] - 7, w.anchor[0] + 7, w.anchor[1] + 7) for w in wishes]


class TestPlaces:
    @pytest.mark.parametrize("seed", range(5))
    def test_no_label_overlaps_another_a_symbol_or_the_frame(self, seed):
        generator = np.random.default_rng(seed)
        wishes = [a_wish(float(x), float(y)) for x, y in generator.uniform((0, 0), (800, 500), (25, 2))]
        taken = symbols(wishes)
        placed, left_over = place_labels(wishes, Ground(FRAME, taken))
        assert len(placed) + len(left_over) == 25
        boxes = [label.box for label in placed]
        assert all(box.within(FRAME) for box in boxes)
        assert not any(one.overlaps(other) for one, other in itertools.combinations(boxes, 2))
        assert not any(box.overlaps(symbol) for box in boxes for symbol in taken)

    def test_lone_label_stands_beside_its_symbol_without_a_leader(self):
        (label,), _ = place_labels([a_wish(400, 250)], Ground(FRAME, symbols([a_wish(400, 250)])))
        assert not label.leader
        assert np.hypot(*np.subtract(nearest_on(label.box, (400, 250)), (400, 250))) < 25

    def test_label_in_a_corner_is_turned_inwards(self):
        (label,), _ = place_labels([a_wish(795, 5)], Ground(FRAME, symbols([a_wish(795, 5)])))
        assert label.box.within(FRAME)

    def test_crowd_gets_leaders(self):
        wishes = [a_wish(400 + 4 * k, 250) for k in range(12)]
        placed, left_over = place_labels(wishes, Ground(FRAME, symbols(wishes)))
        assert not left_over
        assert any(label.leader for label in placed)

    def test_label_without_room_is_reported(self):
        small = Box(0, 0, 80, 25)
        placed, left_over = place_labels([a_wish(40, 12)], Ground(small, ()))
        assert not placed
        assert len(left_over) == 1

    def test_keeps_off_a_line_where_it_can(self):
        line = [(float(x), 225.0) for x in range(400, 560, 4)]
        (label,), _ = place_labels([a_wish(400, 250)], Ground(FRAME, symbols([a_wish(400, 250)]), line))
        assert not any(
            label.box.left <= x <= label.box.right and label.box.top <= y <= label.box.bottom for x, y in line
        )

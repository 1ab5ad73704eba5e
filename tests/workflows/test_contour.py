"""The workflow: contours in, integrals out, in their order."""

import numpy as np
import pytest

from forebay.flow.errors import ElementOnLandError
from forebay.flow.layout import Layout, Sink, StraightBank
from forebay.flow.paths import Contour
from forebay.workflows.contour import integrate_contours

LAYOUT = Layout(4.0, shore=StraightBank(0j, 1 + 0j), elements=(Sink("intake", 3 + 2j, 1.8),))


def test_contours_in_their_order():
    contours = [Contour.circle("round", 3 + 2j, 1.0), Contour.polyline("beside", np.array([1j, 8j]))]
    first, second = integrate_contours(LAYOUT, contours)
    assert (first.name, first.closed, second.name, second.closed) == ("round", True, "beside", False)
    assert first.discharge == pytest.approx(-1.8, rel=1e-13)  # exact but for rounding
    assert second.enclosed_area is None


def test_wrong_layout_is_refused():
    with pytest.raises(ElementOnLandError):
        integrate_contours(Layout(4.0, shore=StraightBank(0j, 1 + 0j), elements=(Sink("s", -1j, 1.0),)), [])

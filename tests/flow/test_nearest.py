"""Sites within reach of points, against a search tree of another library."""

import numpy as np
import pytest
from scipy.spatial import KDTree

from forebay.flow.kernels.nearest import first_within


def plane(z):
    return np.column_stack((z.real, z.imag))


@pytest.mark.parametrize("reach", [0.0, 1e-9, 1.0, 2.3])
@pytest.mark.parametrize("count", [1, 7, 60])
def test_first_site_within_reach_is_that_of_a_search_tree(count, reach):
    # places of a lattice: many share an x, many coincide, and distances are exact
    rng = np.random.default_rng(count)
    sites, z = (rng.integers(0, 8, n) + 1j * rng.integers(0, 8, n) for n in (count, 500))
    near = KDTree(plane(sites)).query_ball_point(plane(z), reach)
    wanted = [min(indices, default=-1) for indices in near]
    assert first_within(z, sites, np.argsort(sites.real), reach).tolist() == wanted
    assert len(set(wanted)) > 1


def test_what_is_not_a_number_is_near_nothing():
    nowhere = complex(np.nan, np.nan)
    sites = np.array([nowhere, 1 + 1j])
    z = np.array([nowhere, 1 + 1j, complex(1.0, np.nan)])
    assert first_within(z, sites, np.argsort(sites.real), 0.5).tolist() == [-1, 1, -1]


def test_without_sites_nothing_is_near():
    nobody = np.array([], dtype=np.complex128)
    assert first_within(np.array([0j]), nobody, np.argsort(nobody.real), 1.0).tolist() == [-1]

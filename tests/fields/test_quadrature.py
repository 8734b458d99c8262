"""Spherical Bessel functions, nodes and panels against what they must hold."""

import numpy as np
import pytest
from scipy.special import spherical_jn

from stackdb.fields.panels import Abrupt, basis, breaks
from stackdb.fields.quadrature import beyond, even_spherical_bessel, grid, spherical_bessel


@pytest.mark.parametrize("count", [1, 2, 8, 16, 39])
def test_spherical_bessel_functions_are_those_of_scipy(count):
    x = np.sort(np.concatenate([np.geomspace(1e-9, 1, 80), np.linspace(1, 300, 900), np.pi * np.arange(1, 6)]))
    found = spherical_bessel(count, x)
    for n in range(count):
        np.testing.assert_allclose(found[n], spherical_jn(n, x), atol=2e-9)
    np.testing.assert_array_equal(even_spherical_bessel(3, x), spherical_bessel(5, x)[::2])


def test_nodes_integrate_waves_and_what_bends_near_zero():
    _, _, k, weight = grid(2.0, 500.0)
    assert weight @ np.exp(-k) == pytest.approx(1.0, rel=1e-11)
    assert weight @ (np.exp(-k) * np.cos(4.0 * k)) == pytest.approx(1 / 17, rel=1e-10)
    assert weight @ (np.exp(-k) / (1e-3 + k)) == pytest.approx(6.337874, rel=1e-6)  # e^s E1(s), s = 1e-3, scipy exp1


def test_nodes_beyond_take_over_on_a_logarithmic_scale():
    start = grid(2.0, 500.0)
    _, _, k, weight = beyond(start, 1e5)
    assert weight @ k**-2 == pytest.approx(1 / start.k[-1] - 1e-5, rel=1e-12)


def test_breaks_keep_ends_and_abrupt_radii_and_shrink_towards_them():
    edges = breaks(10.0, [Abrupt(10.0, 0.05), Abrupt(4.0, 0.1)])
    assert edges[0] == 0.0
    assert edges[-1] == 10.0
    assert 4.0 in edges
    assert (np.diff(edges) > 0.0).all()
    assert edges[-1] - edges[-2] < 0.2
    assert np.diff(edges).max() > 1.0
    assert breaks(1.0, [Abrupt(1.0, 5.0)]).tolist() == [0.0, 1.0]


def test_waves_of_a_basis_are_the_cosine_transforms_of_its_polynomials():
    edges, nodes = np.array([0.0, 0.4, 1.0]), grid(1.0, 40.0)
    disc = basis(nodes, edges, 4)
    x, w = np.polynomial.legendre.leggauss(80)
    left, right = 0.2 * (1 + x), 0.7 + 0.3 * x
    legendre = np.polynomial.legendre.legvander
    first = (0.2 * w * legendre(left / 0.4, 7)[:, :8:2].T) @ np.cos(np.outer(left, nodes.k))
    second = (0.3 * w * legendre(x, 3).T) @ np.cos(np.outer(right, nodes.k))
    np.testing.assert_allclose(disc.waves, np.concatenate([first, second]), atol=1e-9)
    np.testing.assert_allclose(disc.charges, [0.4, 0, 0, 0, 0.6, 0, 0, 0])


def test_a_basis_scales_with_its_disc():
    edges = np.array([0.0, 0.4, 1.0])
    unit, small = basis(grid(1.0, 40.0), edges, 4), basis(grid(1e-3, 4e4), 1e-3 * edges, 4)
    np.testing.assert_allclose(small.waves, unit.waves, rtol=1e-9, atol=1e-12)
    np.testing.assert_allclose(small.norms, 1e3 * unit.norms, rtol=1e-12)
    np.testing.assert_allclose(small.edge, 1e3 * unit.edge, rtol=1e-12)

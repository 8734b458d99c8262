"""The layered kernel: its limits, its reciprocity, and what layers may do to it."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stackdb.fields.kernel import INFINITE, FieldLayer, Sheet, look, series_gap_limit, sheet_term, two_port

EPS0 = 8.8541878188e-12
K = np.geomspace(1e-3, 1e6, 60)

layer = st.builds(
    FieldLayer,
    st.floats(1e-6, 1e-2),
    st.floats(1.0, 80.0),
    st.one_of(st.none(), st.floats(1.0, 80.0)),
)
lossy = st.builds(
    FieldLayer,
    st.floats(1e-6, 1e-2),
    st.builds(lambda e, d: e * (1 - 1j * d), st.floats(1.0, 80.0), st.floats(0.0, 1.0)),
    st.none(),
)
stacks = st.lists(layer, min_size=1, max_size=6)


@given(stacks)
@settings(max_examples=40, deadline=None)
def test_limit_of_small_k_is_the_series_gap(layers):
    k = np.array([1e-3])
    expected = sum(x.thickness_m / x.permittivity for x in layers)
    assert 1 / (k * look(layers, INFINITE, k).admittance)[0].real == pytest.approx(expected, rel=1e-8)
    assert series_gap_limit(layers).real == pytest.approx(expected, rel=1e-14)


@given(st.lists(lossy, min_size=1, max_size=4))
@settings(max_examples=30, deadline=None)
def test_limit_of_small_k_holds_with_loss(layers):
    k = np.array([1e-3])
    expected = sum(x.thickness_m / x.permittivity for x in layers)
    found = 1 / (k * look(layers, INFINITE, k).admittance)[0]
    assert abs(found / expected - 1) < 1e-8


def test_limit_of_large_k_is_the_nearest_layer():
    layers = [FieldLayer(1e-4, 3.0, 5.0), FieldLayer(1e-3, 7.0)]
    assert look(layers, 1.0, np.array([1e9])).admittance[0] == pytest.approx(np.sqrt(15.0), rel=1e-14)


@given(stacks)
@settings(max_examples=30, deadline=None)
def test_two_port_says_what_the_recursion_says(layers):
    k = K[K > 1.0]  # below, the open admittance as a difference of grounded ones loses its digits: 1e-16/(k g)
    port, open_, ground = two_port(layers, k), look(layers, 1.0, k), look(layers, INFINITE, k)
    np.testing.assert_allclose(port.near, ground.admittance, rtol=1e-8)
    np.testing.assert_allclose(port.near - port.between**2 / (port.far + 1.0), open_.admittance, rtol=1e-6)
    np.testing.assert_allclose(port.between / (port.far + 1.0), open_.transfer, rtol=1e-6, atol=1e-200)


@given(stacks)
@settings(max_examples=30, deadline=None)
def test_two_port_is_reciprocal(layers):
    there, back = two_port(layers, K), two_port(layers[::-1], K)
    np.testing.assert_allclose(there.between, back.between, rtol=1e-8, atol=1e-200)
    np.testing.assert_allclose(there.far, back.near, rtol=1e-8)


@given(stacks, st.floats(0.1, 0.9))
@settings(max_examples=30, deadline=None)
def test_splitting_a_layer_changes_nothing(layers, share):
    first = layers[0]
    split = [
        first._replace(thickness_m=share * first.thickness_m),
        first._replace(thickness_m=(1 - share) * first.thickness_m),
        *layers[1:],
    ]
    for ending in (1.0, INFINITE):
        whole, parts = look(layers, ending, K), look(split, ending, K)
        np.testing.assert_allclose(parts.admittance, whole.admittance, rtol=1e-9)
        np.testing.assert_allclose(parts.transfer, whole.transfer, rtol=1e-8, atol=1e-200)


def test_a_uniaxial_layer_is_an_isotropic_one_of_another_thickness():
    uniaxial, alike = FieldLayer(1e-3, 2.0, 8.0), FieldLayer(2e-3, 4.0)
    for ending in (1.0, INFINITE):
        np.testing.assert_allclose(
            look([uniaxial], ending, K).admittance, look([alike], ending, K).admittance, rtol=1e-13
        )


def test_nothing_overflows_where_the_field_has_died():
    seen = look([FieldLayer(1.0, 7.0), FieldLayer(1e-5, 3.0)], 1.0, np.array([1e5, 1e8]))
    assert np.isfinite(seen.admittance).all()
    assert seen.transfer.tolist() == [0.0, 0.0]


def test_a_perfect_film_is_a_grounded_plane_to_all_but_the_longest_waves():
    sheet = Sheet(1e9, 2 * np.pi * 1e5)
    k = np.geomspace(10.0, 1e4, 20)
    cover = [FieldLayer(1e-3, 7.0)]
    np.testing.assert_allclose(
        look(cover, 1.0 + sheet_term(sheet, k), k).admittance, look(cover, INFINITE, k).admittance, rtol=1e-8
    )


def test_a_film_alone_has_its_charge_by_continuity():
    # div(Y grad phi) = j w sigma: at wavenumber k the film's charge is Y k^2/(j w) phi, in units of eps0 k
    sheet = Sheet(2e-6 + 3e-7j, 2 * np.pi * 1e5)
    k = np.array([500.0])
    expected = sheet.admittance * k**2 / (1j * sheet.angular_frequency) / (EPS0 * k)
    np.testing.assert_allclose(sheet_term(sheet, k), expected, rtol=1e-13)

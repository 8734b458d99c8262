"""Laws of the field solution, as properties and limits."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stackdb.errors import InputError
from stackdb.fields.discs import solve
from stackdb.fields.films import Sheet, apparent_touch, thin_cover_parameter, touch_through, unbounded_film
from stackdb.fields.kernel import INFINITE, FieldLayer, look, series_gap_limit
from stackdb.fields.quadrature import even_spherical_bessel
from stackdb.quantities import EPS0

layers = st.lists(
    st.tuples(st.floats(2e-4, 3e-3), st.floats(1.0, 20.0)).map(lambda x: FieldLayer(*x)), min_size=1, max_size=3
)
radius = st.floats(2e-3, 8e-3)
around = st.sampled_from(["alone", "grounded", "driven"])


def change(cover, pad, finger, neighbours, **more):
    return solve(cover=cover, pad_diameter_m=2 * pad, finger_diameter_m=2 * finger, around=neighbours, **more)


@given(layers)
def test_the_kernel_tends_to_the_series_gap(cover):
    k = np.array([1e-3 / sum(x.thickness_m for x in cover)])
    admittance = look(cover, INFINITE, k).admittance
    # corrections are of second order in k T = 1e-3
    assert 1.0 / (k[0] * admittance[0].real) == pytest.approx(series_gap_limit(cover).real, rel=1e-4)


@settings(max_examples=15, deadline=None)
@given(layers, radius, radius, around)
def test_reciprocity_positivity_and_order(cover, pad, finger, neighbours):
    found = change(cover, pad, finger, neighbours)
    assert found.change_farad > 0
    assert found.pad_finger_farad > 0
    assert found.finger_total_farad >= found.pad_finger_farad
    # the contact disc takes less than a grounded plane on the whole cover
    assert found.change_farad <= found.change_high_farad * (1 + 1e-6)
    turned = change(tuple(reversed(cover)), finger, pad, "alone")
    straight = change(cover, pad, finger, "alone")
    # pad and finger may change places when the stack is turned over and nothing else is near
    assert turned.pad_finger_farad == pytest.approx(straight.pad_finger_farad, rel=1e-4)


@settings(max_examples=10, deadline=None)
@given(layers, radius, around, st.floats(0.5, 4.0))
def test_capacitance_scales_with_size(cover, pad, neighbours, factor):
    larger = [x._replace(thickness_m=factor * x.thickness_m) for x in cover]
    one, other = change(cover, pad, pad, neighbours), change(larger, factor * pad, factor * pad, neighbours)
    assert other.change_farad == pytest.approx(factor * one.change_farad, rel=1e-6)


@settings(max_examples=10, deadline=None)
@given(layers, radius, around)
def test_a_larger_finger_changes_more(cover, pad, neighbours):
    small, large = change(cover, pad, 0.7 * pad, neighbours), change(cover, pad, 1.5 * pad, neighbours)
    assert small.change_farad < large.change_farad


@pytest.mark.parametrize("neighbours", ["grounded", "driven"])
def test_the_clearance_tends_to_none(neighbours):
    cover = [FieldLayer(3e-3, 7.0)]
    bare = change(cover, 4e-3, 4e-3, neighbours).change_farad
    wide, narrow = (change(cover, 4e-3, 4e-3, neighbours, clearance_m=s).change_farad for s in (1e-4, 1e-6))
    assert abs(narrow / bare - 1) < abs(wide / bare - 1)
    # the gap counts by half its width on the radius: 1e-6/4e-3 and its logarithm
    assert narrow == pytest.approx(bare, rel=1e-3)


def test_a_floating_finger_among_driven_neighbours_changes_nothing():
    from stackdb.touch.returnpath import ReturnPath, change_with_return

    found = change([FieldLayer(2e-3, 7.0)], 4e-3, 4e-3, "driven")
    floating = ReturnPath(body_farad=1e-30, device_farad=1e-30)
    left = change_with_return(
        change_farad=found.change_farad,
        pad_finger_farad=found.pad_finger_farad,
        finger_total_farad=found.finger_total_farad,
        path=floating,
        driven=True,
    )
    assert abs(left) < 1e-9 * found.change_farad


def test_neighbours_without_clearance_have_no_self_value():
    grounded = change([FieldLayer(2e-3, 7.0)], 4e-3, 4e-3, "grounded")
    assert grounded.self_untouched_farad is None
    assert grounded.clearance_m is None
    driven = change([FieldLayer(2e-3, 7.0)], 4e-3, 4e-3, "driven")
    assert driven.self_untouched_farad == 0.0
    assert driven.change_high_farad == pytest.approx(EPS0 * np.pi * (4e-3) ** 2 * 7.0 / 2e-3, rel=1e-12)


def test_a_shield_below_adds_base_load_and_a_driven_one_takes_it_away():
    cover, below = [FieldLayer(2e-3, 7.0)], [FieldLayer(1e-3, 4.0)]
    open_, ground, driven = (
        change(cover, 4e-3, 4e-3, "alone", below=below, below_ending=e) for e in ("open", "ground", "driven")
    )
    assert ground.self_untouched_farad > open_.self_untouched_farad
    assert driven.self_untouched_farad == 0.0
    assert 0 < ground.change_farad < open_.change_farad


@pytest.mark.parametrize(
    "wrong",
    [
        {"pad_diameter_m": 0.0},
        {"finger_diameter_m": -1.0},
        {"cover": []},
        {"clearance_m": -1e-3, "around": "grounded"},
        {"below_ending": "ground"},
        {"cover": [FieldLayer(1e-9, 3.0)]},
    ],
)
def test_what_cannot_be_solved_is_refused(wrong):
    given_ = {
        "cover": [FieldLayer(2e-3, 7.0)], "pad_diameter_m": 8e-3, "finger_diameter_m": 8e-3, "around": "alone",
    } | wrong  # fmt: skip
    with pytest.raises(InputError):
        solve(**given_)


def test_spherical_bessel_functions():
    from scipy.special import spherical_jn

    x = np.concatenate([np.geomspace(1e-7, 1, 40), np.linspace(1.1, 300, 300)])
    found = even_spherical_bessel(24, x)
    for n in range(24):
        assert np.abs(found[n] - spherical_jn(2 * n, x)).max() < 1e-13


def _film(cover_m: float, admittance_share: float):
    pad, w = 8e-3, 2 * np.pi * 1e5
    cover = [FieldLayer(cover_m, 7.0)]
    admittance = admittance_share * w * EPS0 * 7.0 / cover_m * (pad / 2) ** 2
    return cover, Sheet(admittance, w), pad


def test_a_perfect_film_looks_like_a_touch_and_none_like_nothing():
    cover, film, pad = _film(1e-3, 1e6)
    assert apparent_touch(cover=cover, film_under=0, film=film, pad_diameter_m=pad).real == pytest.approx(1.0, abs=1e-3)
    cover, film, pad = _film(1e-3, 1e-6)
    assert abs(apparent_touch(cover=cover, film_under=0, film=film, pad_diameter_m=pad)) < 1e-3
    assert apparent_touch(cover=cover, film_under=0, film=film, pad_diameter_m=pad, around="driven") == 0


def test_the_thin_cover_form_is_the_limit_and_misleads_on_thick_covers():
    cover, film, pad = _film(2e-5, 1.0)
    closed = unbounded_film(
        thin_cover_parameter(cover=cover, admittance=film.admittance, frequency_hz=1e5, pad_diameter_m=pad)
    )
    layered = apparent_touch(cover=cover, film_under=0, film=film, pad_diameter_m=pad)
    # cover of a two-hundredth of the pad's radius: the forms meet within about that
    assert abs(layered - closed) < 5e-3
    cover, film, pad = _film(2e-3, 1.0)
    closed = unbounded_film(
        thin_cover_parameter(cover=cover, admittance=film.admittance, frequency_hz=1e5, pad_diameter_m=pad)
    )
    layered = apparent_touch(cover=cover, film_under=0, film=film, pad_diameter_m=pad)
    # at half the pad's radius and abs(ga) = 1 the layered touch is a quarter below the closed form
    assert layered.real / closed.real == pytest.approx(0.74, abs=0.01)


def test_an_inner_film_lets_through_what_it_does_not_shield():
    cover = [FieldLayer(3e-3, 7.0), FieldLayer(0.15e-3, 3.5)]
    w = 2 * np.pi * 1e5
    blocked = touch_through(cover=cover, film_under=1, film=Sheet(1.0, w), pad_diameter_m=8e-3)
    clear = touch_through(cover=cover, film_under=1, film=Sheet(1e-12, w), pad_diameter_m=8e-3)
    assert abs(blocked) < 1e-2
    assert clear.real == pytest.approx(1.0, abs=1e-3)


def test_the_film_equation_by_finite_differences():
    """Closed forms against a finite-difference solution of (1/r)(r V')' = g^2 (V - V_plane), to 0.1 %."""
    from scipy.sparse import diags
    from scipy.sparse.linalg import spsolve

    from stackdb.fields.films import free_disc_film, grounded_rim_film

    ga = 1.3 * np.exp(0.25j * np.pi)
    b, n = 3.0, 20_000
    r = (np.arange(n) + 0.5) * b / n
    h = b / n
    inner, outer = r - 0.5 * h, r + 0.5 * h
    plane = (r < 1.0).astype(complex)
    for rim, closed in (("free", free_disc_film(ga, b * ga)), ("ground", grounded_rim_film(ga, b * ga))):
        left, right = inner / (r * h * h), outer / (r * h * h)
        middle = -(left + right) - ga**2
        if rim == "free":
            middle[-1] += right[-1]
        else:
            middle[-1] -= right[-1]
        matrix = diags([left[1:], middle, right[:-1]], [-1, 0, 1], format="csc")
        v = spsolve(matrix, -(ga**2) * plane)
        # the pad's charge over C'' pi a^2: 2 int (1 - V) r dr
        charge = 2.0 * np.sum((1.0 - v[r < 1.0]) * r[r < 1.0]) * h
        assert abs(charge - closed) < 1e-3 * abs(closed)

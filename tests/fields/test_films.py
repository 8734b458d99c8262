"""Films over a pad: closed forms against the film equation, and the layered solution against both."""

from math import pi

import numpy as np
import pytest
from scipy.linalg import solve_banded

from stackdb.errors import InputError
from stackdb.fields import films
from stackdb.fields.kernel import FieldLayer, Sheet

EPS0 = 8.8541878188e-12
A = 4e-3
OMEGA = 2 * pi * 1e5
GLASS = (FieldLayer(2e-3, 7.0),)


def film_equation(g, rim, driven, grounded_rim, count=6000):
    """F by finite volumes: (1/r)(r V')' = g^2 (V - u), u = 1 out to ``driven`` and 0 beyond, film out to ``rim``.

    Radii in units of the pad's. Charge over the pad per C'' pi a^2: the mean of u - V.
    """
    edges = np.union1d(np.linspace(0.0, rim, count), np.array([1.0, driven]))
    edges = edges[edges <= rim]
    middle, area = 0.5 * (edges[1:] + edges[:-1]), np.diff(edges**2) / 2
    u = (middle < driven).astype(complex)
    between = edges[1:-1] / np.diff(middle)
    band = np.zeros((3, middle.size), dtype=complex)
    band[0, 1:] = band[2, :-1] = -between
    band[1] = g**2 * area
    band[1, :-1] += between
    band[1, 1:] += between
    if grounded_rim:
        band[1, -1] += rim / (rim - middle[-1])
    v = solve_banded((1, 1), band, g**2 * area * u)
    over = middle < 1.0
    return 2 * (area[over] @ (u - v)[over])


GS = [0.3 * np.exp(0.25j * pi), 1.0 * np.exp(0.25j * pi), 3.0 * np.exp(0.2j * pi), 8.0 * np.exp(0.25j * pi)]


@pytest.mark.parametrize("g", GS)
@pytest.mark.parametrize("rim", [1.3, 2.5])
def test_free_disc_follows_the_film_equation(g, rim):
    expected = film_equation(g, rim, 1.0, grounded_rim=False)
    assert abs(films.free_disc_film(g, rim * g) - expected) < 1e-3 * abs(expected)


@pytest.mark.parametrize("g", GS)
@pytest.mark.parametrize("rim", [1.3, 2.5])
def test_rim_at_ground_follows_the_film_equation(g, rim):
    expected = film_equation(g, rim, 1.0, grounded_rim=True)
    assert abs(films.grounded_rim_film(g, rim * g) - expected) < 1e-3 * abs(expected)


@pytest.mark.parametrize("g", GS)
def test_unbounded_film_follows_the_film_equation(g):
    expected = film_equation(g, 1.0 + 14.0 / g.real, 1.0, grounded_rim=False, count=20000)
    assert abs(films.unbounded_film(g) - expected) < 1e-3 * abs(expected)


@pytest.mark.parametrize("g", GS[:3])
@pytest.mark.parametrize("driven", [1.2, 2.0])
def test_driven_neighbours_follow_the_film_equation(g, driven):
    wide = film_equation(g, driven + 14.0 / g.real, driven, grounded_rim=False, count=40000)
    assert abs(films.driven_unbounded_film(g, driven * g) - wide) < 1e-3 * abs(wide)
    free = film_equation(g, 3.0, driven, grounded_rim=False, count=20000)
    assert abs(films.driven_free_disc_film(g, 3.0 * g, driven * g) - free) < 1e-3 * abs(free)


@pytest.mark.parametrize("g", GS[:3])
def test_film_with_its_rim_at_ground_all_driven_follows_the_film_equation(g):
    expected = film_equation(g, 2.0, 2.0, grounded_rim=True)
    assert abs(films.driven_rim_film(g, 2.0 * g) - expected) < 1e-3 * abs(expected)


def test_its_real_part_can_be_negative():
    assert films.driven_rim_film(4.0 * np.exp(0.25j * pi), 8.0 * np.exp(0.25j * pi)).real < 0


def test_limits_of_the_closed_forms():
    tiny = 1e-4 * np.exp(0.25j * pi)
    assert films.free_disc_film(tiny, 2 * tiny) == pytest.approx(1 - 1 / 4, rel=1e-6)  # a perfect conductor floats
    assert films.free_disc_film(tiny, tiny) == 0
    assert films.driven_free_disc_film(tiny, tiny, 2 * tiny) == 0
    assert films.grounded_rim_film(tiny, 2 * tiny) == pytest.approx(1.0, rel=1e-6)
    assert abs(films.unbounded_film(500 + 500j)) < 2e-3  # no overflow


def layered(thickness, ga, **kind):
    """Film over glass of which abs(g) a is ``ga``."""
    cover = (FieldLayer(thickness, 7.0),)
    admittance = OMEGA * EPS0 * 7.0 / thickness * (A / ga) ** 2
    closed = films.unbounded_film(
        films.thin_cover_parameter(cover=cover, admittance=admittance, frequency_hz=1e5, pad_diameter_m=2 * A)
    )
    found = films.apparent_touch(cover=cover, film_under=0, film=Sheet(admittance, OMEGA), pad_diameter_m=2 * A, **kind)
    return found, closed


def test_layered_touch_is_a_quarter_below_the_closed_form_on_a_thick_cover():
    found, closed = layered(0.5 * A, 1.0)
    assert found.real / closed.real == pytest.approx(0.74, abs=0.01)


@pytest.mark.parametrize("ga", [0.3, 1.0, 3.0])
def test_layered_touch_tends_to_the_closed_form_on_thin_covers(ga):
    shares = (0.04, 0.02, 0.01)
    off = [abs(f / c - 1) for f, c in (layered(share * A, ga) for share in shares)]
    # to first order in the cover over the shorter of pad radius and smear length
    assert off[0] > 1.6 * off[1] > 1.6**2 * off[2]
    assert all(x < share * max(1.0, ga) for x, share in zip(off, shares, strict=True))


def test_fit_of_the_closed_form_says_where_it_serves():
    ga = 1.0 * np.exp(0.25j * pi)
    thin = films.closed_form_fit(cover=(FieldLayer(0.05 * A, 7.0),), pad_diameter_m=2 * A, ga=ga)
    thick = films.closed_form_fit(cover=(FieldLayer(0.5 * A, 7.0),), pad_diameter_m=2 * A, ga=ga)
    assert thin.holds
    assert not thick.holds
    found, closed = layered(0.05 * A, 1.0)
    assert abs(found / closed - 1) < 0.03


@pytest.mark.parametrize("kind", [{}, {"around": "alone"}, {"around": "driven", "driven_radius_m": 3 * A}])
def test_a_perfect_film_is_a_touch_and_none_is_nothing(kind):
    faint = films.apparent_touch(cover=GLASS, film_under=0, film=Sheet(1e-15, OMEGA), pad_diameter_m=2 * A, **kind)
    perfect = films.apparent_touch(cover=GLASS, film_under=0, film=Sheet(1e3, OMEGA), pad_diameter_m=2 * A, **kind)
    assert abs(faint) < 1e-4
    assert abs(perfect - 1) < 1e-6


def test_among_endless_driven_neighbours_a_film_changes_nothing():
    film = Sheet(1e-6, OMEGA)
    wide = [
        abs(
            films.apparent_touch(
                cover=GLASS, film_under=0, film=film, pad_diameter_m=2 * A, around="driven", driven_radius_m=r
            )
        )
        for r in (2 * A, 8 * A, 32 * A)
    ]
    assert wide[0] > wide[1] > wide[2]
    assert films.apparent_touch(cover=GLASS, film_under=0, film=film, pad_diameter_m=2 * A, around="driven") == 0


def test_a_film_drains_power():
    # the current of a passive load: Im of the change is negative with exp(+jwt)
    for kind in ({}, {"around": "alone"}):
        assert layered(0.5 * A, 1.0, **kind)[0].imag < 0


def test_a_film_inside_the_cover_hides_the_touch_above_it():
    cover = (FieldLayer(1e-3, 7.0), FieldLayer(1e-3, 3.0))
    passed = [
        films.touch_through(cover=cover, film_under=1, film=Sheet(y, OMEGA), pad_diameter_m=2 * A).real
        for y in (1e-14, 1e-7, 1e-2)
    ]
    assert passed[0] == pytest.approx(1.0, abs=1e-4)
    assert passed[0] > passed[1] > passed[2]
    assert passed[2] < 1e-3


def test_words_that_mean_nothing_are_refused():
    with pytest.raises(InputError, match="lonely"):
        films.apparent_touch(cover=GLASS, film_under=0, film=Sheet(1e-6, OMEGA), pad_diameter_m=2 * A, around="lonely")
    with pytest.raises(InputError, match="driven"):
        films.apparent_touch(
            cover=GLASS,
            film_under=0,
            film=Sheet(1e-6, OMEGA),
            pad_diameter_m=2 * A,
            around="alone",
            below_ending="driven",
        )


@pytest.mark.parametrize("kind", [{}, {"around": "alone"}])
def test_a_thin_liquid_is_its_sheet(kind):
    # a layer of height h carries (sigma + j w eps0 (eps - 1)) h in its plane, and passes the field through: first order in h
    sigma, water, height = 1e-3, 80.0, 2e-5
    sheet = Sheet(
        films.sheet_admittance(conductivity_s_per_m=sigma, permittivity=water, thickness_m=height, frequency_hz=1e5),
        OMEGA,
    )
    layer = FieldLayer(height, water - 1j * sigma / (OMEGA * EPS0))
    by_sheet, by_layer = (
        films.apparent_touch(cover=GLASS, film_under=0, film=film, pad_diameter_m=2 * A, **kind)
        for film in (sheet, layer)
    )
    assert abs(by_sheet) > 0.01
    assert abs(by_layer / by_sheet - 1) < 0.02

"""A grounded plane over round and square pads."""

import numpy as np
import pytest

from stackdb.errors import InputError
from stackdb.fields.discs import solve
from stackdb.fields.kernel import FieldLayer
from stackdb.fields.planes import equal_disc_diameter, plane_change, square_weight

EPS0 = 8.8541878188e-12
COVER = (FieldLayer(1.1e-3, 7.0), FieldLayer(0.1e-3, 3.2), FieldLayer(0.15e-3, 3.0))


@pytest.mark.parametrize("around", ["grounded", "driven"])
def test_round_plane_change_is_the_upper_bound_of_the_disc_solution(around):
    bound = solve(cover=COVER, pad_diameter_m=8e-3, finger_diameter_m=8e-3, around=around).change_high_farad
    assert plane_change(cover=COVER, pad_diameter_m=8e-3, around=around).real == pytest.approx(bound, rel=1e-9)


def test_driven_square_is_its_plate_and_grounded_less_than_its_disc():
    side = 6e-3
    plate = EPS0 * side**2 / (1.1e-3 / 7.0 + 0.1e-3 / 3.2 + 0.15e-3 / 3.0)
    assert plane_change(cover=COVER, pad_side_m=side, around="driven").real == pytest.approx(plate, rel=1e-12)
    square = plane_change(cover=COVER, pad_side_m=side, around="grounded").real
    disc = plane_change(cover=COVER, pad_diameter_m=equal_disc_diameter(side), around="grounded").real
    assert square < disc < plate  # a square has the longer edge


def test_square_outline_holds_its_area_and_its_power():
    side, k = 3e-3, np.array([1e-3])
    assert square_weight(k, side)[0] == pytest.approx((k[0] * side**2 / (2 * np.pi)) ** 2, rel=1e-6)


def test_small_squares_and_discs_of_one_area_are_alike():
    far = (FieldLayer(20e-3, 7.0),)
    square = plane_change(cover=far, pad_side_m=1e-3, around="grounded").real
    disc = plane_change(cover=far, pad_diameter_m=equal_disc_diameter(1e-3), around="grounded").real
    assert square == pytest.approx(disc, rel=1e-4)


def test_loss_of_the_cover_shows_as_a_negative_imaginary_part():
    lossy = (FieldLayer(1e-3, 7.0 * (1 - 0.02j)),)
    for kind in ({"pad_side_m": 6e-3}, {"pad_diameter_m": 6e-3}):
        for around in ("grounded", "driven"):
            found = plane_change(cover=lossy, around=around, **kind)
            assert -0.03 < found.imag / found.real < -0.005


@pytest.mark.parametrize(
    "kind",
    [
        {"around": "alone", "pad_side_m": 1e-3},
        {"around": "grounded"},
        {"around": "grounded", "pad_side_m": 1e-3, "pad_diameter_m": 1e-3},
        {"around": "grounded", "pad_side_m": float("nan")},
        {"around": "grounded", "pad_side_m": 10.0},
    ],
)
def test_what_has_no_answer_is_refused(kind):
    with pytest.raises(InputError):
        plane_change(cover=COVER, **kind)

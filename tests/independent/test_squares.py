"""Square plates: the equal-area disc against two-square-plate values computed without this code, and the square's own integral."""

from __future__ import annotations

import numpy as np
import pytest

from stackdb.fields.discs import equal_disc_diameter, solve, square_plane_change
from stackdb.fields.kernel import FieldLayer
from stackdb.quantities import EPS0

# two equal square plates in vacuum, C/(eps0 L^2/d) by d/L (independent boundary elements, 2e-6)
SQUARES = {0.02: 1.0779608, 0.1: 1.3057022, 0.2: 1.5527569, 0.5: 2.2364273, 1.0: 3.3429843, 2.0: 5.58089}


@pytest.mark.parametrize("share", SQUARES)
def test_the_equal_area_disc_stands_for_the_square(share):
    side = 8e-3
    diameter = equal_disc_diameter(side)
    found = solve(
        cover=[FieldLayer(share * side, 1.0)], pad_diameter_m=diameter, finger_diameter_m=diameter, around="alone"
    )
    plate = EPS0 * side**2 / (share * side)
    # what the docstring states: the square holds more edge for its area
    assert found.pair_farad / plate == pytest.approx(SQUARES[share], rel=0.02 if share <= 0.2 else 0.03)
    assert found.pair_farad / plate < SQUARES[share]


def test_a_thin_cover_makes_a_square_a_plate():
    side, cover = 8e-3, 2e-5
    plate = EPS0 * 7.0 * side**2 / cover
    # among grounded neighbours the rim loses about a cover's thickness on each side
    assert square_plane_change(cover=[FieldLayer(cover, 7.0)], side_m=side) == pytest.approx(plate, rel=0.02)


def test_the_square_by_brute_force():
    """The same integral by a plain sum over kx and ky."""
    side, thickness, eps = 4e-3, 2e-3, 7.0
    k = (np.arange(1200) + 0.5) * 5.0
    kx, ky = np.meshgrid(k, k)
    kr = np.hypot(kx, ky)
    t = np.tanh(kr * thickness)
    near, away = eps / t, eps * (1.0 + eps * t) / (eps + t)
    outline = np.sinc(kx * side / 2 / np.pi) * np.sinc(ky * side / 2 / np.pi)
    total = 4.0 * EPS0 * side**4 / (2 * np.pi) ** 2 * np.sum(kr * (near - away) * outline**2) * 25.0
    found = square_plane_change(cover=[FieldLayer(thickness, eps)], side_m=side)
    # midpoint sum of step 5 per metre and reach 6000 per metre: 1e-4
    assert found == pytest.approx(total, rel=1e-3)

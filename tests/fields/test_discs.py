"""Laws of the disc solution, its bounds and limits, and what it refuses."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stackdb.errors import InputError
from stackdb.fields import discs, gap
from stackdb.fields.discs import solve
from stackdb.fields.kernel import FieldLayer

EPS0 = 8.8541878188e-12
AROUND = ("alone", "grounded", "driven")
GLASS = (FieldLayer(3e-3, 7.0),)
BOARD = (FieldLayer(1.6e-3, 4.4),)

lengths = st.floats(2e-3, 2e-2)
layers = st.builds(FieldLayer, st.floats(2e-4, 4e-3), st.floats(1.0, 12.0), st.none())
covers = st.lists(layers, min_size=1, max_size=3).map(tuple)
belows = st.sampled_from([((), "open"), (BOARD, "open"), (BOARD, "ground"), (BOARD, "driven")])
around = st.sampled_from(AROUND)
clearances = st.one_of(st.none(), st.floats(1e-4, 4e-3))


def touch(cover=GLASS, pad=8e-3, finger=8e-3, around="grounded", below=((), "open"), clearance=None, tolerance=1e-5):
    return solve(
        cover=cover,
        below=below[0],
        below_ending=below[1],
        pad_diameter_m=pad,
        finger_diameter_m=finger,
        around=around,
        clearance_m=clearance,
        tolerance=tolerance,
    )


@given(covers, lengths, lengths, around, belows, clearances, st.floats(0.1, 10.0))
@settings(max_examples=25, deadline=None)
def test_capacitances_scale_with_length(cover, pad, finger, neighbours, below, clearance, scale):
    def grown(stack):
        return tuple(x._replace(thickness_m=scale * x.thickness_m) for x in stack)

    small = touch(cover, pad, finger, neighbours, below, clearance)
    large = touch(
        grown(cover),
        scale * pad,
        scale * finger,
        neighbours,
        (grown(below[0]), below[1]),
        clearance and scale * clearance,
    )
    assert large.change_farad == pytest.approx(scale * small.change_farad, rel=1e-7)
    assert large.finger_total_farad == pytest.approx(scale * small.finger_total_farad, rel=1e-7)


@given(covers, lengths, lengths)
@settings(max_examples=20, deadline=None)
def test_pad_and_finger_may_change_places(cover, pad, finger):
    # the electrode plane and the touched surface both face air: turn the stack over
    there, back = touch(cover, pad, finger, "alone"), touch(cover[::-1], finger, pad, "alone")
    assert there.pad_finger_farad == pytest.approx(back.pad_finger_farad, rel=2e-5)
    assert there.finger_total_farad == pytest.approx(back.self_touched_farad, rel=2e-5)
    assert there.pair_farad == pytest.approx(back.pair_farad, rel=2e-5)


@given(covers, lengths, lengths, around, belows, clearances)
@settings(max_examples=30, deadline=None)
def test_positive_and_within_the_bounds(cover, pad, finger, neighbours, below, clearance):
    found = touch(cover, pad, finger, neighbours, below, clearance)
    slack = 1 + 2e-5
    assert 0 < found.change_farad <= found.change_high_farad * slack
    assert 0 < found.pad_finger_farad < found.finger_total_farad
    assert found.change_low_farad == found.change_farad
    if found.self_untouched_farad is not None:
        assert found.self_untouched_farad >= 0
        assert found.self_touched_farad == pytest.approx(found.self_untouched_farad + found.change_farad, rel=1e-12)


@given(covers, lengths, lengths, st.floats(1.1, 2.0), around, belows, clearances)
@settings(max_examples=25, deadline=None)
def test_change_rises_with_the_finger(cover, pad, finger, factor, neighbours, below, clearance):
    small = touch(cover, pad, finger, neighbours, below, clearance)
    large = touch(cover, pad, factor * finger, neighbours, below, clearance)
    assert large.change_farad >= small.change_farad * (1 - 2e-5)
    assert large.change_high_farad == pytest.approx(small.change_high_farad, rel=2e-5)


@pytest.mark.parametrize("neighbours", AROUND)
def test_a_wide_finger_is_a_plane(neighbours):
    found = touch(finger=80e-3, around=neighbours, below=(BOARD, "ground"))
    assert found.change_farad == pytest.approx(found.change_high_farad, rel=1e-4)


@pytest.mark.parametrize("neighbours", ["grounded", "driven"])
@pytest.mark.parametrize("below", [((), "open"), (BOARD, "ground"), (BOARD, "driven")])
def test_change_tends_to_that_without_clearance(neighbours, below):
    limit = touch(around=neighbours, below=below)
    off = [touch(around=neighbours, below=below, clearance=c) for c in (1e-4, 1e-5, 1e-6)]
    for name in ("change_farad", "change_high_farad", "pad_finger_farad"):
        steps = [abs(getattr(x, name) / getattr(limit, name) - 1) for x in off]
        # a pad grows by half its clearance c: linear in c, 3 c/(2 a) where the change goes as the radius cubed
        assert steps[0] / steps[1] == pytest.approx(10.0, rel=0.2)
        assert steps[1] / steps[2] == pytest.approx(10.0, rel=0.2)
        assert steps[2] < 4e-4


@pytest.mark.parametrize("clearance", [None, 1e-3])
@pytest.mark.parametrize("below", [((), "open"), (BOARD, "driven")])
def test_a_floating_finger_among_driven_neighbours_changes_nothing(clearance, below):
    # all driven at 1 V: the finger floats to 1 V, and the pad loses C12 of it, as known from the grounded arrangement
    found = touch(around="driven", clearance=clearance, below=below)
    mutual = touch(around="grounded", clearance=clearance, below=(below[0], "open" if below[1] == "open" else "ground"))
    assert found.change_farad - mutual.pad_finger_farad == pytest.approx(0.0, abs=1e-7 * found.change_farad)
    assert found.self_untouched_farad == pytest.approx(0.0, abs=1e-22)


def test_a_floating_finger_still_changes_a_pad_alone_but_less():
    found = touch(around="alone")
    floating = found.change_farad - found.pad_finger_farad**2 / found.finger_total_farad
    assert 0 < floating < 0.5 * found.change_farad


def test_pair_is_what_the_three_terminals_say_and_near_half_of_two_discs():
    found = touch(around="alone")
    c11, c12, c22 = found.self_touched_farad, -found.pad_finger_farad, found.finger_total_farad
    assert found.pair_farad == pytest.approx((c11 * c22 - c12**2) / (c11 + c22 + 2 * c12), rel=1e-12)
    assert touch(around="alone", below=(BOARD, "ground")).pair_farad is None
    assert touch(around="driven").pair_farad is None


@pytest.mark.parametrize("below", [((), "open"), (BOARD, "ground")])
def test_plane_among_driven_neighbours_is_the_plate_and_grounded_self_has_no_limit(below):
    driven, grounded = touch(around="driven", below=below), touch(around="grounded", below=below)
    assert driven.change_high_farad == pytest.approx(EPS0 * np.pi * 4e-3**2 / (3e-3 / 7.0), rel=1e-12)
    assert grounded.self_untouched_farad is grounded.self_touched_farad is None
    base = EPS0 * np.pi * 4e-3**2 / (1.6e-3 / 4.4) if below[0] else 0.0
    assert driven.self_untouched_farad == pytest.approx(base, rel=1e-12)


def test_self_among_grounded_neighbours_grows_as_the_logarithm_of_the_clearance():
    selves = [touch(around="grounded", clearance=c).self_untouched_farad for c in (4e-5, 4e-6, 4e-7)]
    # the edge charge: 2 a eps0 S ln(1/c), S = 7 + 1
    slope = 2 * 4e-3 * EPS0 * 8.0 * np.log(10.0)
    assert selves[2] - selves[1] == pytest.approx(slope, rel=5e-3)


def test_far_neighbours_leave_a_pad_alone():
    far = touch(around="grounded", clearance=0.4, below=(BOARD, "ground"))
    alone = touch(around="alone", below=(BOARD, "ground"))
    assert far.self_untouched_farad == pytest.approx(alone.self_untouched_farad, rel=1e-5)
    assert far.change_farad == pytest.approx(alone.change_farad, rel=1e-4)


def test_driven_shield_lifts_a_pad_alone():
    found = touch(around="alone", below=(BOARD, "driven"))
    assert found.self_untouched_farad == 0.0
    assert found.change_farad == found.pad_finger_farad == found.self_touched_farad


@pytest.mark.parametrize("neighbours", ["grounded", "driven"])
def test_below_is_of_no_matter_to_the_change_without_clearance(neighbours):
    changes = {
        touch(around=neighbours, below=b).change_farad for b in (((), "open"), (BOARD, "ground"), (BOARD, "open"))
    }
    assert max(changes) == pytest.approx(min(changes), rel=1e-7)


def test_thin_cover_is_a_plate():
    found = touch((FieldLayer(4e-5, 7.0),), around="driven")
    assert found.edge_factor == pytest.approx(1.0, abs=0.01)


@pytest.mark.parametrize("neighbours", AROUND)
@pytest.mark.parametrize(
    ("finger", "thickness"),
    [(0.05, 0.01), (0.2, 0.005), (1.0, 0.005), (1.001, 0.01), (1.5, 0.01), (5.0, 0.01), (20.0, 0.1), (1.0, 100.0)],
)
def test_hard_shapes_keep_their_error(neighbours, finger, thickness):
    kind = {"cover": (FieldLayer(4e-3 * thickness, 7.0),), "finger": finger * 8e-3, "around": neighbours}
    found, finer = touch(**kind), touch(**kind, tolerance=1e-8)
    assert found.error <= 1e-5
    assert found.change_farad == pytest.approx(finer.change_farad, rel=1e-6)
    assert found.change_farad <= found.change_high_farad * (1 + 1e-6)


@pytest.mark.parametrize("neighbours", ["grounded", "driven"])
@pytest.mark.parametrize(("clearance", "thickness"), [(2e-3, 1e-4), (8e-3, 5e-4), (4e-2, 3e-3)])
def test_wide_clearances_keep_their_error(neighbours, clearance, thickness, monkeypatch):
    kind = {"cover": (FieldLayer(thickness, 7.0),), "around": neighbours, "clearance": clearance}
    found = touch(**kind)
    monkeypatch.setattr(discs, "ORDERS", (8, 20))
    monkeypatch.setattr(gap, "LEAST_ORDER", 20)  # many more terms in the gap
    finer = touch(**kind, tolerance=1e-9)
    assert found.error <= 1e-5
    for name in ("change_farad", "change_high_farad", "self_untouched_farad"):
        assert getattr(found, name) == pytest.approx(getattr(finer, name), rel=1e-6, abs=1e-22)


@pytest.mark.parametrize("neighbours", AROUND)
def test_a_thin_coating_is_a_small_step(neighbours):
    bare = touch(around=neighbours).change_farad
    steps = [1 - touch((FieldLayer(t, 1.5), *GLASS), around=neighbours).change_farad / bare for t in (1e-6, 3e-6, 1e-5)]
    assert 0 < steps[0] < steps[1] < steps[2] < 0.05


def test_loss_and_empty_layers_count_for_nothing():
    plain = touch()
    dressed = touch((FieldLayer(3e-3, 7.0 - 0.1j), FieldLayer(0.0, 3.0)))
    assert dressed == plain
    assert plain.clearance_m is None
    assert touch(clearance=1e-3).clearance_m == 1e-3
    assert touch(around="alone", clearance=1e-3).clearance_m is None


@given(st.floats(max_value=0.0) | st.just(float("inf")) | st.just(float("nan")))
@settings(max_examples=10, deadline=None)
def test_sizes_that_are_none_are_refused(size):
    for word in ("pad", "finger"):
        with pytest.raises(InputError, match="not a length above 0"):
            touch(**{word: size})


@pytest.mark.parametrize(
    ("change", "code"),
    [
        ({"around": "lonely"}, "word-unknown"),
        ({"below": (BOARD, "earth")}, "word-unknown"),
        ({"below": ((), "ground")}, "below-empty"),
        ({"cover": ()}, "no-thickness"),
        ({"cover": (FieldLayer(1e-3, -2.0),)}, "out-of-range"),
        ({"cover": (FieldLayer(1e-3, float("nan")),)}, "out-of-range"),
        ({"cover": (FieldLayer(-1e-3, 3.0),)}, "out-of-range"),
        ({"clearance": -1e-3}, "out-of-range"),
        ({"clearance": float("nan")}, "out-of-range"),
        ({"tolerance": 0.0}, "out-of-range"),
        ({"cover": (FieldLayer(2e-6, 3.0),)}, "cover-too-thin"),
    ],
)
def test_what_cannot_be_solved_is_refused_with_its_reason(change, code):
    with pytest.raises(InputError) as raised:
        touch(**change)
    assert raised.value.code == code


def test_a_solution_short_of_its_tolerance_is_refused(monkeypatch):
    monkeypatch.setattr(discs, "ORDERS", (4,))
    with pytest.raises(InputError, match=r"relative error of .*, not 1e-05"):
        touch((FieldLayer(4e-5, 7.0),))

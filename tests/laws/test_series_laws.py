"""Laws of the series sum and of the stack's text, as properties."""

from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st

from stackdb.stack.series import Slab, series_gap

thickness = st.floats(1e-7, 1e-2)
permittivity = st.floats(1.0, 200.0)
slab = st.builds(Slab, thickness, permittivity)
stacks = st.lists(slab, min_size=1, max_size=8)


def close(a: float, b: float) -> bool:
    return abs(a - b) <= 1e-12 * max(abs(a), abs(b))


@given(stacks, st.randoms())
def test_order_does_not_matter(layers, random):
    shuffled = list(layers)
    random.shuffle(shuffled)
    assert close(series_gap(layers).gap_m, series_gap(shuffled).gap_m)


@given(stacks, st.floats(0.01, 0.99))
def test_splitting_a_layer_changes_nothing(layers, share):
    first = layers[0]
    split = [
        first._replace(thickness_m=share * first.thickness_m),
        first._replace(thickness_m=(1 - share) * first.thickness_m),
    ]
    assert close(series_gap(layers).gap_m, series_gap(split + layers[1:]).gap_m)


@given(stacks, permittivity)
def test_a_layer_of_no_thickness_changes_nothing(layers, eps):
    assert series_gap(layers).gap_m == series_gap([*layers, Slab(0.0, eps)]).gap_m


@given(stacks, st.floats(1.0, 10.0))
def test_scaling(layers, factor):
    base = series_gap(layers)
    thicker = series_gap([Slab(s.thickness_m * factor, s.permittivity) for s in layers])
    denser = series_gap([Slab(s.thickness_m, s.permittivity * factor) for s in layers])
    assert close(thicker.effective_permittivity, base.effective_permittivity)
    assert close(thicker.gap_m, base.gap_m * factor)
    assert close(denser.effective_permittivity, base.effective_permittivity * factor)


@given(stacks)
def test_the_effective_value_lies_between_its_layers(layers):
    eps = [s.permittivity for s in layers]
    found = series_gap(layers).effective_permittivity
    assert min(eps) * (1 - 1e-12) <= found <= max(eps) * (1 + 1e-12)


@given(stacks, slab, st.floats(1.01, 5.0))
def test_monotony(layers, extra, factor):
    base = series_gap([*layers, extra]).gap_m
    assert series_gap([*layers, extra._replace(thickness_m=extra.thickness_m * factor)]).gap_m > base
    assert series_gap([*layers, extra._replace(permittivity=extra.permittivity * factor)]).gap_m < base

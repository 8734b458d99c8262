"""The field solution against a general finite-element library (scikit-fem) on two layered cases, within its own error."""

from __future__ import annotations

import warnings

import pytest

bench_fields = pytest.importorskip("bench_fields")


@pytest.mark.parametrize(
    ("cover", "pad_m", "finger_m"),
    [
        (((125e-6, 3.2), (150e-6, 3.5), (1.8e-3, 7.0)), 4e-3, 4e-3),
        (((0.2e-3, 3.5), (3.0e-3, 2.8)), 3e-3, 5e-3),
    ],
)
def test_layered_pad_and_finger(cover, pad_m, finger_m):
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        coarse, fine = (
            bench_fields.finite_elements(size, cover=cover, pad_m=pad_m, finger_m=finger_m) for size in (4e-5, 1e-5)
        )
    ours = bench_fields.ours(cover, pad_m, finger_m).change_farad
    # the edge singularity makes the elements converge with their size: what is left is about a third of the last step
    assert abs(fine / ours - 1) < abs(coarse / fine - 1)
    assert fine == pytest.approx(ours, rel=1e-3)

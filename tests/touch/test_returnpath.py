"""The way back to ground."""

from __future__ import annotations

import pytest

from stackdb.touch.returnpath import ReturnPath, change_with_return, mutual_change, self_change

C11, C12, C22, UNTOUCHED = 2.0e-12, -0.8e-12, 3.0e-12, 1.5e-12


def test_an_earthed_finger_and_a_floating_one():
    earthed = self_change(
        c11_farad=C11, c12_farad=C12, c22_farad=C22, untouched_farad=UNTOUCHED, path=ReturnPath(1e6, 1e6)
    )
    assert earthed == pytest.approx(C11 - UNTOUCHED)
    floating = self_change(
        c11_farad=C11, c12_farad=C12, c22_farad=C22, untouched_farad=UNTOUCHED, path=ReturnPath(1e-30, 1e-30)
    )
    assert floating == pytest.approx(C11 - C12**2 / C22 - UNTOUCHED)


def test_the_two_forms_agree():
    path = ReturnPath(100e-12, 5e-12)
    one = self_change(c11_farad=C11, c12_farad=C12, c22_farad=C22, untouched_farad=UNTOUCHED, path=path)
    other = change_with_return(
        change_farad=C11 - UNTOUCHED, pad_finger_farad=-C12, finger_total_farad=C22, path=path, driven=False
    )
    assert one == pytest.approx(other)


def test_a_floating_device_retransmits():
    given = {
        "change_at_ground_farad": -0.2e-12,
        "drive_finger_farad": 2e-12,
        "sense_finger_farad": 2e-12,
        "finger_total_farad": 5e-12,
    }
    assert mutual_change(path=ReturnPath(100e-12), **given) < 0
    assert mutual_change(path=ReturnPath(1e-15, 1e-15), **given) > 0


def test_body_and_device_in_series():
    assert ReturnPath(100e-12).series_farad == 100e-12
    assert ReturnPath(100e-12, 25e-12).series_farad == pytest.approx(20e-12)

"""The distributed RC line and charge sharing against values computed without this code (collection head P7)."""

from __future__ import annotations

import pytest

from stackdb.fields import line
from stackdb.touch import readout

STRIPS = {  # length over diffusion length: |tanh(gL)/(gL)|
    0.25: 0.9987870960957,
    0.5: 0.98114436947787,
    1.0: 0.79017062941393,
    2.0: 0.36211971164279,
}


@pytest.mark.parametrize("length", STRIPS)
def test_charge_of_a_strip(length):
    assert abs(line.strip_charge(length)) == pytest.approx(STRIPS[length], rel=1e-11)


def test_complex_parts_of_a_strip():
    found = line.strip_charge(1.0)
    assert (found.real, found.imag) == pytest.approx((0.677837956329, -0.40608537101), rel=1e-10)


def test_voltage_at_the_open_end():
    assert abs(line.strip_end_voltage(0.5)) == pytest.approx(0.97978423210286, rel=1e-11)
    # far beyond the diffusion length nothing arrives, and nothing overflows
    assert abs(line.strip_end_voltage(400.0)) < 1e-100


def test_a_disc_driven_at_its_rim():
    assert abs(line.rim_driven_disc(0.5)) == pytest.approx(0.99676361924845, rel=1e-11)
    assert line.rim_driven_disc(0.0) == line.strip_charge(0.0) == 1.0


def test_diffusion_length():
    found = line.diffusion_length(frequency_hz=1e6, sheet_ohm=150.0, capacitance_per_area=1e-6)
    assert found == pytest.approx(0.0460658865961781, rel=1e-12)


@pytest.mark.parametrize(("level", "expected"), [(0.1, 0.130159), (0.5, 0.378747838271), (0.9, 1.03110498228)])
def test_time_of_the_step(level, expected):
    # the first is known to six digits only
    assert line.time_to_level(level) == pytest.approx(expected, rel=1e-9 if level > 0.1 else 3e-6)
    assert line.step_response(0.0) == 0.0


def test_charge_sharing_voltages():
    one = readout.shared_voltage(supply_v=3.3, unknown_farad=10e-12, integrator_farad=40e-12)
    assert one == pytest.approx(0.66, rel=1e-12)
    many = readout.voltage_after(supply_v=3.3, unknown_farad=10e-12, integrator_farad=10e-9, transfers=100)
    assert many == pytest.approx(0.31388731803733, rel=1e-11)
    count = readout.transfers_to(threshold_share=0.5, unknown_farad=10e-12, integrator_farad=10e-9)
    assert count == pytest.approx(693.4936964168, rel=1e-10)
    assert readout.signal_to_noise(counts=50.0, noise=10.0) == 5.0


def test_repeated_sharing_is_sharing_repeated():
    volts = 0.0
    for _ in range(25):
        volts = readout.shared_voltage(supply_v=1.0, unknown_farad=3.0, integrator_farad=40.0, before_v=volts)
    assert volts == pytest.approx(
        readout.voltage_after(supply_v=1.0, unknown_farad=3.0, integrator_farad=40.0, transfers=25)
    )

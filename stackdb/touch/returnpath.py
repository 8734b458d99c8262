"""The way back to ground: pad, finger and ground are three terminals, and the device may float."""

from __future__ import annotations

from typing import NamedTuple

BODY_FARAD = 100e-12  # human-body models use 100 to 300 pF; common practice
EARTHED_FARAD = float("inf")


class ReturnPath(NamedTuple):
    """Body and device capacitance to ground [F]; infinite where the device is earthed."""

    body_farad: float = BODY_FARAD
    device_farad: float = EARTHED_FARAD

    @property
    def series_farad(self) -> float:
        """Body and device in series [F]."""
        if self.device_farad == EARTHED_FARAD:
            return self.body_farad
        return self.body_farad * self.device_farad / (self.body_farad + self.device_farad)


def in_series(plate_farad: float, path: ReturnPath) -> float:
    """What is left [F] of a plate capacitance [F] with the way back in series.

    Stands in while sizes are unknown, and supposes all covered electrodes driven together.
    """
    back = path.series_farad
    return plate_farad * back / (plate_farad + back)


def self_change(
    *, c11_farad: float, c12_farad: float, c22_farad: float, untouched_farad: float, path: ReturnPath
) -> float:
    """Change [F] of a self measurement by a finger whose way back is ``path``: C11 - C12^2/(C22 + C_return) - C_untouched.

    Capacitances [F] of the three-terminal network, ``c12_farad`` negative; Maxwell's coefficients of capacitance.
    """
    return c11_farad - c12_farad**2 / (c22_farad + path.series_farad) - untouched_farad


def change_with_return(
    *, change_farad: float, pad_finger_farad: float, finger_total_farad: float, path: ReturnPath, driven: bool
) -> float:
    """Change [F] by a finger with a way back, from the change by a finger at ground [F].

    The finger rises to V = C_f/(C_22 + C_return), where C_f is what drives it: the pad, or among driven neighbours all that it
    covers; the pad's charge then falls by V C_12. C_22 counts all that the finger covers.
    """
    driving = finger_total_farad if driven else pad_finger_farad
    rise = driving / (finger_total_farad + path.series_farad)
    return change_farad - rise * pad_finger_farad


def mutual_change(
    *,
    change_at_ground_farad: float,
    drive_finger_farad: float,
    sense_finger_farad: float,
    finger_total_farad: float,
    path: ReturnPath,
) -> float:
    """Change [F] of a mutual measurement: the change at ground plus C_tf C_fr/(C_ff + C_return).

    Turns positive when the device floats: the finger sends on what it receives (retransmission).
    """
    passed = drive_finger_farad * sense_finger_farad / (finger_total_farad + path.series_farad)
    return change_at_ground_farad + passed

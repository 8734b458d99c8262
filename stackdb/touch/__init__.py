"""Whether a touch is seen: ways of touching, the way back to ground, readout, and the three verdicts."""

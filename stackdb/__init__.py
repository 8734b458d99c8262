"""Layered dielectrics in front of a touch sensor, with sourced permittivities and ranges that hold."""

__version__ = "0.1.0"

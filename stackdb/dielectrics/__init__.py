"""Dielectric models as pure numbers: relaxation, mixing rules, water, salt water, ice, air."""

"""Rendering: terminal, JSON, pictures. Nothing here computes; the same result feeds them all."""

"""Answers about stacks: compose, compare, size, tolerance, change note."""

"""Judging recorded temperature profiles: what was measured, against what it had to be."""

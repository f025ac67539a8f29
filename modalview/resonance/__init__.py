"""Avoidance bands, verdicts over all tolerances, and whether an excitation drives a mode."""

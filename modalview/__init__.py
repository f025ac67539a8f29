"""Keepclear: keep a machine's speeds clear of its natural frequencies."""

__version__ = "0.1.0"

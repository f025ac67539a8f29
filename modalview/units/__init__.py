"""Typed values with units: one parser for the file and the window, over a fixed table."""

"""Model files in and out."""

from modalview.store.reading import parse_model, read_model
from modalview.store.writing import dump_model

__all__ = ["dump_model", "parse_model", "read_model"]

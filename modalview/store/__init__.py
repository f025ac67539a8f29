"""Model files in and out."""

from modalview.store.reading import parse_model, read_model
from modalview.store.saving import FileStamp, open_model, save_model, stamp
from modalview.store.writing import dump_model

__all__ = ["FileStamp", "dump_model", "open_model", "parse_model", "read_model", "save_model", "stamp"]

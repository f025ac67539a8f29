"""Where resources and example models are found, installed or in a checkout."""

from pathlib import Path

_PACKAGE = Path(__file__).resolve().parent


def _place(installed: str, checkout: str) -> Path:
    inside = _PACKAGE / installed
    return inside if inside.is_dir() else _PACKAGE.parent / checkout


def resources() -> Path:
    """Return the folder of the schema, the style sheet, the icons and the texts."""
    return _place("_resources", "resources")


def demo_models() -> Path:
    """Return the folder of the bundled example models."""
    return _place("_demo_models", "demo_models")

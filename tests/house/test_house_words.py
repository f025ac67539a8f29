"""Nothing in the checkout speaks of the machine it was written on."""

import re
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
TEXTS = {".py", ".md", ".toml", ".json", ".qss", ".keepclear", ""}
# A home, a working or a temporary folder of some machine.
PLACE = re.compile(r"(?<![\w.:])/(?:home|root|work|tmp|Users)/\w")


def test_no_path_of_a_machine():
    folders = [ROOT / name for name in ("modalview", "resources", "demo_models", "tests", ".ci")]
    files = [file for folder in folders for file in folder.rglob("*") if file.is_file()]
    files += [file for file in ROOT.iterdir() if file.is_file()]
    texts = [file for file in files if file.suffix in TEXTS and "__pycache__" not in file.parts]
    assert len(texts) > 100
    found = [file.name for file in texts if PLACE.search(file.read_text(encoding="utf-8", errors="replace"))]
    assert found == []

"""The README's table of tools names every tool of the palette with its key."""

import re
from pathlib import Path

from modalview.ui.sketch.kinds import TOOLS

README = (Path(__file__).resolve().parents[2] / "README.md").read_text(encoding="utf-8")


def test_every_tool_stands_in_the_table_with_its_key():
    table = README.split("| key | tool | how |")[1].split("\n\n")[0]
    rows = re.findall(r"^\| ([A-Z, ]+) \| ([^|]+) \|", table, re.MULTILINE)
    told = {
        key: words
        for keys, names in rows
        for key, words in zip(keys.split(", "), names.split(", "), strict=True)
    }
    assert {tool.key for tool in TOOLS} == set(told)
    assert [tool.name for tool in TOOLS if tool.name.split()[0] not in told[tool.key]] == []

"""Doubts about a model, as the command line prints them."""

import json

import pytest

from modalview.cli import main


@pytest.fixture
def stiff(tmp_path):
    """A model with one spring three thousand times as stiff as the others."""
    bodies = [{"id": f"m{i}", "mass": "100 kg"} for i in range(4)]
    ends = [{"support": "g"}, *({"body": one["id"]} for one in bodies)]
    links = [
        {"id": f"k{i}", "kind": "spring", "from": ends[i], "to": ends[i + 1], "stiffness": stiffness}
        for i, stiffness in enumerate(["4e8 N/m", "4e8 N/m", "1.2e12 N/m", "4e8 N/m"])
    ]
    document = {"format": "keepclear", "version": 1, "title": "t", "motion": "single axis"}
    document |= {"bodies": bodies, "supports": [{"id": "g"}], "links": links}
    path = tmp_path / "stiff.keepclear"
    path.write_text(json.dumps(document), encoding="utf-8")
    return str(path)


def test_bounds_prints_doubts_under_a_heading_each_with_its_effect(stiff, capsys):
    assert main(["bounds", stiff]) == 0
    lines = capsys.readouterr().out.splitlines()
    first = lines.index("Doubts:") + 1
    assert lines[first].startswith("  Spring k2: stiffness 1.2e12 N/m is 3000 times the median")
    assert any(line.startswith("    It acts as rigid") for line in lines[first:])


def test_json_holds_each_doubt_with_rule_parts_text_and_effect(stiff, capsys):
    main(["bounds", "--json", stiff])
    [doubt] = json.loads(capsys.readouterr().out)["doubts"]
    assert list(doubt) == ["rule", "parts", "text", "effect"]
    assert (doubt["rule"], doubt["parts"]) == ("value far off", ["k2"])


def test_nothing_is_printed_where_nothing_is_doubted(capsys):
    from modalview.places import demo_models

    main(["bounds", str(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")])
    assert "Doubts" not in capsys.readouterr().out

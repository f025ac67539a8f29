"""check --exact: the same verdicts, proven without rounding."""

import json

import pytest

from modalview.cli import main
from modalview.factor import exactly
from modalview.factor.exactly import PLAIN_LIMIT
from modalview.places import demo_models

VERDICTS = ("verdict", "modes_inside", "modes_possible", "modes_certain", "deciding_case")


def checked(capsys, *words):
    code = main(["check", *map(str, words)])
    return code, capsys.readouterr()


@pytest.mark.parametrize(
    "path", sorted(demo_models().rglob("*.keepclear"))[::4], ids=lambda path: path.parent.name
)
def test_demonstration_models_keep_their_verdicts(capsys, path):
    (plain_code, plain), (exact_code, exact) = (
        checked(capsys, path, "--json"),
        checked(capsys, path, "--json", "--exact"),
    )
    ours, proven = json.loads(plain.out), json.loads(exact.out)
    assert exact_code == plain_code
    assert {check["proven"] for check in ours["checks"]} == {"by counts"}
    assert {check["proven"] for check in proven["checks"]} == {"exactly"}
    for one, other in zip(ours["checks"], proven["checks"], strict=True):
        assert [one[key] for key in VERDICTS] == [other[key] for key in VERDICTS]


def test_the_text_says_proven_exactly(capsys):
    path = demo_models() / "4-standby-generator-set" / "raised-mounts.keepclear"
    code, said = checked(capsys, path, "--exact")
    assert code == 0
    assert "proven exactly" in " ".join(said.out.split())


def test_a_model_beyond_the_limit_is_refused_with_the_limit(capsys, monkeypatch, tmp_path):

    monkeypatch.setattr(exactly, "find_spec", lambda _name: None)
    n = PLAIN_LIMIT + 1
    model = {
        "format": "keepclear",
        "version": 1,
        "title": "many",
        "motion": "single axis",
        "bodies": [{"id": f"b{i}", "mass": "1 kg"} for i in range(n)],
        "supports": [{"id": "g"}],
        "links": [
            {
                "id": f"k{i}",
                "kind": "spring",
                "from": {"body": f"b{i}"},
                "to": {"support": "g"},
                "stiffness": "1 N/m",
            }
            for i in range(n)
        ],
        "machines": [
            {"id": "m", "speed": "100 rpm", "margin": "5 %", "excitations": [{"id": "1x", "order": 1}]}
        ],
    }
    path = tmp_path / "many.keepclear"
    path.write_text(json.dumps(model), encoding="utf-8")
    code, said = checked(capsys, path, "--exact")
    assert code == 2
    assert f"{n} degrees of freedom; exact counts go to {PLAIN_LIMIT}" in said.err
    assert "gmpy2" in said.err

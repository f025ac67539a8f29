"""The layers hold: each package imports only those below it, and Qt stays in its places."""

from pathlib import Path

from importlinter import cli

ROOT = Path(__file__).resolve().parents[2]


def test_every_contract_of_the_layers_holds(capsys, tmp_path):
    status = cli.lint_imports(config_filename=str(ROOT / "pyproject.toml"), cache_dir=str(tmp_path))
    assert status == cli.EXIT_STATUS_SUCCESS, capsys.readouterr().out

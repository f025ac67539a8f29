"""The demonstration models: each opens, is saved back byte for byte, and says what its story says.

The figures were computed from K and M written down by hand, apart from the program.
"""

from dataclasses import dataclass
from functools import cache
from pathlib import Path

import pytest

from modalview.places import demo_models
from modalview.resonance.results import Verdict
from modalview.store import dump_model, read_model
from modalview.study import Request, Solution, solve

FREQUENCY_HZ = 0.01
RANGE_HZ = 0.05 + 1e-9  # printed to one decimal

CLEAR, NOMINAL, IN_BAND = Verdict.CLEAR, Verdict.NOMINAL_ONLY, Verdict.IN_BAND


@dataclass(frozen=True, slots=True)
class Row:
    """What one file must show: modes in Hz (with ranges over tolerance where printed) and verdicts."""

    file: str
    verdict: Verdict
    checks: dict[str, Verdict]
    modes: tuple[float | tuple[float, float, float], ...]
    rigid_body_modes: int = 0


PUMP, FAN, TRAIN = "1-cooling-water-pump", "2-supply-fan", "3-air-compressor-train"
SET, VERTICAL, VACUUM = "4-standby-generator-set", "5-raw-water-vertical-pump", "6-vacuum-pump-absorber"

ROWS = (
    Row(
        f"{PUMP}/as-built",
        IN_BAND,
        {"pump set/1x": IN_BAND, "pump set/2x": CLEAR, "pump set/vane": CLEAR},
        ((51.26, 44.1, 57.8), (140.99, 131.7, 150.2), (249.45, 231.3, 267.4)),
    ),
    Row(
        f"{PUMP}/full-grout",
        IN_BAND,
        {"pump set/1x": CLEAR, "pump set/2x": IN_BAND, "pump set/vane": IN_BAND},
        ((106.89, 96.3, 116.5), (144.35, 134.4, 154.2), (342.07, 304.1, 378.5)),
    ),
    Row(
        f"{PUMP}/part-grout-and-anchors",
        CLEAR,
        {"pump set/1x": CLEAR, "pump set/2x": CLEAR, "pump set/vane": CLEAR},
        ((68.06, 62.2, 73.8), (141.46, 132.2, 150.7), (261.01, 242.7, 279.1)),
    ),
    Row(
        f"{FAN}/steel-legs",
        IN_BAND,
        {"fan/1x": IN_BAND, "fan/12x": CLEAR},
        ((13.50, 11.4, 15.5), (24.92, 21.8, 28.0), (48.22, 42.0, 54.2), (80.48, 70.2, 90.4)),
    ),
    Row(
        f"{FAN}/rubber-mounts",
        IN_BAND,
        {"fan/1x": IN_BAND, "fan/12x": CLEAR},
        (7.82, 11.89, 21.11, 27.32),
    ),
    Row(
        f"{FAN}/steel-springs",
        IN_BAND,
        {"fan/1x": IN_BAND, "fan/12x": CLEAR},
        ((1.69, 1.56, 1.81), (2.65, 2.45, 2.85), (5.47, 5.06, 5.88), (15.99, 13.5, 18.3)),
    ),
    Row(
        f"{TRAIN}/as-built",
        IN_BAND,
        {"train/1x low": IN_BAND, "train/2x low": CLEAR, "train/1x high": NOMINAL, "train/line": NOMINAL},
        (0.0, (24.58, 22.8, 26.5), (87.73, 81.2, 94.4)),
        rigid_body_modes=1,
    ),
    Row(
        f"{TRAIN}/stiffer-low-speed-coupling",
        IN_BAND,
        {"train/1x low": CLEAR, "train/2x low": CLEAR, "train/1x high": NOMINAL, "train/line": IN_BAND},
        (0.0, (33.56, 31.1, 36.1), (90.87, 84.1, 97.8)),
        rigid_body_modes=1,
    ),
    Row(
        f"{TRAIN}/both-couplings-changed",
        CLEAR,
        {"train/1x low": CLEAR, "train/2x low": CLEAR, "train/1x high": CLEAR, "train/line": CLEAR},
        (0.0, (32.68, 30.3, 35.2), (80.10, 74.2, 86.2)),
        rigid_body_modes=1,
    ),
    Row(
        f"{SET}/static-stiffness",
        CLEAR,
        {"genset/0.5x": CLEAR, "genset/1x": CLEAR, "genset/3x": CLEAR},
        (3.27, 4.04, 4.88, 6.44, 7.16, 9.59),
    ),
    Row(
        f"{SET}/dynamic-stiffness",
        IN_BAND,
        {"genset/0.5x": IN_BAND, "genset/1x": CLEAR, "genset/3x": CLEAR},
        (4.38, 5.42, 6.55, 8.65, 9.60, (12.87, 11.6, 14.2)),
    ),
    Row(
        f"{SET}/raised-mounts",
        CLEAR,
        {"genset/0.5x": CLEAR, "genset/1x": CLEAR, "genset/3x": CLEAR},
        (6.23, 6.64, 6.80, 7.61, 8.72, (8.92, 8.0, 9.8)),
    ),
    Row(
        f"{VERTICAL}/design",
        NOMINAL,
        {"pump/1x": NOMINAL},
        (7.24, (24.41, 21.1, 27.1), 65.23),
    ),
    Row(f"{VERTICAL}/after-bump-test", IN_BAND, {"pump/1x": IN_BAND}, (6.13, 17.00, 65.08)),
    Row(f"{VERTICAL}/re-grouted", CLEAR, {"pump/1x": CLEAR}, (7.37, (26.50, 24.2, 28.7), 65.28)),
    Row(f"{VACUUM}/no-absorber", IN_BAND, {"vacuum pump/1x": IN_BAND}, ((19.89, 18.9, 20.9),)),
    Row(f"{VACUUM}/absorber-105kg", NOMINAL, {"vacuum pump/1x": NOMINAL}, (17.69, 22.09)),
    Row(
        f"{VACUUM}/absorber-210kg",
        CLEAR,
        {"vacuum pump/1x": CLEAR},
        ((16.91, 16.3, 17.5), (23.14, 22.3, 24.0)),
    ),
    Row(
        f"{VACUUM}/absorber-210kg-damped",
        CLEAR,
        {"vacuum pump/1x": CLEAR},
        ((16.91, 16.3, 17.5), (23.14, 22.3, 24.0)),
    ),
)

per_row = pytest.mark.parametrize("row", ROWS, ids=lambda row: row.file)


def place(file: str) -> Path:
    return demo_models() / f"{file}.keepclear"


@cache
def solved(file: str) -> Solution:
    return solve(Request(read_model(place(file))))


def test_every_demonstration_model_is_in_the_table():
    found = sorted(demo_models().rglob("*.keepclear"))
    assert found == sorted(place(row.file) for row in ROWS)


@per_row
def test_saving_gives_back_the_same_bytes(row):
    assert dump_model(read_model(place(row.file))).encode() == place(row.file).read_bytes()


@per_row
def test_story_and_title_block_are_told(row):
    model = read_model(place(row.file))
    assert 4 <= model.notes.count(". ") + 1 <= 8
    block = model.title_block
    assert model.title
    assert all((block.owner, block.number, block.revision, block.date, block.author))


@per_row
def test_frequencies_are_as_printed(row):
    modes = solved(row.file).modes
    for printed, mode in zip(row.modes, modes, strict=False):
        nominal = printed[0] if isinstance(printed, tuple) else printed
        assert mode.frequency_hz == pytest.approx(nominal, abs=FREQUENCY_HZ), f"mode {mode.number}"
    # The vertical pump has three more modes, above 90 Hz, which its story does not need.
    assert len(modes) == (6 if row.file.startswith(VERTICAL) else len(row.modes))


@per_row
def test_tolerance_ranges_are_as_printed(row):
    for printed, mode in zip(row.modes, solved(row.file).modes, strict=False):
        if isinstance(printed, tuple):
            assert mode.range_hz == pytest.approx(printed[1:], abs=RANGE_HZ), f"mode {mode.number}"


@per_row
def test_verdicts_are_as_printed(row):
    solution = solved(row.file)
    assert {check.band.check: check.verdict for check in solution.checks} == row.checks
    assert solution.outlook.verdict == row.verdict


@per_row
def test_the_verdict_is_proven_before_the_solve(row):
    outlook = solved(row.file).outlook
    assert {check.band.check: check.verdict for check in outlook.checks} == row.checks
    assert not any(check.undecided for check in outlook.checks)


@per_row
def test_all_modes_are_found_and_rigid_body_modes_are_exactly_zero(row):
    raw = solved(row.file).raw
    assert raw.complete is True
    assert raw.rigid_body_modes == row.rigid_body_modes
    assert list(raw.frequency_hz[: row.rigid_body_modes]) == [0.0] * row.rigid_body_modes

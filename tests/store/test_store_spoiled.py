"""Mutated, truncated and random files raise the project's own errors with a message, never another."""

import random
from pathlib import Path

import pytest

from modalview.errors import FaultsError, FileAccessError
from modalview.store import dump_model, parse_model, read_model, reading

SAMPLES = [path.read_bytes() for path in sorted((Path(__file__).parent / "samples").glob("*.keepclear"))]
PIECES = [
    *(
        b'"',
        b"{",
        b"}",
        b"[",
        b"]",
        b",",
        b":",
        b"null",
        b"true",
        b"NaN",
        b"-Infinity",
        b"1e999",
        b"0",
        b"-1",
    ),
    *(b'""', b'"\\ud800"', b"\xff", b"\x00", b"\xef\xbb\xbf", b"{}", b"[]", b'"0 kg"', b'"-1 N/m"', b'"x"'),
    *(b'"from"', b'"value"', b'"ratio"', b'"space"', b'"plane"', b'"1e308 m"', b'"1e-300 m"', b"9" * 400),
]


def mutated(rng, data):
    data = bytearray(data)
    for _ in range(rng.randint(1, 4)):
        at = rng.randrange(len(data) + 1)
        width = rng.choice((0, 1, 1, 3, 8, 40))
        data[at : at + width] = rng.choice(PIECES) if rng.random() < 0.7 else rng.randbytes(rng.randint(0, 4))
    return bytes(data)


def token_swapped(rng, data):
    """Put one JSON text or number in the place of another: well-formed files that mean something else."""
    words = data.split(b'"')
    one, other = rng.randrange(1, len(words) - 1, 2), rng.randrange(1, len(words) - 1, 2)
    words[one] = words[other]
    return b'"'.join(words)


def spoiled(rng):
    data = rng.choice(SAMPLES)
    way = rng.randrange(4)
    if way == 0:
        return data[: rng.randrange(len(data))]
    if way == 1:
        return rng.randbytes(rng.randint(0, 300))
    return mutated(rng, data) if way == 2 else token_swapped(rng, data)


def refusal(data, path):
    """Read a spoiled file; return the messages it is refused with, or None when it still is a model."""
    path.write_bytes(data)
    try:
        model = read_model(path)
    except FaultsError as error:
        return [fault.reason for fault in error.faults]
    except FileAccessError as error:
        return [str(error)]
    assert parse_model(dump_model(model)) == model
    return None


def refusals(seed, number, path):
    rng = random.Random(seed)  # noqa: S311  (the same files in every run)
    found = [refusal(spoiled(rng), path) for _ in range(number)]
    return [messages for messages in found if messages is not None]


def test_two_hundred_spoiled_files(tmp_path):
    found = refusals(20260302, 200, tmp_path / "x.keepclear")
    assert all(messages and all(reason.strip() for reason in messages) for messages in found)
    assert len(found) > 120  # the rest is still a model


@pytest.mark.slow
def test_ten_thousand_spoiled_files(tmp_path):
    found = refusals(7, 10_000, tmp_path / "x.keepclear")
    assert all(messages and all(reason.strip() for reason in messages) for messages in found)
    assert len(found) > 6000


def test_a_path_that_is_no_file(tmp_path):
    with pytest.raises(FileAccessError, match="no such file"):
        read_model(tmp_path / "x.keepclear")
    with pytest.raises(FileAccessError, match="folder"):
        read_model(tmp_path)


def test_a_path_through_a_file(tmp_path):
    (tmp_path / "file").write_text("x")
    with pytest.raises(FileAccessError, match=r"cannot be read|no such file"):
        read_model(tmp_path / "file" / "x.keepclear")


def test_a_path_that_no_system_knows():
    with pytest.raises(FileAccessError, match="cannot be read"):
        read_model("x\0y.keepclear")


@pytest.mark.parametrize("encoding", ["utf-16", "latin-1"])
def test_other_encodings_are_named(tmp_path, encoding):
    path = tmp_path / "x.keepclear"
    path.write_bytes('{"format": "keepclear", "notes": "Gehäuse"}'.encode(encoding))
    with pytest.raises(FaultsError, match="not UTF-8"):
        read_model(path)


def test_a_file_larger_than_any_model_is_refused(tmp_path, monkeypatch):
    monkeypatch.setattr(reading, "LARGEST_BYTES", 1_000_000)
    path = tmp_path / "x.keepclear"
    path.write_bytes(b" " * 1_000_001)
    with pytest.raises(FileAccessError, match="larger than 1 MB"):
        read_model(path)


def test_reading_changes_nothing_on_disk(tmp_path):
    path = tmp_path / "x.keepclear"
    path.write_bytes(b"{]")
    with pytest.raises(FaultsError):
        read_model(path)
    assert path.read_bytes() == b"{]"
    assert list(tmp_path.iterdir()) == [path]

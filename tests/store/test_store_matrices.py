"""Matrix Market files: what is read, and what is refused with its place and measure."""

import gzip

import numpy as np
import pytest

from modalview.errors import FileAccessError, FileFaultsError
from modalview.store.matrices import read_matrix, read_pair

BANNER = "%%MatrixMarket matrix"
SPRINGS = "3 3 5\n1 1 5\n2 1 -2\n2 2 3\n3 2 -1.0e0\n3 3 1\n"
WHOLE = np.array([[5.0, -2, 0], [-2, 3, -1], [0, -1, 1]])


@pytest.fixture
def write(tmp_path):
    def written(text, name="K.mtx"):
        path = tmp_path / name
        path.write_bytes(text if isinstance(text, bytes) else text.encode("utf-8"))
        return path

    return written


@pytest.mark.parametrize(
    "text",
    [
        f"{BANNER} coordinate real symmetric\n{SPRINGS}",
        f"{BANNER} COORDINATE Real Symmetric\r\n% älter\r\n\r\n{SPRINGS}".replace("\n", "\r\n"),
        f"{BANNER} coordinate integer symmetric\n{SPRINGS.replace('-1.0e0', '-1')}",
        f"{BANNER} coordinate real general\n3 3 7\n1 1 5\n1 2 -2\n2 1 -2\n2 2 3\n2 3 -1\n3 2 -1\n3 3 1\n",
        f"{BANNER} array real general\n3 3\n5\n-2\n0\n-2\n3\n-1\n0\n-1\n1\n",
        f"{BANNER} array real symmetric\n3 3\n5\n-2\n0\n\n3\n-1\n1",
    ],
)
def test_forms_that_are_read(write, text):
    matrix, notes = read_matrix(write(text))
    assert np.array_equal(matrix.toarray(), WHOLE)
    assert matrix.nnz == 7  # zeros are not stored
    assert notes == ()


def test_gzipped_is_read_by_its_content(write):
    packed = gzip.compress(f"{BANNER} coordinate real symmetric\n{SPRINGS}".encode())
    assert np.array_equal(read_matrix(write(packed, "K.mtx.gz"))[0].toarray(), WHOLE)


HEAD = f"{BANNER} coordinate real symmetric\n"
GENERAL = f"{BANNER} coordinate real general\n"


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("", "line 1: the file is empty"),
        ("hello\n", "line 1: must start with"),
        ("%%MatrixMarket\n1 1 1\n1 1 1\n", "line 1: must read"),
        (f"{BANNER} coordinate complex symmetric\n1 1 1\n1 1 1 0\n", "entries are complex"),
        (f"{BANNER} coordinate pattern symmetric\n1 1 1\n1 1\n", "places without values"),
        (f"{BANNER} coordinate real skew-symmetric\n2 2 1\n2 1 1\n", "skew-symmetric"),
        (f"{BANNER} coordinate complex hermitian\n1 1 1\n1 1 1 0\n", "complex"),
        ("%%MatrixMarket vector coordinate real general\n1 1\n", "a vector"),
        (HEAD, "ends before the line with the number"),
        (f"{HEAD}3 3\n", "line 2: needs the number of rows, columns and entries"),
        (f"{HEAD}3 3 -1\n", "line 2: needs the number"),
        (f"{HEAD}3 4 1\n1 1 1\n", "3 by 4; stiffness and mass are square"),
        (f"{HEAD}0 0 0\n", "has no rows"),
        (f"{HEAD}2 2 0\n", "holds no entry"),
        (f"{HEAD}2 2 9\n1 1 1\n", "announces 9 entries, more than"),
        (f"{HEAD}300000 300000 1\n1 1 1\n", "at most 200000"),
        (f"{BANNER} array real general\n9000 9000\n1\n", "at most 6000"),
        (f"{HEAD}2 2 2\n1 1 1\n", "announces 2 entries and holds 1: the file is cut off"),
        (f"{HEAD}2 2 1\n", "announces 1 entry and holds 0"),
        (f"{HEAD}2 2 1\n1 1 1\n2 2 1\n", "announces 1 entry and holds 2: the file goes on"),
        (f"{HEAD}2 2 2\n1 1 1\n2 2 4,5\n", "line 4: needs row, column and value, with a decimal point"),
        (f"{HEAD}2 2 2\n1 1 1\n2 2 1D3\n", "line 4"),
        (f"{HEAD}2 2 2\n1 1 1\n2 2\n", "line 4"),
        (f"{HEAD}2 2 2\n1 1 1 7\n2 2 1\n", "line 3"),
        (f"{HEAD}2 2 2\n1 1 1 7\n2 2 1 7\n", "line 3"),
        (f"{HEAD}2 2 2\n1 1 1\n% a note\n2 2 1\n", "line 4"),
        (f"{HEAD}2 2 2\n1 1 1\n2 2 nan\n", "entry 2: is nan; every entry must be a finite number"),
        (f"{HEAD}2 2 2\n1 1 -inf\n2 2 1\n", "entry 1: is -inf"),
        (f"{HEAD}2 2 2\n1 1 1e300\n2 2 1\n", "entry 1: is 1e300; no machine"),
        (f"{BANNER} coordinate integer symmetric\n1 1 1\n1 1 9007199254740995\n", "entry 1"),
        (f"{HEAD}2 2 2\n1 1 1\n3 2 1\n", "entry 2: place (3, 2) lies outside 1 to 2"),
        (f"{HEAD}2 2 2\n1 1 1\n0 1 1\n", "place (0, 1)"),
        (f"{HEAD}2 2 2\n1.5 1 1\n2 2 1\n", "place (1.5, 1)"),
        (f"{HEAD}2 2 3\n1 1 1\n2 2 1\n1 1 1\n", "1 entry is given more than once, the first at (1, 1)"),
        (f"{HEAD}2 2 3\n1 1 1\n2 1 1\n1 2 1\n", "2 entries are given more than once, the first at (1, 2)"),
        (f"{HEAD}2 2 1\n1 1 0\n", "every entry is zero"),
    ],
)
def test_faults_are_named(write, text, says):
    with pytest.raises(FileFaultsError) as refused:
        read_matrix(write(text))
    assert says in str(refused.value)
    assert "K.mtx" in str(refused.value)


def test_asymmetry_is_measured(write):
    text = f"{GENERAL}3 3 5\n1 1 8\n2 2 4\n3 3 4\n2 1 -1\n1 2 -1.02\n"
    with pytest.raises(FileFaultsError, match=r"= 0\.0025, worst at \(2, 1\) = -1 against \(1, 2\) = -1\.02"):
        read_matrix(write(text))


def test_rounding_across_the_diagonal_is_told_and_averaged(write):
    text = f"{GENERAL}2 2 4\n1 1 8\n2 2 4\n2 1 -1.0000000000000002\n1 2 -1\n"
    matrix, (note,) = read_matrix(write(text))
    assert matrix[0, 1] == matrix[1, 0]
    assert "2.8e-17 of the largest entry; their mean is taken" in note


def test_rounding_is_judged_against_the_soft_side_of_a_graded_matrix(write):
    text = f"{GENERAL}3 3 5\n1 1 1e12\n2 2 1\n3 3 1\n2 3 0.1\n3 2 0.1001\n"
    with pytest.raises(FileFaultsError, match="not symmetric"):
        read_matrix(write(text))


def test_damaged_gzip(write):
    packed = gzip.compress(f"{BANNER} coordinate real symmetric\n{SPRINGS}".encode())
    with pytest.raises(FileAccessError, match="damaged or cut off"):
        read_matrix(write(packed[:-12], "K.mtx.gz"))


def test_missing_file(tmp_path):
    with pytest.raises(FileAccessError, match="no such file"):
        read_matrix(tmp_path / "none.mtx")


def test_pair_needs_one_size(write):
    K = write(f"{HEAD}{SPRINGS}")
    M = write(f"{HEAD}2 2 2\n1 1 1\n2 2 1\n", "M.mtx")
    with pytest.raises(FileFaultsError, match=r"M\.mtx: has 2 rows, the stiffness .*K\.mtx has 3"):
        read_pair(K, M)


def test_masses_too_small_for_any_machine(write):
    K = write(f"{HEAD}{SPRINGS}")
    M = write(f"{HEAD}3 3 3\n1 1 1\n2 2 1e-90\n3 3 1\n", "M.mtx")
    with pytest.raises(FileFaultsError, match=r"M\.mtx, \(2, 2\): is 1e-90"):
        read_pair(K, M)


def test_without_mass_the_unit_mass_is_told(write):
    pair = read_pair(write(f"{HEAD}{SPRINGS}"))
    assert np.array_equal(pair.M.toarray(), np.eye(3))
    assert pair.notes == ("no mass matrix is given: 1 kg at every coordinate",)
    assert pair.words.endswith("K.mtx, unit mass")

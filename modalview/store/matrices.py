"""A stiffness and a mass matrix of others, from files in Matrix Market form.

The numbers are read by numpy's text reader, which refuses what it cannot read to the end of the word.
scipy's reader of this form was tried: it reads "606,16" as 606 and "1D3" as 1 without a word.

Form: R. F. Boisvert, R. Pozo, K. A. Remington (1996), The Matrix Market Exchange Formats: Initial Design,
NISTIR 5935.
"""

import os
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.errors import Fault, FileFaultsError
from modalview.store.matrices_text import Header, numbers, read_header, read_text
from modalview.store.reading import MOST_FREEDOMS
from modalview.units.show import short

Array = npt.NDArray[np.float64]

# A full matrix is filled entry by entry and then taken apart densely: 0.3 GB at this size.
LARGEST_FULL = 6000
# Entries (i, j) and (j, i) of a symmetric matrix that was computed differ by rounding; this share of
# sqrt(a_ii a_jj), or of the largest entry where a diagonal entry is not above zero, is taken for that.
ROUNDING = 1e-12
# Quotients by a mass of at least this size stay floating-point numbers.
LEAST_MASS = 1e-60


@dataclass(frozen=True, slots=True, eq=False)
class MatrixPair:
    """Stiffness and mass as given, symmetric, no entry stored that is zero.

    Parameters
    ----------
    K, M : csc_array (n, n)
        N/m and kg are assumed; both triangles.
    stiffness_file : Path
    mass_file : Path or None
        None: M is the identity.
    notes : tuple of str
        What was done to the matrices, in words.
    """

    K: sp.csc_array
    M: sp.csc_array
    stiffness_file: Path
    mass_file: Path | None
    notes: tuple[str, ...]

    @property
    def words(self) -> str:
        """The files in words: "stiffness K.mtx, mass M.mtx"."""
        mass = "unit mass" if self.mass_file is None else f"mass {self.mass_file}"
        return f"stiffness {self.stiffness_file}, {mass}"


def read_pair(stiffness: str | os.PathLike[str], mass: str | os.PathLike[str] | None = None) -> MatrixPair:
    """Read a stiffness matrix and, where there is one, a mass matrix.

    Parameters
    ----------
    stiffness, mass : path
        Matrix Market files, ``.mtx`` or ``.mtx.gz``.

    Raises
    ------
    FileAccessError
        A file cannot be read.
    FileFaultsError
        A file is no square, real, symmetric matrix of finite numbers, or the two do not fit together.
    """
    K, said = read_matrix(stiffness)
    n = K.shape[0]
    more: tuple[str, ...]
    if mass is None:
        M, more = sp.csc_array(sp.eye_array(n)), ("no mass matrix is given: 1 kg at every coordinate",)
    else:
        M, more = read_matrix(mass)
        if M.shape[0] != n:
            reason = (
                f"has {M.shape[0]} rows, the stiffness {stiffness} has {n}; both need the same coordinates"
            )
            raise FileFaultsError((Fault(str(mass), reason),))
        _check_size_of_masses(M, str(mass))
    return MatrixPair(K, M, Path(stiffness), None if mass is None else Path(mass), (*said, *more))


def read_matrix(path: str | os.PathLike[str]) -> tuple[sp.csc_array, tuple[str, ...]]:
    """Read one square symmetric matrix; returns it with notes on what was done to it.

    Raises
    ------
    FileAccessError, FileFaultsError
        As for `read_pair`. The measure of asymmetry is max |A - A^T| / max |A|.
    """
    name = str(path)
    text = read_text(Path(path))
    header = read_header(text, name)
    _check_form(header, name)
    found = numbers(text, header, name)
    matrix = _dense(found, header) if header.dense else _sparse(found, header, name)
    matrix.eliminate_zeros()
    if matrix.nnz == 0:
        raise FileFaultsError((Fault(name, "every entry is zero; there is nothing to study"),))
    if header.symmetric:
        return matrix, ()
    return _symmetric(matrix, name)


def _check_form(header: Header, name: str) -> None:
    rows, columns = header.rows, header.columns
    most = LARGEST_FULL if header.dense else MOST_FREEDOMS
    kind = "full (array)" if header.dense else "sparse (coordinate)"
    if rows != columns:
        reason = f"is {rows} by {columns}; stiffness and mass are square"
    elif rows < 1:
        reason = "has no rows; there is nothing to study"
    elif rows > most:
        reason = f"has {rows} rows; a {kind} matrix may have at most {most}"
    elif header.entries < 1:
        reason = "holds no entry; there is nothing to study"
    elif not header.dense and header.entries > rows * columns:
        reason = f"announces {header.entries} entries, more than its {rows} rows and columns can hold"
    else:
        return
    raise FileFaultsError((Fault(f"{name}, line {header.line}", reason),))


def _sparse(found: Array, header: Header, name: str) -> sp.csc_array:
    place = found[:, :2]
    wrong = (place != np.rint(place)) | (place < 1) | (place > header.rows)
    if wrong.any():
        at = int(np.flatnonzero(wrong.any(axis=1))[0])
        i, j = place[at]
        reason = f"place ({short(i, 15)}, {short(j, 15)}) lies outside 1 to {header.rows}"
        raise FileFaultsError((Fault(f"{name}, entry {at + 1}", reason),))
    i, j = (place - 1).astype(np.int64).T
    values = found[:, 2]
    if header.symmetric:
        off = i != j
        i, j = np.concatenate([i, j[off]]), np.concatenate([j, i[off]])
        values = np.concatenate([values, values[off]])
    _check_repeated(i, j, header.rows, name)
    return sp.csc_array((values, (i, j)), shape=(header.rows, header.rows))


def _check_repeated(i: npt.NDArray[np.int64], j: npt.NDArray[np.int64], rows: int, name: str) -> None:
    key = np.sort(i * rows + j)
    twice = key[1:][key[1:] == key[:-1]]
    if twice.size:
        row, column = divmod(int(twice[0]), rows)
        number = "1 entry is" if np.unique(twice).size == 1 else f"{np.unique(twice).size} entries are"
        reason = (
            f"{number} given more than once, the first at ({row + 1}, {column + 1}); a symmetric file holds "
            "one triangle only. Add up what belongs together and write each entry once"
        )
        raise FileFaultsError((Fault(name, reason),))


def _dense(found: Array, header: Header) -> sp.csc_array:
    n = header.rows
    if not header.symmetric:
        return sp.csc_array(found.reshape(n, n).T)
    full = np.zeros((n, n))
    column, row = np.triu_indices(n)  # the file goes down the columns of the lower triangle
    full[row, column] = found.ravel()
    full[column, row] = found.ravel()
    return sp.csc_array(full)


def _symmetric(matrix: sp.csc_array, name: str) -> tuple[sp.csc_array, tuple[str, ...]]:
    """Take a matrix given whole as symmetric, or refuse it with the measure of what is wrong."""
    apart = sp.coo_array(matrix - matrix.T)
    apart.eliminate_zeros()
    if apart.nnz == 0:
        return matrix, ()
    row, column = apart.coords
    size, largest = np.abs(apart.data), float(abs(matrix).max())
    diagonal = matrix.diagonal()
    both = diagonal[row], diagonal[column]
    positive = (both[0] > 0) & (both[1] > 0)
    scale = np.where(positive, np.sqrt(np.abs(both[0])) * np.sqrt(np.abs(both[1])), largest)
    worst = int(np.argmax(size))
    measure = f"{short(size[worst] / largest, 2)} of the largest entry"
    if bool(np.all(size <= ROUNDING * scale)):
        note = f"{name}: entries across the diagonal differ by at most {measure}; their mean is taken"
        return sp.csc_array((matrix + matrix.T) / 2), (note,)
    i, j = int(row[worst]), int(column[worst])
    reason = (
        f"is not symmetric: max |A - A^T| / max |A| = {short(size[worst] / largest, 3)}, worst at "
        f"({i + 1}, {j + 1}) = {short(matrix[i, j])} against ({j + 1}, {i + 1}) = {short(matrix[j, i])}; "
        "stiffness and mass are symmetric, and counts prove nothing otherwise"
    )
    raise FileFaultsError((Fault(name, reason),))


def _check_size_of_masses(M: sp.csc_array, name: str) -> None:
    diagonal = M.diagonal()
    tiny = np.flatnonzero((diagonal > 0) & (diagonal < LEAST_MASS))
    if tiny.size:
        at = int(tiny[0])
        size = short(diagonal[at])
        reason = f"is {size}; no mass is so small. A coordinate without mass has zeros only in its row"
        raise FileFaultsError((Fault(f"{name}, ({at + 1}, {at + 1})", reason),))

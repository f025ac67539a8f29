"""Reads the open matrices for the tests."""

import csv
import json
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import scipy.io
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil, pencil_of_matrices, pencil_of_terms

HERE = Path(__file__).parent
# Sets that may be read but not copied stand here where somebody keeps them.
BESIDE = HERE.parents[2] / "shared" / "data"


@dataclass(frozen=True, eq=False)
class OpenSet:
    """One pencil with its reference eigenvalues, as decimal strings, ascending."""

    name: str
    folder: Path
    K: sp.csc_array
    M: sp.csc_array
    lowest: tuple[str, ...]
    highest: tuple[str, ...]
    zero_modes: int
    finite: int

    def matrices(self) -> Pencil:
        """Return the pencil as given, without terms."""
        return pencil_of_matrices(self.K, self.M)

    def spectrum(self) -> tuple[str, ...] | None:
        """Return every finite eigenvalue where a file holds them."""
        path = self.folder.parent / "spectra" / f"{self.name}.txt"
        if not path.exists():
            return None
        return tuple(line for line in path.read_text().split("\n") if line and not line.startswith("#"))


def beside() -> bool:
    """Whether the sets that may not be copied are there."""
    return (BESIDE / "reference.json").exists()


def read(name: str) -> OpenSet:
    """Read one set, copied or beside the checkout."""
    root = HERE if (HERE / name).is_dir() else BESIDE
    entry = json.loads((root / "reference.json").read_text(encoding="utf-8"))[name]
    K = matrix(root / entry["files"]["K"])
    mass = entry["files"]["M"]
    M = sp.csc_array(sp.eye_array(K.shape[0])) if mass == "identity" else matrix(root / mass)
    return OpenSet(
        name=name,
        folder=root / name,
        K=K,
        M=M,
        lowest=tuple(entry["lowest_30digits"]),
        highest=tuple(entry["highest_30digits"]),
        zero_modes=entry["zero_modes"],
        finite=entry["n_finite"],
    )


def files(name: str) -> tuple[Path, Path | None]:
    """Return the files of K and M; None for a unit mass."""
    root = HERE if (HERE / name).is_dir() else BESIDE
    entry = json.loads((root / "reference.json").read_text(encoding="utf-8"))[name]["files"]
    return root / entry["K"], None if entry["M"] == "identity" else root / entry["M"]


def matrix(path: Path) -> sp.csc_array:
    """Read a Matrix Market file, gzipped or not, with both triangles."""
    return sp.csc_array(sp.coo_array(scipy.io.mmread(path, spmatrix=False)).astype(float))


def mikota_terms(name: str) -> Pencil:
    """Build the chain from its springs and masses."""
    rows = _table(HERE / name / "chain.csv")
    spring = np.array([float(row["spring_to_left"]) for row in rows])
    mass = np.array([float(row["mass"]) for row in rows])
    return pencil_of_terms(chain_rows(len(mass)), spring, mass)


def chain_rows(n: int) -> sp.csr_array:
    """Stretches of a chain whose spring i joins mass i to mass i - 1, the first to the ground."""
    return sp.csr_array(sp.eye_array(n) - sp.eye_array(n, k=-1))


def network_terms(name: str) -> Pencil:
    """Build a protein network from its nodes and springs, rigid-body motions included."""
    nodes, springs = _table(HERE / name / "nodes.csv"), _table(HERE / name / "springs.csv")
    mass = np.array([float(row["mass_dalton"]) for row in nodes])
    ends = np.array([[int(row["node_a"]) - 1, int(row["node_b"]) - 1] for row in springs])
    stiffness = np.array([float(row["stiffness"]) for row in springs])
    if name.startswith("gnm"):
        rows = _incidence(ends, len(nodes))
        return pencil_of_terms(rows, stiffness, mass, rigid_body=_pieces(rows))
    place = np.array([[float(row[f"{axis}_angstrom"]) for axis in "xyz"] for row in nodes])
    line = place[ends[:, 1]] - place[ends[:, 0]]
    line /= np.linalg.norm(line, axis=1)[:, None]
    joint = _incidence(ends, len(nodes))
    rows = sp.csr_array(sum(_along(joint, line[:, axis], axis) for axis in range(3)))
    return pencil_of_terms(rows, stiffness, np.repeat(mass, 3), rigid_body=_rigid_in_space(place))


def _incidence(ends: np.ndarray, nodes: int) -> sp.csr_array:
    springs = np.repeat(np.arange(len(ends)), 2)
    signs = np.tile([-1.0, 1.0], len(ends))
    return sp.csr_array((signs, (springs, ends.ravel())), shape=(len(ends), nodes))


def _along(joint: sp.csr_array, cosine: np.ndarray, axis: int) -> sp.csr_array:
    spread = sp.csr_array(sp.diags_array(cosine) @ joint).tocoo()
    shape = (joint.shape[0], 3 * joint.shape[1])
    return sp.csr_array((spread.data, (spread.coords[0], 3 * spread.coords[1] + axis)), shape=shape)


def _pieces(rows: sp.csr_array) -> np.ndarray:
    number, label = sp.csgraph.connected_components(abs(rows.T) @ abs(rows), directed=False)
    return np.eye(number)[label]


def _rigid_in_space(place: np.ndarray) -> np.ndarray:
    centred = place - place.mean(axis=0)
    shift = np.tile(np.eye(3), (len(place), 1))
    turn = np.concatenate([np.cross(np.eye(3), point).T for point in centred])
    return np.concatenate([shift, turn], axis=1)


def _table(path: Path) -> list[dict[str, str]]:
    with path.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))

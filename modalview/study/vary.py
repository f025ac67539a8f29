"""One or two values over ranges: curves of frequency that keep to their modes, verdicts at every point."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from time import perf_counter

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly, assemble
from modalview.assembly.chosen import GEOMETRY, Chosen, chosen, coordinates_of, values_of, with_numbers
from modalview.eigen.following import followed
from modalview.eigen.stacked import LARGEST_STACKED
from modalview.eigen.standard import eigenpairs
from modalview.errors import InputError
from modalview.model.addresses import look as stands_at
from modalview.model.parts import Model
from modalview.model.values import Value
from modalview.resonance.bands import bands
from modalview.resonance.results import Verdict
from modalview.study.chunks import Errand, in_chunks
from modalview.study.look import RAD_PER_HZ, judge_bands
from modalview.study.results import Request
from modalview.study.vary_results import EVEN, RATIO, Grid, GridRequest, Meet

Array = npt.NDArray[np.float64]

FEWEST, MOST, MOST_OF_TWO = 2, 2001, 201
# Between two points a curve is followed at halved steps where a shape is less like what it was than this.
ALIKE, HALVINGS = 0.6, 8
# Eigenvalues nearer than this share of themselves are taken as one: rounding mixes their vectors.
REPEATED = 1e-9
# Curves swap their shapes in a veering where each is more like what the other was than this.
SWAPPED = 0.5


@dataclass(frozen=True, slots=True, eq=False)
class RowTask:
    """Points along one value, worked on in a row, so that each mode can be followed."""

    model: Model
    chosen: tuple[Chosen, ...]
    points: Array
    judged: bool = True


@dataclass(frozen=True, slots=True, eq=False)
class RowFound:
    """What was found along a row: eigenvalues (p, modes) by line, verdicts, and where lines meet."""

    eigenvalues: Array
    verdicts: tuple[tuple[str, ...], ...]
    meets: tuple[tuple[int, int, int, bool], ...]


@dataclass(slots=True, eq=False)
class _Walker:
    """Walks along points and follows each mode by its shape."""

    task: RowTask
    assembly: Assembly
    places: npt.NDArray[np.int64] = field(default_factory=lambda: np.zeros(0, dtype=np.int64))

    def at(self, point: Array, before: Array | None) -> tuple[Array, Array]:
        """Return eigenvalues and standard vectors at values (values,); those of the point before, if any."""
        numbers = zip(self.task.chosen, point.tolist(), strict=True)
        self.assembly = assemble(with_numbers(self.task.model, numbers), self.assembly)
        pencil = self.assembly.pencil()
        values, vectors = eigenpairs(pencil.standard.toarray())
        values[: pencil.rigid_body.shape[1]] = 0.0
        values = np.maximum(values, 0.0)
        return values, vectors if before is None else aligned(values, before, vectors)

    def step(self, ends: tuple[Array, Array], before: Array, after: Array, halvings: int) -> Array:
        """Follow the modes from one point, with its vectors, to the next; return the vectors there."""
        # Orthonormal vectors of the standard form: their likeness is the MAC with M as weight.
        places, size = followed((before.T @ after) ** 2)
        if halvings and float(size.min(initial=1.0)) < ALIKE:
            middle = (ends[0] + ends[1]) / 2
            between = self.step((ends[0], middle), before, self.at(middle, before)[1], halvings - 1)
            return self.step((middle, ends[1]), between, self.at(ends[1], between)[1], halvings - 1)
        self.places = places[self.places]
        return after


def aligned(values: Array, before: Array, after: Array) -> Array:
    """Return vectors (m, m) with those of one frequency turned, among themselves, towards the vectors before.

    A solver may return any basis of the space of a repeated frequency.
    """
    turned = after
    edges = np.flatnonzero(np.diff(values) > REPEATED * values[1:]) + 1
    for start, stop in zip([0, *edges], [*edges, values.size], strict=True):
        if stop - start > 1:
            group = turned[:, start:stop]
            across = group.T @ before
            nearest = np.sort(np.argsort(-np.linalg.norm(across, axis=0), kind="stable")[: stop - start])
            left, _, right = np.linalg.svd(across[:, nearest])
            turned = turned.copy() if turned is after else turned
            turned[:, start:stop] = group @ (left @ right)
    return turned


def row(task: RowTask) -> RowFound:
    """Follow all modes along a row of points; pure, and sent to any worker."""
    walker = _Walker(task, assemble(task.model))
    found, lines, shapes, verdicts = [], [], [], []
    before: Array | None = None
    for number, point in enumerate(task.points):
        values, vectors = walker.at(point, before)
        verdicts.append(_verdicts(walker.assembly) if task.judged else ())
        if before is None:
            walker.places = np.arange(values.size)
        else:
            vectors = walker.step((task.points[number - 1], point), before, vectors, HALVINGS)
        before = vectors
        found.append(values[walker.places])
        lines.append(walker.places)
        shapes.append(vectors[:, walker.places])
    eigenvalues = np.array(found)
    return RowFound(eigenvalues, tuple(verdicts), tuple(_meets(eigenvalues, lines, shapes)))


def _verdicts(assembly: Assembly) -> tuple[str, ...]:
    checks = judge_bands(Request(assembly.model), assembly, bands(assembly.model))
    return tuple(check.verdict.value for check in checks)


def _meets(
    eigenvalues: Array, lines: Sequence[npt.NDArray[np.int64]], shapes: Sequence[Array]
) -> list[tuple[int, int, int, bool]]:
    """Return (point, line, line, crossing) of every meeting of two neighbouring lines."""
    order = np.array(lines)
    omega = np.sqrt(eigenvalues)
    ranked = np.sort(omega, axis=1)
    found = []
    for point in range(1, len(omega)):
        swapped = np.argwhere(
            (order[point - 1][:, None] < order[point - 1]) & (order[point][:, None] > order[point])
        )
        found += [(point, min(pair), max(pair), True) for pair in swapped.tolist()]
    gaps = np.diff(ranked, axis=1)
    for place, low in np.argwhere((gaps[1:-1] < gaps[:-2]) & (gaps[1:-1] <= gaps[2:])).tolist():
        point = place + 1
        one, other = sorted(int(np.flatnonzero(order[point] == rank)[0]) for rank in (low, low + 1))
        across = _across(shapes, point, one, other)
        if across > SWAPPED and not _crosses(found, point, one, other):
            found.append((point, one, other, False))
    return sorted(found)


def _across(shapes: Sequence[Array], point: int, one: int, other: int) -> float:
    """Return how far two lines swap their shapes, about a point or over the whole row; 1 is wholly."""
    first, last = shapes[0], shapes[-1]
    before, after = shapes[point - 1], shapes[point + 1]
    near = float((before[:, one] @ after[:, other]) ** 2)
    far = float((first[:, one] @ last[:, other]) ** 2)
    return max(near, far)


def _crosses(found: Sequence[tuple[int, int, int, bool]], point: int, one: int, other: int) -> bool:
    return any({i, j} == {one, other} and abs(at - point) <= 1 and crossing for at, i, j, crossing in found)


def vary(request: GridRequest) -> Grid:
    """Find all frequencies, and prove the verdicts, over one or two values.

    Parameters
    ----------
    request : GridRequest

    Returns
    -------
    Grid
        Frequencies by a dense solve without proven error bounds; verdicts proven by counts at each point,
        over the tolerances of all other values, and of a varied one as far as it is a percentage.

    Raises
    ------
    InputError
        No value or too many, a name or range that cannot be used, more than 300 degrees of freedom.
    ModelFaultsError
        The model cannot be analysed at some of the values.
    CancelledError
    """
    start = perf_counter()
    axes = axes_of(request)
    wanted, points = tuple(one for one, _ in axes), [numbers for _, numbers in axes]
    errand = Errand("points of the grid", request.cancelled, request.progress, request.executor)
    if len(axes) == 1:
        found = in_chunks(errand, row, [RowTask(request.model, wanted, points[0][:, None])])
        eigenvalues = found[0].eigenvalues
        verdicts = found[0].verdicts
    else:
        tasks = [RowTask(request.model, wanted, np.array([(x, y) for y in points[1]])) for x in points[0]]
        found = in_chunks(errand, row, tasks)
        eigenvalues = _joined(request.model, wanted, points, found)
        verdicts = tuple(one for each in found for one in each.verdicts)
    frequencies = np.sqrt(eigenvalues) / RAD_PER_HZ
    frequencies.setflags(write=False)
    judged = bands(request.model)
    order = list(Verdict)
    worst_of = tuple(max(each, key=lambda one: order.index(Verdict(one))) for each in verdicts if each)
    return Grid(
        request=request,
        axes=axes,
        frequencies_hz=frequencies,
        checks=tuple((band.check, band.label) for band in judged),
        verdicts=verdicts,
        worst=worst_of,
        meets=_shown(found[0], axes[0][1]) if len(axes) == 1 else (),
        clear=_clear(axes[0][1], worst_of) if len(axes) == 1 else (),
        coordinates=assemble(request.model).n,
        notes=_notes(request.model, wanted),
        seconds=perf_counter() - start,
    )


def axes_of(request: GridRequest) -> tuple[tuple[Chosen, Array], ...]:
    """Return the values of a request with the numbers they take."""
    if len(request.values) not in (1, 2):
        raise InputError(f"One or two values are varied over a grid; found {len(request.values)}.")
    most = MOST if len(request.values) == 1 else MOST_OF_TWO
    if not FEWEST <= request.points <= most:
        raise InputError(f"A grid has {FEWEST} to {most} points along each value; found {request.points}.")
    if request.spacing not in (EVEN, RATIO):
        raise InputError(f'spacing is "{EVEN}" or "{RATIO}"; found "{request.spacing}"')
    assembly = small_assembly(request.model)
    found = ranged(request.model, assembly, request.values)
    if any(one.family == "damping" for one in found):
        raise InputError("Damping does not move undamped natural frequencies; over a grid it shows nothing.")
    return tuple((one, _numbers(one, request.points, request.spacing)) for one in found)


def small_assembly(model: Model) -> Assembly:
    """Return the assembly of a model small enough for dense solves at many values."""
    assembly = assemble(model)
    if assembly.n > LARGEST_STACKED:
        raise InputError(
            f"The model has {assembly.n} degrees of freedom; values are varied in models of up to "
            f"{LARGEST_STACKED}. Hold directions that do not matter, or join bodies that move as one."
        )
    return assembly


def ranged(model: Model, assembly: Assembly, wishes: Sequence[str]) -> tuple[Chosen, ...]:
    """Return the values and coordinates that texts name, each with a range."""
    known = (*values_of(model, assembly.parameters), *coordinates_of(model))
    found = tuple(chosen(known, wish) for wish in wishes)
    for number, one in enumerate(found):
        if any(other.name == one.name for other in found[:number]):
            raise InputError(f"{one.name} is chosen twice.")
        if one.exact:
            low, high = (-0.1, 0.1) if one.family == GEOMETRY else (-one.nominal / 2, one.nominal)
            raise InputError(
                f"{one.name} has no tolerance: give its range, such as "
                f'"{one.name}={one.span(one.nominal + low, one.nominal + high)}".'
            )
    return found


def _numbers(one: Chosen, points: int, spacing: str) -> Array:
    if spacing == RATIO:
        if one.low <= 0:
            raise InputError(f"{one.name}: a range of equal ratios starts above zero; take even steps.")
        numbers = np.geomspace(one.low, one.high, points)
    else:
        numbers = np.linspace(one.low, one.high, points)
    numbers.setflags(write=False)
    return numbers


def _joined(
    model: Model, wanted: tuple[Chosen, ...], points: Sequence[Array], found: Sequence[RowFound]
) -> Array:
    """Return the rows of two values as one array (p, q, modes), lines numbered as in the first corner."""
    edge = np.array([(x, points[1][0]) for x in points[0]])
    walked = row(RowTask(model, wanted, edge, judged=False))
    rows = []
    for first, each in zip(walked.eigenvalues, found, strict=True):
        # Along the edge lines have left their order; a row starts in order of its own.
        rank = np.argsort(np.argsort(first, kind="stable"), kind="stable")
        rows.append(each.eigenvalues[:, rank])
    return np.array(rows)


def _shown(found: RowFound, numbers: Array) -> tuple[Meet, ...]:
    omega = np.sqrt(found.eigenvalues) / RAD_PER_HZ
    return tuple(_meet(omega, numbers, each) for each in found.meets)


def _meet(hertz: Array, numbers: Array, found: tuple[int, int, int, bool]) -> Meet:
    point, one, other, crossing = found
    if not crossing:
        low, high = sorted((hertz[point, one], hertz[point, other]))
        return Meet(
            (one + 1, other + 1), float(numbers[point]), float(low + high) / 2, float(high - low), crossing
        )
    # Straight lines between the two points.
    before = hertz[point - 1, one] - hertz[point - 1, other]
    after = hertz[point, one] - hertz[point, other]
    share = before / (before - after) if before != after else 0.5
    value = numbers[point - 1] + share * (numbers[point] - numbers[point - 1])
    at = hertz[point - 1, one] + share * (hertz[point, one] - hertz[point - 1, one])
    return Meet((one + 1, other + 1), float(value), float(at), 0.0, crossing)


def _clear(numbers: Array, worst_of: Sequence[str]) -> tuple[tuple[float, float], ...]:
    """Return runs of neighbouring points that are clear."""
    found: list[tuple[float, float]] = []
    start: float | None = None
    for number, (value, verdict) in enumerate(zip(numbers.tolist(), worst_of, strict=False)):
        if verdict != Verdict.CLEAR.value:
            start = None
            continue
        if start is None:
            start = value
            found.append((value, value))
        found[-1] = (start, numbers.tolist()[number])
    return tuple(found)


def _notes(model: Model, wanted: Sequence[Chosen]) -> tuple[str, ...]:
    said = [
        "Verdicts are proven at the points, not between them: keepclear changes finds the windows themselves."
    ]
    for one in wanted:
        there = stands_at(model, one.address)
        if isinstance(there, Value) and there.tolerance is not None and there.tolerance.low is not None:
            said.append(
                f"{one.label}: its tolerance as limits does not go along; that of its part does, or none."
            )
        if one.family == GEOMETRY:
            said.append(f"{one.label} is taken as exact at each point: tolerances do not cover coordinates.")
    return tuple(said)

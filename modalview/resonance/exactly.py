"""Verdicts from counts without any rounding."""

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction

from modalview.assembly.assemble import Assembly
from modalview.assembly.exactly import ExactForms
from modalview.assembly.kinematics import as_typed
from modalview.assembly.parameters import Case
from modalview.bounds.bands import Counters
from modalview.bounds.exactly import Exactly
from modalview.errors import InputError
from modalview.factor.exactly import FAST_LIMIT, exact_limit
from modalview.model.values import Entry
from modalview.resonance.bands import Typed, bands, edges_of
from modalview.resonance.results import Check
from modalview.resonance.verdict import EXACTLY, Exactness, Question, answer
from modalview.units.exact import as_meant
from modalview.units.table import PI

# The most counts that a verdict can rest on: six, and two for the case that decides.
COUNTS = 8


@dataclass(frozen=True, slots=True)
class ExactChecks:
    """Checks proven exactly.

    Parameters
    ----------
    checks : tuple of Check
        In the order of the file; nothing in them is undecided.
    rounded : tuple of str
        What was taken as the nearest double, because it holds an angle or a root.
    """

    checks: tuple[Check, ...]
    rounded: tuple[str, ...]


def judge_exactly(
    assembly: Assembly, exactness: Exactness, step: Callable[[str, float], None]
) -> ExactChecks:
    """Judge every band of a model by exact counts.

    Parameters
    ----------
    assembly : Assembly
    exactness : Exactness
        For the wording of "clear".
    step : callable
        Told (which check, share of all done 0..1) often; may raise to stop.

    Raises
    ------
    InputError
        More coordinates than can be counted exactly in reasonable time; says how many can.
    """
    _require_size(assembly.n)
    forms, model = ExactForms(assembly), assembly.model
    shown = bands(model)
    progress = _Progress(step, len(shown))
    counters = _counters(assembly, forms, progress.within)
    edges = [
        edges_of(model, machine, excitation, as_fraction)
        for machine in model.machines
        for excitation in machine.excitations
    ]
    checks = []
    for band, edge in zip(shown, edges, strict=True):
        progress.begin(band.label)
        question = Question(
            band,
            _in_turns(edge.nominal),
            _in_turns(edge.tolerance),
            counters,
            assembly.pencil().modes,
            EXACTLY,
        )
        checks.append(answer(question, exactness))
    return ExactChecks(tuple(checks), forms.rounded)


def _require_size(n: int) -> None:
    limit = exact_limit()
    if n <= limit:
        return
    more = f' (to {FAST_LIMIT} with gmpy2: pip install "keepclear[exact]")' if limit < FAST_LIMIT else ""
    raise InputError(
        f"The model has {n} degrees of freedom; exact counts go to {limit}{more}. "
        "Check it without --exact: those counts are proven too, with their rounding bounded."
    )


def _counters(assembly: Assembly, forms: ExactForms, step: Callable[[float], None]) -> Counters:
    rigid = assembly.structure.rigid_body.shape[1]
    cases = (Case.NOMINAL, Case.SOFT_HEAVY, Case.STIFF_LIGHT) if assembly.toleranced else (Case.NOMINAL,) * 3
    found = {case: Exactly(forms.pencil(case), rigid, step, {}) for case in dict.fromkeys(cases)}
    return Counters(*(found[case] for case in cases))


def as_fraction(value: Typed) -> Fraction:
    """Return a typed number as a fraction, SI.

    Examples
    --------
    >>> as_fraction(Entry("15 %", 0.15)), as_fraction(0.5)
    (Fraction(3, 20), Fraction(1, 2))
    """
    if isinstance(value, Entry):
        return as_meant(value.text, value.si)[0]
    return value if isinstance(value, Fraction) else as_typed(value)


def _in_turns(edges: tuple[Fraction, Fraction]) -> tuple[Fraction, Fraction]:
    """Take the pi out of edges in rad/s: what was typed in rpm or Hz is a short fraction of turns again."""
    return edges[0] / (2 * PI), edges[1] / (2 * PI)


class _Progress:
    """Share of all counts done, told as they go."""

    def __init__(self, step: Callable[[str, float], None], checks: int) -> None:
        self._step, self._checks = step, checks
        self._done, self._label, self._count, self._share = -1, "", 0, 0.0

    def begin(self, label: str) -> None:
        """Begin the next check."""
        self._done, self._label, self._count, self._share = self._done + 1, label, 0, 0.0

    def within(self, share: float) -> None:
        """Tell the share of one count."""
        if share < self._share:
            self._count += 1
        self._share = share
        inside = min((self._count + share) / COUNTS, 1.0)
        self._step(f"exact counts: {self._label}", (self._done + inside) / self._checks)

"""Every state of a model that a change must clear together: as it is, and in each of its load cases."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.assemble import Assembly, assemble
from modalview.assembly.parameters import Case, values_at
from modalview.assembly.pencil import Pencil
from modalview.bounds.bands import Cases, Floating
from modalview.eigen.solve import LARGEST
from modalview.errors import Fault, InputError, ModelFaultsError
from modalview.model.loadcases import in_load_case
from modalview.model.parts import Model
from modalview.resonance.bands import bands
from modalview.resonance.results import Band, Check, Verdict
from modalview.resonance.verdict import Exactness, judge

Array = npt.NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class State:
    """A model in one load case.

    Parameters
    ----------
    case : str
        Name of the load case; "" for the model as it is.
    assembly : Assembly
    fixed : frozenset of str
        Parameters that the load case itself sets: a change elsewhere does not move them here.
    bands : tuple of Band
    """

    case: str
    assembly: Assembly
    fixed: frozenset[str]
    bands: tuple[Band, ...]

    def judged(self) -> tuple[Check, ...]:
        """Return the verdict of every check, by counts."""
        assembly = self.assembly
        exactness = Exactness(len(assembly.exact_values), len(assembly.matter))
        cases = Cases(*(assembly.pencil(case).shifted for case in Case))
        return tuple(judge(band, cases, exactness) for band in self.bands)

    @cached_property
    def terms(self) -> dict[str, list[int]]:
        """The terms that hold each parameter: of mass for a mass, else of stiffness."""
        structure, parameters = self.assembly.structure, self.assembly.parameters
        found: dict[str, list[int]] = {p.id: [] for p in parameters}
        for terms, masses in ((structure.stiffness, False), (structure.mass, True)):
            for t, product in enumerate(terms.product_of.tolist()):
                for i in product:
                    if i < len(parameters) and (parameters[i].family == "mass") is masses:
                        found[parameters[i].id].append(t)
        return found

    def rows(self, family: str) -> sp.csr_array:
        """Return the rows of all terms of "stiffness" or "mass" (t, n)."""
        structure = self.assembly.structure
        return structure.mass.rows if family == "mass" else structure.stiffness.rows

    def term_values(self, case: Case, family: str) -> Array:
        """Return the value of all terms of "stiffness" or "mass" (t,) in a case."""
        kept: dict[tuple[Case, str], Array] = self._kept
        if (case, family) not in kept:
            structure = self.assembly.structure
            terms = structure.mass if family == "mass" else structure.stiffness
            kept[case, family] = terms.values(values_at(self.assembly.parameters, case))
        return kept[case, family]

    @cached_property
    def _kept(self) -> dict[tuple[Case, str], Array]:
        return {}

    def pencil_with(self, case: Case, factors: Mapping[str, float]) -> Pencil:
        """Return the pencil of a case with some parameters times their factors."""
        at = values_at(self.assembly.parameters, case)
        for i, p in enumerate(self.assembly.parameters):
            if p.id in factors and p.id not in self.fixed:
                at[i] *= factors[p.id]
        return self.assembly.pencil_at(at)

    def counter_with(self, case: Case, factors: Mapping[str, float]) -> Floating:
        """Return what counts the modes of such a pencil."""
        return Floating(self.pencil_with(case, factors).shifted)

    def named(self, check: str) -> str:
        """Return a check with the load case it is made in."""
        return f"{check} ({self.case})" if self.case else check


def states_of(model: Model, previous: Sequence[State] = ()) -> tuple[State, ...]:
    """Return the model as it is and in each of its load cases.

    Parameters
    ----------
    model : Model
        Free of faults.
    previous : sequence of State
        Of an earlier state of the model: their structure serves again.

    Raises
    ------
    ModelFaultsError
        The model cannot be analysed, in some load case perhaps.
    InputError
        The model is too large.
    """
    before: dict[str, Assembly] = {one.case: one.assembly for one in previous}
    found = [_state("", model, frozenset(), before.get(""))]
    for case in model.load_cases:
        name = case.name or case.id
        fixed = frozenset(_parameter_id(change.part, change.key) for change in case.changes)
        try:
            found.append(_state(name, in_load_case(model, case), fixed, before.get(name)))
        except ModelFaultsError as error:
            faults = tuple(Fault(f'load case "{name}": {one.path}', one.reason) for one in error.faults)
            raise ModelFaultsError(faults) from error
    return tuple(found)


def _state(case: str, model: Model, fixed: frozenset[str], before: Assembly | None) -> State:
    assembly = assemble(replace(model, load_cases=()), before)
    modes = assembly.pencil().modes
    if modes > LARGEST:
        raise InputError(
            f"The model has {modes} modes; changes that clear it are looked for up to {LARGEST}."
        )
    return State(case, assembly, fixed, bands(model))


def _parameter_id(part: str, key: str) -> str:
    """Return the parameter of a changed value; the entries of a tensor all belong to one."""
    return f"{part}.inertia" if key.startswith("inertia") else f"{part}.{key}"


def all_clear(checks: Iterable[Check]) -> bool:
    """Return whether every check is clear."""
    return all(check.verdict is Verdict.CLEAR for check in checks)

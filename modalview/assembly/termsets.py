"""All terms of one kind as arrays: rows over the independent coordinates, factors, products of values."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cached_property

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.coordinates import Coordinates
from modalview.assembly.linkterms import LinkRow
from modalview.assembly.masses import principal_terms
from modalview.assembly.quadratic import QuadraticForm
from modalview.model.parts import FREEDOMS, Body, InertiaTensor, Model, Motion

Array = npt.NDArray[np.float64]

# A term is a product of at most three typed values (a beam's E and I, a spring's k and its dynamic ratio).
FACTORS = 3
# An entry this small against the products it is the sum of is their rounding: sums have a dozen products,
# and lengths typed to fifteen digits differ by more than this where they differ at all.
CANCELLED = 1e-14


@dataclass(frozen=True, eq=False)
class TermSet:
    """Rank-one terms of one kind: sum v_i r_i r_i^T with v_i = factor_i times a product of parameters.

    Attributes
    ----------
    rows : csr_array (t, n)
        In the independent coordinates.
    support_rows : csr_array (t, s)
        Stretch per unit motion of a support, columns as ``support_freedoms``.
    factor : array (t,)
    product_of : int array (t, 3)
        Indices of parameters; the index one past the last stands for 1.
    part : tuple of str
        The part each term belongs to.
    like : QuadraticForm or None
        Of rows that may have the same pattern: of the model before an edit.
    """

    rows: sp.csr_array
    support_rows: sp.csr_array
    support_freedoms: tuple[tuple[str, str], ...]
    factor: Array
    product_of: npt.NDArray[np.int64]
    part: tuple[str, ...]
    like: QuadraticForm | None = field(default=None, repr=False)

    def values(self, parameter_values: Array) -> Array:
        """Return the value of every term (t,), SI."""
        padded = np.append(parameter_values, 1.0)
        products: Array = self.factor * padded[self.product_of].prod(axis=1)
        return products

    @cached_property
    def form(self) -> QuadraticForm:
        """The matrix of the terms, ready to be refilled."""
        return QuadraticForm(self.rows, self.like)

    def with_parameters(self, old: Sequence[object], new: Sequence[object]) -> "TermSet":
        """Return the same terms where other parameters came or went behind those that they use."""
        if len(old) == len(new):
            return self
        product_of = np.where(self.product_of == len(old), len(new), self.product_of)
        return replace(self, product_of=product_of, like=self.form)

    @cached_property
    def at_work(self) -> frozenset[str]:
        """Parts with a term that some motion stretches."""
        filled = np.diff(self.rows.indptr)
        return frozenset(part for part, entries in zip(self.part, filled, strict=True) if entries)


def terms_of_links(
    rows: Sequence[LinkRow],
    model: Model,
    coordinates: Coordinates,
    index: Mapping[str, int],
    like: QuadraticForm | None = None,
) -> TermSet:
    """Return the terms of links as arrays.

    Parameters
    ----------
    rows : sequence of LinkRow
        Of one family.
    model : Model
    coordinates : Coordinates
    index : mapping
        Number of each parameter by its id.
    like : QuadraticForm or None
        Of the terms before an edit.
    """
    freedoms = FREEDOMS[model.motion]
    bodies, supports = (
        [(part.id, name) for part in parts for name in freedoms] for parts in (model.bodies, model.supports)
    )
    column = {key: at for at, key in enumerate((*bodies, *supports))}
    at = np.array([column[key] for row in rows for key in row.keys], dtype=np.int64)
    entries = np.array([entry for row in rows for entry in row.entries], dtype=float)
    term = np.repeat(np.arange(len(rows)), [len(row.keys) for row in rows])
    held = at >= len(bodies)
    one = len(index)
    products = [[*(index[name] for name in row.values), *_ONES[len(row.values)]] for row in rows]
    product_of = np.array(products, dtype=np.int64).reshape(-1, FACTORS)
    return TermSet(
        rows=_without_rounding(
            _table(term[~held], at[~held], entries[~held], (len(rows), len(bodies))), coordinates.to_bodies
        ),
        support_rows=_table(term[held], at[held] - len(bodies), entries[held], (len(rows), len(supports))),
        support_freedoms=tuple(supports),
        factor=np.array([row.factor for row in rows], dtype=float),
        product_of=np.where(product_of < 0, one, product_of),
        part=tuple(row.link for row in rows),
        like=like,
    )


# Fills a product of fewer values; replaced by the index that stands for 1.
_ONES = tuple((-1,) * (FACTORS - number) for number in range(FACTORS + 1))


def _table(
    term: npt.NDArray[np.int64], column: npt.NDArray[np.int64], entries: Array, shape: tuple[int, int]
) -> sp.csr_array:
    """Return a matrix from entries that are in the order of their rows."""
    ends = np.concatenate([[0], np.cumsum(np.bincount(term, minlength=shape[0]))])
    return sp.csr_array((entries, column, ends), shape=shape)


def _without_rounding(forms: sp.csr_array, to_bodies: sp.csr_array) -> sp.csr_array:
    """Return forms @ to_bodies without what is left of entries that cancel.

    A spring between two bodies of one rigid cluster stretches by nothing; a rest of 1e-17 in its row would
    be taken for a direction of its own where rows are normalised.
    """
    if not forms.nnz:
        return sp.csr_array((forms.shape[0], to_bodies.shape[1]))
    rows, products = forms @ to_bodies, abs(forms) @ abs(to_bodies)
    meant = (abs(rows) - CANCELLED * products) > 0
    kept = sp.csr_array(rows.multiply(meant))
    kept.eliminate_zeros()
    kept.sort_indices()
    return kept


def terms_of_masses(
    model: Model, coordinates: Coordinates, index: Mapping[str, int], like: QuadraticForm | None = None
) -> TermSet:
    """Return the inertia of all bodies as terms; ``like`` is the form of those before an edit."""
    terms = [(body, *term) for body in model.bodies for term in _body_mass_terms(body, model.motion)]
    terms = [term for term in terms if f"{term[0].id}.{term[1]}" in index]
    columns = {
        (body.id, name): i
        for i, (body, name) in enumerate((b, f) for b in model.bodies for f in FREEDOMS[model.motion])
    }
    known = [{columns[key]: entry for key, entry in form.items() if key in columns} for *_, form in terms]
    term = np.repeat(np.arange(len(terms)), [len(form) for form in known])
    column = np.array([column for form in known for column in form], dtype=np.int64)
    entries = np.array([entry for form in known for entry in form.values()], dtype=float)
    rows = _table(term, column, entries, (len(terms), len(columns))) @ coordinates.to_bodies
    # Where principal axes are rounded, a direction known to be massless would keep a rest of 1e-17.
    rows = sp.csr_array(rows @ sp.diags_array((~coordinates.massless).astype(float)))
    rows.eliminate_zeros()
    one = len(index)
    products = [(index[f"{body.id}.{key}"], one, one) for body, key, _, _ in terms]
    return TermSet(
        rows=rows,
        support_rows=sp.csr_array((len(terms), 0)),
        support_freedoms=(),
        factor=np.array([factor for _, _, factor, _ in terms], dtype=float),
        product_of=np.array(products, dtype=np.int64).reshape(-1, FACTORS),
        part=tuple(body.id for body, _, _, _ in terms),
        like=like,
    )


def _body_mass_terms(body: Body, motion: Motion) -> list[tuple[str, float, dict[tuple[str, str], float]]]:
    """Return (key of the value, factor, form) of each direction in which a body's inertia acts."""
    names = FREEDOMS[motion]
    found = [("mass", 1.0, {(body.id, name): 1.0}) for name in names if not name.startswith("r")]
    if isinstance(body.inertia, InertiaTensor):
        for moment, axis in principal_terms(body.inertia):
            form = {(body.id, name): a for name, a in zip(("rx", "ry", "rz"), axis, strict=True) if a}
            found.append(("inertia", moment, form))
    else:
        found.append(("inertia", 1.0, {(body.id, "rz"): 1.0}))
    return found

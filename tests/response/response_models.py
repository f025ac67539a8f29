"""Models with excitations for tests of the forced response, and a judge that knows no route of the program.

The judge takes the equations of every body before any constraint, with a multiplier for each constraint:
[D  B^T; B  0] (x, force of the constraints) = (f, 0), dense.
"""

import json
import sys
from pathlib import Path

import numpy as np
import scipy.linalg as la
from hypothesis import strategies as st

from modalview.assembly.assemble import assemble
from modalview.assembly.kinematics import AXES, places
from modalview.assembly.loads import body_force, over_bodies, support_motion
from modalview.assembly.masses import tensor_matrix
from modalview.assembly.stretch import acting_point, exact_joints, relative_motion, relative_turn, stretches
from modalview.model.parts import FREEDOMS, InertiaTensor, RigidLink
from modalview.store import parse_model

sys.path.insert(0, str(Path(__file__).parents[1] / "properties"))

import random_models as made

DIRECTIONS = {"plane": ["x", "-y", "30 deg", "rotating"], "space": ["x", "z", [1, 2, 2], "rotating"]}


@st.composite
def damped_documents(draw, dampings=("dashpots", "losses", "both", "ratio", "proportional", "none")):
    """A random model with some damping and one force (or torque) on some body."""
    tree = draw(made.documents(made.Wishes(tolerances=False, free=draw(st.booleans()))))
    motion, kind = tree["motion"], draw(st.sampled_from(dampings))
    names = [body["id"] for body in tree["bodies"]]
    if kind in ("dashpots", "both"):
        tree["links"] += [draw(_dashpot(motion, names, i)) for i in range(draw(st.integers(1, 4)))]
    for link in tree["links"]:
        if kind in ("losses", "both") and link["kind"] not in ("rigid link", "damper"):
            link["loss_factor"] = draw(st.sampled_from(("0 %", "3 %", "12 %")))
    if kind == "ratio":
        tree["damping"] = {"ratio": draw(st.sampled_from(("1 %", "5 %", "40 %")))}
    if kind == "proportional":
        tree["damping"] = {"alpha": "1.5 1/s", "beta": "0.0002 s"}
    tree["machines"] = [
        {
            "id": "m",
            "speed": "1500 rpm",
            "margin": "10 %",
            "excitations": [draw(_excitation(motion, draw(st.sampled_from(names))))],
        }
    ]
    return tree


@st.composite
def _dashpot(draw, motion, names, number):
    one, two = draw(st.permutations([*names, "g"]))[:2]
    ends = {
        "from": {"support" if one == "g" else "body": one},
        "to": {"support" if two == "g" else "body": two},
    }
    c = draw(st.sampled_from((30.0, 800.0, 2e4)))
    unit = "N m s/rad" if motion == "shaft train" else "N s/m"
    link = {"id": f"c{number}", "kind": "damper", **ends, "damping": f"{c!r} {unit}"}
    if motion in ("plane", "space"):
        link["direction"] = draw(made.directions[motion])
    return link


@st.composite
def _excitation(draw, motion, name):
    found = {"id": "1x", "order": 1, "at": {"body": name}, "magnitude": {"force": "100 N"}}
    if motion == "shaft train":
        found["magnitude"] = {"torque": "100 N m"}
    if motion in DIRECTIONS:
        found["direction"] = draw(st.sampled_from(DIRECTIONS[motion]))
        offset = draw(st.tuples(*[made.tenths] * made.DIMENSIONS[motion]))
        found["at"]["offset"] = made.point(offset)
    return found


def parsed(tree):
    return parse_model(json.dumps(tree))


class Judge:
    """Dense equations of one model before constraints."""

    def __init__(self, model):
        self.model = model
        self.names = [(b.id, f) for b in model.bodies for f in FREEDOMS[model.motion]]
        self.here = places(model)
        size = len(self.names)
        self.K, self.C = np.zeros((size, size), complex), np.zeros((size, size))
        self.terms = []
        for link in model.links:
            loss = link.loss_factor.si if link.loss_factor else 0.0
            for term in stretches(link, self.here):
                row = self.row(term.form).real / term.divide
                value = term.factor * np.prod([_value(link, key) for key in term.keys])
                if term.family == "stiffness" and link.dynamic_ratio:
                    value *= link.dynamic_ratio.si
                if term.family == "stiffness":
                    self.K += value * (1 + 1j * loss) * np.outer(row, row)
                else:
                    self.C += value * np.outer(row, row)
                self.terms.append((link, term, value, loss, row))
        self.M = self._mass()
        self.B = self._constraints()

    def row(self, form):
        return over_bodies(self.model, [(1.0, form)])

    def _mass(self):
        M = np.zeros((len(self.names),) * 2)
        for i, (body, name) in enumerate(self.names):
            part = next(b for b in self.model.bodies if b.id == body)
            if not name.startswith("r"):
                M[i, i] = part.mass.si if part.mass else 0.0
            elif isinstance(part.inertia, InertiaTensor):
                if name == "rx":
                    M[i : i + 3, i : i + 3] = tensor_matrix(part.inertia)
            else:
                M[i, i] = part.inertia.si if part.inertia else 0.0
        return M

    def _constraints(self):
        rows = []
        self.of_constraint = []
        for body in self.model.bodies:
            for name in FREEDOMS[self.model.motion]:
                if body.dof is not None and name not in body.dof:
                    rows.append(self.row({(body.id, name): 1.0}))
                    self.of_constraint.append(None)
        for link in self.model.links:
            forms = exact_joints(link, self.here)
            if isinstance(link, RigidLink) and link.directions is None:
                at = acting_point(link, self.here)
                forms = [
                    relative_motion(link, self.here, at, AXES[name])
                    if name in AXES
                    else relative_turn(link, self.here, AXES[name[1:]])
                    for name in FREEDOMS[self.model.motion]
                ]
            rows += [self.row(form) for form in forms]
            self.of_constraint += [link.id] * len(forms)
        return np.array(rows).real.reshape(len(rows), len(self.names))

    def force(self):
        return body_force(self.model, self.model.machines[0].excitations[0])

    def dynamic(self, omega):
        return self.K + 1j * omega * self.C - omega**2 * self.M

    def from_support(self, omega, motions):
        """Force of a moving support on the bodies: motions of its freedoms (m) by (support, freedom)."""
        force = np.zeros(len(self.names), complex)
        for _, term, value, loss, row in self.terms:
            moved = sum(float(e) * motions.get(key, 0.0) for key, e in term.form.items()) / term.divide
            factor = value * (1 + 1j * loss) if term.family == "stiffness" else 1j * omega * value
            force -= factor * moved * row
        return force

    def modal_damping(self, ratio):
        """C of one ratio for every mode, over the motions that the constraints allow, and their basis."""
        basis = self.basis()
        M, K = basis.T @ self.M @ basis, basis.T @ self.K.real @ basis
        values, vectors = np.linalg.eigh(M)
        light, heavy = np.split(vectors, [int(np.sum(values < 1e-9 * values[-1]))], axis=1)
        if light.size:
            heavy = heavy - light @ np.linalg.solve(light.T @ K @ light, light.T @ K @ heavy)
        m, k = heavy.T @ M @ heavy, heavy.T @ K @ heavy
        squared, shapes = la.eigh(k, m)
        shapes = heavy @ shapes
        rates = 2 * ratio * np.sqrt(np.maximum(squared, 0))
        return M @ shapes @ np.diag(rates) @ shapes.T @ M, basis

    def motion(self, omega, force=None):
        """Motion of every freedom of every body, and the forces of the constraints on them."""
        force = self.force() if force is None else force
        basis = self.basis()
        D = basis.T @ self.dynamic(omega) @ basis
        q = np.linalg.lstsq(D, basis.T @ force, rcond=1e-15)[0]
        x = basis @ q
        return x, self.dynamic(omega) @ x - force

    def basis(self):
        """Motions that the constraints allow and that something resists or that have inertia."""
        allowed = np.eye(len(self.names))
        if len(self.B):
            _, s, turned = np.linalg.svd(self.B)
            rank = int(np.sum(s > 1e-9 * s[0]))
            allowed = turned[rank:].T
        felt = allowed.T @ (self.M + self.K.real / 1e6 + self.C / 1e3) @ allowed
        values, vectors = np.linalg.eigh((felt + felt.T) / 2)
        return allowed @ vectors[:, values > 1e-9 * values[-1]]


def summed_at_centres(model, forces):
    """Forces at the ends of all links (links, 6, w) as forces and moments at the centres of bodies."""
    here, names = places(model), FREEDOMS[model.motion]
    row = {(b.id, f): i for i, (b, f) in enumerate((b, f) for b in model.bodies for f in names)}
    total = np.zeros((len(row), forces.at_to.shape[2]), complex)
    for number, link in enumerate(model.links):
        for place, end in enumerate((link.from_, link.to)):
            if end.body is None:
                continue
            six = (forces.at_from, forces.at_to)[place][number]
            centre = here.centre[end.body]
            arm = [float(a - c) for a, c in zip(_acts_at(model, link, place), centre, strict=True)]
            moment = six[3:] + np.cross(np.array(arm), six[:3].T).T
            for name, value in zip(FREEDOMS["space"], [*six[:3], *moment], strict=True):
                if (end.body, name) in row:
                    total[row[end.body, name]] += value
    return total


def _acts_at(model, link, place):
    here = places(model)
    given = link.kind in ("spring", "damper") and (
        link.direction is not None or model.motion == "single axis"
    )
    if link.kind in ("mount", "rigid link") or given:
        return acting_point(link, here)
    return here.point((link.from_, link.to)[place])


def _value(link, key):
    found = link
    for step in key.split("."):
        found = getattr(found, step)
    return found.si


__all__ = ["Judge", "assemble", "damped_documents", "made", "parsed", "support_motion"]

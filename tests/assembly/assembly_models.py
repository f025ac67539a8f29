"""Small models, written as files are, and their matrices in the order of bodies and freedoms."""

import json

import numpy as np

from modalview.assembly.assemble import assemble
from modalview.model.parts import FREEDOMS
from modalview.store import parse_model

GROUND = {"plane": ("0 m", "0 m"), "space": ("0 m", "0 m", "0 m")}


def point(*coordinates):
    return [f"{c!r} m" for c in coordinates]


def end(name, offset=None):
    """An end on a body, or on a support where the name starts with "g"."""
    found = {"support" if name.startswith("g") else "body": name}
    return found | ({"offset": point(*offset)} if offset else {})


def joined(kind, name, /, start, stop, *, at=None, to=None, **more):
    """A link between two parts, by id, with offsets ``at`` and ``to``."""
    return {"id": name, "kind": kind, "from": end(start, at), "to": end(stop, to), **more}


def spring(name, /, start, stop, stiffness="1e6 N/m", **more):
    return joined("spring", name, start, stop, stiffness=stiffness, **more)


def mount(name, /, start, stop, *, at=None, to=None, axes=None, **stiffness):
    units = {key: "N m/rad" if key.startswith("r") else "N/m" for key in stiffness}
    values = {key: f"{value!r} {units[key]}" for key, value in stiffness.items()}
    more = {"axes": axes} if axes else {}
    return joined("mount", name, start, stop, at=at, to=to, stiffness=values, **more)


def body(name, /, *place, mass=10.0, inertia=None, **more):
    """A body; ``inertia`` is a number, or three moments in space."""
    found = {"id": name, "mass": f"{mass!r} kg", **more}
    if place:
        found["position"] = point(*place)
    if isinstance(inertia, (tuple, list)):
        found["inertia"] = {
            key: f"{value!r} kg m2" for key, value in zip(("Ixx", "Iyy", "Izz"), inertia, strict=True)
        }
    elif isinstance(inertia, dict):
        found["inertia"] = {key: f"{value!r} kg m2" for key, value in inertia.items()}
    elif inertia is not None:
        found["inertia"] = f"{inertia!r} kg m2"
    return found


def rotor(name, inertia):
    return {"id": name, "inertia": f"{inertia!r} kg m2"}


def model(motion, bodies, links, supports=None, **more):
    if supports is None:
        supports = [{"id": "g", **({"position": GROUND[motion]} if motion in GROUND else {})}]
    document = {
        "format": "keepclear",
        "version": 1,
        "title": "test",
        "motion": motion,
        "bodies": list(bodies),
        "supports": list(supports),
        "links": list(links),
        **more,
    }
    return parse_model(json.dumps(document))


def matrices(given):
    """K, M, C as dense arrays, coordinates in the order of bodies and freedoms (all must be independent)."""
    assembly = assemble(given)
    keys = [(one.id, name) for one in given.bodies for name in FREEDOMS[given.motion]]
    order = [assembly.structure.coordinates.free.index(key) for key in keys]
    pencil = assembly.pencil()
    return tuple(np.asarray(m.toarray())[np.ix_(order, order)] for m in (pencil.K, pencil.M, pencil.C))


def condensed(given):
    """Squares of the natural angular frequencies, from dense matrices condensed here by hand, ascending."""
    pencil = assemble(given).pencil()
    K, M = pencil.K.toarray(), pencil.M.toarray()
    kept, light = ~pencil.massless, pencil.massless
    if light.any():
        K = K[np.ix_(kept, kept)] - K[np.ix_(kept, light)] @ np.linalg.solve(
            K[np.ix_(light, light)], K[np.ix_(light, kept)]
        )
        M = M[np.ix_(kept, kept)]
    root = np.linalg.cholesky(M)
    half = np.linalg.solve(root, K)
    S = np.linalg.solve(root, half.T)
    return np.linalg.eigvalsh((S + S.T) / 2)

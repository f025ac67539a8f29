"""What may be changed: typed values, or several that change by one factor, with the limits given for them."""

import math
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import groupby

import numpy as np

from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Parameter
from modalview.errors import InputError
from modalview.model.addresses import Address
from modalview.model.parts import Beam, Body, Link, Model, Mount
from modalview.model.rules_context import Context
from modalview.model.rules_links import varied_quantity
from modalview.units.parse import read

# Properties of a material or of rubber are what they are: they change only when they are asked for.
GIVEN_BY_NATURE = ("E", "G", "dynamic_ratio")
LISTED = 12


@dataclass(frozen=True, slots=True)
class Variable:
    """One thing that may change.

    Parameters
    ----------
    id : str
        "k3.stiffness", "sole.stiffness" (a whole mount), "k1.stiffness+k2.stiffness".
    label : str
        "stiffness of base support".
    family : str
        "stiffness" or "mass": which way it moves the frequencies.
    members : tuple of str
        Ids of the parameters that change, all by one factor.
    limits : pair of float
        Factors of today's values within which the user lets it change; 0 and infinity without limits.
    """

    id: str
    label: str
    family: str
    members: tuple[str, ...]
    limits: tuple[float, float] = (0.0, math.inf)


def address_of(model: Model, parameter: Parameter) -> Address:
    """Return where the value of a parameter stands; of an inertia tensor, the tensor."""
    key = parameter.id[len(parameter.part) + 1 :]
    group = "bodies" if any(body.id == parameter.part for body in model.bodies) else "links"
    return (group, parameter.part, *key.split("."))


def every_variable(assembly: Assembly) -> tuple[Variable, ...]:
    """Return what it makes sense to change, in the order of the model.

    Single values (a body's mass and inertia apart from each other and together, each direction of a mount and
    all of them), and links that are alike in all their values by one factor.
    """
    singles = [
        p for p in assembly.parameters if p.family != "damping" and _by_choice(p) and _acts(assembly, p)
    ]
    known = {p.id: p for p in singles}
    found = [_variable(assembly, (p,), p.id) for p in singles]
    for _part, own in groupby(singles, key=lambda p: p.part):
        together = tuple(own)
        if len(together) > 1 and _mount_or_body(assembly.model, together[0].part):
            found.append(_variable(assembly, together, _whole_id(together)))
    for alike in _alike(assembly.model, known):
        links = dict.fromkeys(p.part for p in alike)
        found.append(_variable(assembly, alike, "+".join(f"{link}.stiffness" for link in links)))
    grounded = _grounded(assembly.model, known)
    if grounded and all(set(one.members) != {p.id for p in grounded} for one in found):
        links = dict.fromkeys(p.part for p in grounded)
        whole = _variable(assembly, grounded, "+".join(f"{link}.stiffness" for link in links))
        found.append(replace(whole, label=f"stiffness of all {len(links)} links to ground"))
    return tuple(found)


def _grounded(model: Model, known: dict[str, Parameter]) -> tuple[Parameter, ...]:
    """Return the values of all links that stand on supports; none where there are fewer than two."""
    links = {
        one.id for one in model.links if (one.from_.support or one.to.support) and not isinstance(one, Beam)
    }
    members = tuple(p for p in known.values() if p.part in links)
    return members if len({p.part for p in members}) > 1 else ()


def variables_named(assembly: Assembly, ids: Iterable[str]) -> tuple[Variable, ...]:
    """Return the variables of some ids.

    Raises
    ------
    InputError
        There is no such value, or two values of one id multiply each other or pull opposite ways.
    """
    return tuple(variable_named(assembly, one) for one in ids)


def variable_named(assembly: Assembly, name: str) -> Variable:
    """Return the variable of an id: a value, a part of its name such as "sole.stiffness", or several joined.

    Raises
    ------
    InputError
    """
    found = [p for part in name.split("+") for p in _members(assembly, part.strip())]
    members = list({p.id: p for p in found}.values())
    families = {p.family for p in members}
    if len(families) > 1:
        raise InputError(f'"{name}": a stiffness and a mass cannot change by one factor.')
    _require_apart(assembly, [(p,) for p in members])
    return _variable(assembly, tuple(members), name)


def require_apart(assembly: Assembly, variables: Sequence[Variable]) -> None:
    """Refuse variables that share a term, such as E and I of one beam: they multiply each other.

    Raises
    ------
    InputError
    """
    known = {p.id: p for p in assembly.parameters}
    _require_apart(assembly, [tuple(known[m] for m in one.members) for one in variables])


def _require_apart(assembly: Assembly, groups: Sequence[tuple[Parameter, ...]]) -> None:
    taken: dict[tuple[str, int], Parameter] = {}
    named: set[str] = set()
    for p in (p for group in groups for p in group):
        if p.id in named:
            raise InputError(f"{p.id} is named twice: choose it once.")
        named.add(p.id)
        for term in terms_of(assembly, (p.id,)):
            other = taken.setdefault((p.family, term), p)
            if other.id != p.id:
                raise InputError(f"{other.id} and {p.id} act on one spring: choose one of them.")


def terms_of(assembly: Assembly, members: Iterable[str]) -> list[int]:
    """Return the terms, of stiffness or of mass, that hold any of some parameters."""
    named = set(members)
    wanted = [i for i, p in enumerate(assembly.parameters) if p.id in named]
    masses = all(assembly.parameters[i].family == "mass" for i in wanted)
    terms = assembly.structure.mass if masses else assembly.structure.stiffness
    found: list[int] = np.flatnonzero(np.isin(terms.product_of, wanted).any(axis=1)).tolist()
    return found


def _members(assembly: Assembly, name: str) -> list[Parameter]:
    usable = [p for p in assembly.parameters if p.family != "damping"]
    found = [p for p in usable if p.id == name]
    found = found or [p for p in usable if p.id.startswith(f"{name}.") and _by_choice(p)]
    if found:
        return found
    names = [p.id for p in usable if p.part == name.partition(".")[0]] or [p.id for p in usable]
    more = f" and {len(names) - LISTED} more" if len(names) > LISTED else ""
    raise InputError(f'There is no value "{name}". There are {", ".join(names[:LISTED])}{more}.')


def _by_choice(parameter: Parameter) -> bool:
    return parameter.id.rpartition(".")[2] not in GIVEN_BY_NATURE


def _acts(assembly: Assembly, parameter: Parameter) -> bool:
    """Return whether any motion takes part in it."""
    terms = assembly.structure.mass if parameter.family == "mass" else assembly.structure.stiffness
    return any(terms.rows.indptr[t] < terms.rows.indptr[t + 1] for t in terms_of(assembly, (parameter.id,)))


def _mount_or_body(model: Model, part: str) -> bool:
    found = next(one for one in (*model.bodies, *model.links) if one.id == part)
    return isinstance(found, Body | Mount)


def _whole_id(together: Sequence[Parameter]) -> str:
    if together[0].family == "mass":
        return "+".join(p.id for p in together)
    return f"{together[0].part}.stiffness"


def _alike(model: Model, known: dict[str, Parameter]) -> Iterator[tuple[Parameter, ...]]:
    """Yield the values of links of one kind that are equal in all values and tolerances: a set of mounts."""
    sets: dict[tuple[object, ...], list[Parameter]] = {}
    counted: dict[tuple[object, ...], int] = {}
    for link in model.links:
        own = [p for p in known.values() if p.part == link.id]
        if own and not isinstance(link, Beam):
            key: tuple[object, ...] = (
                link.kind,
                *((p.id[len(link.id) :], p.nominal, p.low, p.high) for p in own),
            )
            sets.setdefault(key, []).extend(own)
            counted[key] = counted.get(key, 0) + 1
    for key, members in sets.items():
        if counted[key] > 1:
            yield tuple(members)


def _variable(assembly: Assembly, members: tuple[Parameter, ...], name: str) -> Variable:
    model = assembly.model
    limits = [_limits(model, p) for p in members]
    low, high = max(one[0] for one in limits), min(one[1] for one in limits)
    return Variable(name, _label(members), members[0].family, tuple(p.id for p in members), (low, high))


def _label(members: tuple[Parameter, ...]) -> str:
    parts = list(dict.fromkeys(p.label for p in members))
    keys = list(dict.fromkeys(p.id[len(p.part) + 1 :].replace(".", " ").replace("_", " ") for p in members))
    if len(keys) == 1:
        what = keys[0]
    elif all(key.startswith("stiffness") for key in keys):
        what = "whole stiffness"
    else:
        what = " and ".join(keys)
    if len(parts) > 3:
        return f"{what} of {len(parts)} links alike ({parts[0]} to {parts[-1]})"
    return f"{what} of {' and '.join(parts)}"


def _limits(model: Model, parameter: Parameter) -> tuple[float, float]:
    link: Link | None = next((one for one in model.links if one.id == parameter.part), None)
    if link is None or link.vary_limits is None:
        return 0.0, math.inf
    quantity = varied_quantity(link, Context.of(model))
    if quantity is None:
        return 0.0, math.inf
    per = 1.0 if isinstance(link, Mount | Beam) else parameter.nominal
    low, high = link.vary_limits.low, link.vary_limits.high
    return (
        read(low, quantity) / per if low is not None else 0.0,
        read(high, quantity) / per if high is not None else math.inf,
    )

"""Strategies that build random valid models, as documents of the file format, and changes to them."""

import copy
import json
from dataclasses import dataclass

from hypothesis import strategies as st

from modalview.store import parse_model

MOTIONS = ("single axis", "shaft train", "plane", "space")
FREEDOMS = {
    "single axis": ("y",),
    "shaft train": ("rz",),
    "plane": ("x", "y", "rz"),
    "space": ("x", "y", "z", "rx", "ry", "rz"),
}
DIMENSIONS = {"single axis": 0, "shaft train": 0, "plane": 2, "space": 3}

tenths = st.integers(-30, 30).map(lambda i: i / 10)
masses = st.sampled_from((1.0, 2.5, 4.0, 13.0, 50.0))
stiffnesses = st.sampled_from((2e4, 1e5, 3.3e5, 1e6, 7e6, 5e7))
tolerances = st.sampled_from((None, "5 %", "12 %", "25 %"))
directions = {
    "plane": st.sampled_from(([1, 0], [0, 1], [3, 4], [-1, 1])),
    "space": st.sampled_from(([1, 0, 0], [0, 0, 1], [3, 4, 0], [1, -1, 1])),
}


@dataclass(frozen=True)
class Wishes:
    """What a model may hold.

    ``turnable``: nothing that is tied to the model's axes by name. ``gears``: exact ones and meshes.
    """

    motions: tuple = MOTIONS
    turnable: bool = False
    gears: bool = True
    joints: bool = True
    tolerances: bool = True
    free: bool = False


def value(number, unit, tolerance=None):
    text = f"{number!r} {unit}"
    return {"value": text, "tolerance": tolerance} if tolerance else text


def point(coordinates):
    return [f"{c!r} m" for c in coordinates]


@st.composite
def documents(draw, wishes=None):
    """A model with two to four bodies, joined along a tree to each other and (unless free) to ground."""
    wishes = wishes or Wishes()
    motion = draw(st.sampled_from(wishes.motions))
    size = draw(st.integers(2, 4))
    tolerance = tolerances if wishes.tolerances else st.none()
    places = draw(
        st.lists(
            st.tuples(*[tenths] * max(DIMENSIONS[motion], 1)),
            min_size=size + 1,
            max_size=size + 1,
            unique=True,
        )
    )
    junction = draw(st.integers(0, size)) if wishes.joints and motion != "space" else 0
    bodies = [
        draw(_body(motion, f"b{i}", places[i], tolerance, i == junction and i > 0)) for i in range(size)
    ]
    if wishes.joints and not wishes.turnable and draw(st.booleans()):
        bodies[0]["dof"] = list(FREEDOMS[motion][: draw(st.integers(1, len(FREEDOMS[motion])))])
    ground = {"id": "g", **({"position": point(places[size])} if DIMENSIONS[motion] else {})}
    links = []
    for i in range(size):
        earlier = [f"b{j}" for j in range(i)] + ([] if wishes.free and i else ["g"])
        if wishes.free and i == 0:
            continue
        ends = (f"k{i}", f"b{i}", draw(st.sampled_from(earlier)))
        links.append(draw(_link(wishes, motion, tolerance, ends, tree=True)))
    for i in range(draw(st.integers(0, 3))):
        one, two = draw(st.permutations([f"b{j}" for j in range(size)] + ([] if wishes.free else ["g"])))[:2]
        ends = (f"e{i}", two, one) if one == "g" else (f"e{i}", one, two)
        links.append(draw(_link(wishes, motion, tolerance, ends, tree=False)))
    return {
        "format": "keepclear",
        "version": 1,
        "title": "random",
        "motion": motion,
        "bodies": bodies,
        "supports": [ground],
        "links": links,
        "machines": draw(machines()),
    }


@st.composite
def machines(draw):
    """One machine with two orders and a fixed frequency."""
    rpm = draw(st.integers(300, 6000))
    machine = {
        "id": "machine",
        "speed": f"{rpm} rpm" if draw(st.booleans()) else {"from": f"{rpm} rpm", "to": f"{rpm * 1.3!r} rpm"},
        "margin": draw(st.sampled_from(("10 %", {"below": "5 %", "above": "30 %"}))),
        "excitations": [
            {"id": "1x", "order": 1},
            {"id": "7x", "order": 7},
            {"id": "line", "frequency": "100 Hz"},
        ],
    }
    if draw(st.booleans()):
        machine["speed_tolerance"] = "2 %"
    return [machine]


@st.composite
def _body(draw, motion, name, place, tolerance, massless):
    made = {"id": name}
    if DIMENSIONS[motion]:
        made["position"] = point(place)
    if motion != "shaft train":
        made["mass"] = "0 kg" if massless else value(draw(masses), "kg", draw(tolerance))
    if motion == "space":
        i = draw(masses)
        made["inertia"] = {"Ixx": f"{i!r} kg m2", "Iyy": f"{1.5 * i!r} kg m2", "Izz": f"{2 * i!r} kg m2"}
        if draw(st.booleans()):
            made["inertia"] |= {"Pxy": f"{0.25 * i!r} kg m2", "Pyz": f"{-0.125 * i!r} kg m2"}
    elif motion == "shaft train":
        made["inertia"] = "0 kg m2" if massless else value(draw(masses), "kg m2", draw(tolerance))
    elif motion == "plane" and not massless and draw(st.booleans()):
        made["inertia"] = value(draw(masses), "kg m2", draw(tolerance))
    return made


@st.composite
def _end(draw, motion, name, *, offset):
    if name == "g":
        return {"support": name}
    made = {"body": name}
    if offset and DIMENSIONS[motion] and draw(st.booleans()):
        made["offset"] = point(draw(st.tuples(*[tenths] * DIMENSIONS[motion])))
    return made


@st.composite
def _link(draw, wishes, motion, tolerance, ends, *, tree):
    """A link between two parts; gears only along the ``tree``, so that they make no loop."""
    kinds = {
        "single axis": ["spring", "mount"],
        "shaft train": ["shaft"],
        "plane": ["mount", "spring", "strut", "beam"],
        "space": ["mount", "spring", "strut", "beam"],
    }[motion]
    name, start, stop = ends
    on_bodies = stop != "g"
    if wishes.gears and on_bodies and tree and motion in ("shaft train", "plane"):
        kinds = [*kinds, "gear", "mesh"]
    if wishes.joints and on_bodies and motion != "shaft train":
        kinds = [*kinds, "rigid link"] + ([] if wishes.turnable else ["partly rigid link"])
    kind = draw(st.sampled_from(kinds))
    made = {
        "id": name,
        "kind": {"mesh": "gear", "partly rigid link": "rigid link", "strut": "spring"}.get(kind, kind),
        "from": draw(_end(motion, start, offset=kind not in ("beam", "strut"))),
        "to": draw(_end(motion, stop, offset=kind not in ("beam", "strut"))),
    }
    return made | draw(_VALUES[kind](motion, draw(stiffnesses), tolerance))


def _spring_values(motion, k, tolerance):
    return st.builds(
        lambda t, d: {"stiffness": value(k, "N/m", t)} | ({"direction": d} if motion in directions else {}),
        tolerance,
        directions.get(motion, st.none()),
    )


def _mount_values(motion, k, tolerance):
    names = FREEDOMS[motion]
    return st.builds(
        lambda ts, some: {
            "stiffness": {
                n: value(
                    k * (1 + i) / (10 if n.startswith("r") else 1),
                    "N m/rad" if n.startswith("r") else "N/m",
                    t,
                )
                for i, (n, t) in enumerate(zip(names, ts, strict=True))
                if i < some
            }
        },
        st.tuples(*[tolerance] * len(names)),
        st.integers(1, len(names)),
    )


def _beam_values(motion, k, tolerance):
    keys = {"E": (200.0, "GPa"), "A": (k, "mm2")}
    if motion == "plane":
        keys["I"] = (1.3 * k, "cm4")
    else:
        keys |= {"Iy": (k, "cm4"), "Iz": (k, "cm4"), "G": (80.0, "GPa"), "J": (2 * k, "cm4")}
    return st.builds(
        lambda t: {
            n: value(number if n in ("E", "G") else number / 1000, u, t) for n, (number, u) in keys.items()
        },
        tolerance,
    )


def _shaft_values(_motion, k, tolerance):
    return tolerance.map(lambda t: {"stiffness": value(k, "N m/rad", t)})


def _gear_values(_motion, _k, _tolerance):
    return st.sampled_from(({"teeth": [84, 20]}, {"ratio": "-1/3"}, {"ratio": 2.5}, {"teeth": [17, -51]}))


def _mesh_values(_motion, k, tolerance):
    return tolerance.map(
        lambda t: {
            "teeth": [30, 90],
            "stiffness": value(k, "N/m", t),
            "pitch_radius": {"from": "0.1 m", "to": "0.3 m"},
        }
    )


_VALUES = {
    "spring": _spring_values,
    "strut": lambda _motion, k, tolerance: tolerance.map(lambda t: {"stiffness": value(k, "N/m", t)}),
    "mount": _mount_values,
    "beam": _beam_values,
    "shaft": _shaft_values,
    "gear": _gear_values,
    "mesh": _mesh_values,
    "rigid link": lambda *_: st.just({}),
    "partly rigid link": lambda motion, *_: st.just({"directions": list(FREEDOMS[motion][:1])}),
}


def parsed(document):
    return parse_model(json.dumps(document))


def moved(document, shift):
    """The same model elsewhere."""
    found = copy.deepcopy(document)
    for part in (*found["bodies"], *found["supports"]):
        if "position" in part:
            part["position"] = [
                f"{round(float(c.split()[0]) + s, 6)!r} m"
                for c, s in zip(part["position"], shift, strict=False)
            ]
    return found


def renumbered(document, bodies, links):
    """The same model with its bodies and links in another order and other ends first."""
    found = copy.deepcopy(document)
    found["bodies"] = [found["bodies"][i] for i in bodies]
    found["links"] = [found["links"][i] for i in links]
    return found


OTHER_UNITS = {
    "m": ("mm", 1e3),
    "kg": ("t", 1e-3),
    "N/m": ("lbf/in", 0.0254 / 4.4482216152605),
    "N m/rad": ("kN m/rad", 1e-3),
    "kg m2": ("lb ft2", 1 / (0.45359237 * 0.3048**2)),
    "GPa": ("lbf/in2", 1e9 * 0.0254**2 / 4.4482216152605),
    "mm2": ("in2", 1 / 645.16),
    "cm4": ("mm4", 1e4),
    "rpm": ("Hz", 1 / 60),
    "Hz": ("cpm", 60.0),
}


def in_other_units(node):
    """Every typed value in another unit of its quantity."""
    if isinstance(node, dict):
        return {
            key: entry if key in ("id", "kind", "motion", "title", "format") else in_other_units(entry)
            for key, entry in node.items()
        }
    if isinstance(node, list):
        return [in_other_units(entry) for entry in node]
    if isinstance(node, str) and " " in node:
        number, unit = node.split(" ", 1)
        if unit in OTHER_UNITS:
            other, factor = OTHER_UNITS[unit]
            return f"{float(number) * factor!r} {other}"
    return node


# Turns by the angle of the 3-4-5 triangle: exact in decimals.
TURNS = {"plane": ((0.6, -0.8), (0.8, 0.6)), "space": ((0.6, -0.8, 0.0), (0.8, 0.6, 0.0), (0.0, 0.0, 1.0))}


def _turn(matrix, vector):
    return [round(sum(a * v for a, v in zip(row, vector, strict=True)), 9) for row in matrix]


def turned(document):
    """The same model turned as a whole, drawn axes, tensors and all."""
    found = copy.deepcopy(document)
    matrix = TURNS[found["motion"]]
    for part in (*found["bodies"], *found["supports"]):
        part["position"] = _turned_point(matrix, part["position"])
        if isinstance(part.get("inertia"), dict) and "Ixx" in part["inertia"]:
            part["inertia"] = _turned_tensor(matrix, part["inertia"])
    for link in found["links"]:
        for key in ("from", "to"):
            if "offset" in link[key]:
                link[key]["offset"] = _turned_point(matrix, link[key]["offset"])
        if "direction" in link:
            link["direction"] = _turn(matrix, link["direction"])
        if link["kind"] == "mount":
            unit = [[float(i == j) for j in range(len(matrix))] for i in range(2)]
            link["axes"] = {"x": _turn(matrix, unit[0]), "y": _turn(matrix, unit[1])}
    return found


def _turned_point(matrix, texts):
    return [f"{c!r} m" for c in _turn(matrix, [float(text.split()[0]) for text in texts])]


def _turned_tensor(matrix, inertia):
    def entry(key):
        return float(inertia[key].split()[0]) if key in inertia else 0.0

    J = [
        [entry("Ixx"), -entry("Pxy"), -entry("Pxz")],
        [-entry("Pxy"), entry("Iyy"), -entry("Pyz")],
        [-entry("Pxz"), -entry("Pyz"), entry("Izz")],
    ]
    columns = [_turn(matrix, column) for column in zip(*J, strict=True)]  # R J, column by column
    T = [_turn(matrix, row) for row in zip(*columns, strict=True)]  # (R J) R^T, row by row
    names = {
        "Ixx": T[0][0],
        "Iyy": T[1][1],
        "Izz": T[2][2],
        "Pxy": -T[0][1],
        "Pxz": -T[0][2],
        "Pyz": -T[1][2],
    }
    return {key: f"{number!r} kg m2" for key, number in names.items()}

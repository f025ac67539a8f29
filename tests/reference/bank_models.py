"""From a case of the check bank to a model document, in the motion that its freedoms ask for.

The document is JSON text as a person's file would hold it, so that a test takes the whole public path.
"""

import json
from collections.abc import Callable
from typing import Any

Tree = dict[str, Any]
Axis = tuple[int, ...]

LETTERS = "xyz"
# A proper rotation of the bank's axes onto the plane's: z -> x, x -> y, y -> z, so that a right-handed
# rotation about y of the bank is the plane's anticlockwise rz, with no change of sign.
PLANE_FROM = {"z": "x", "x": "y", "ry": "rz"}
PLANE_AXES: Axis = (2, 0)
SPACE_AXES: Axis = (0, 1, 2)


def document(case: Tree) -> str:
    """Return the model of a case as the text of a file."""
    model = case["model"]
    freedoms = {one for body in model["bodies"] for one in body["freedoms"]}
    build = _train if freedoms <= {"rx"} else _line if len(freedoms) == 1 else _solid(freedoms)
    return text(f"{case['id']} {case['title']}", *build(model))


def text(title: str, motion: str, bodies: list[Tree], links: list[Tree], supports: list[Tree]) -> str:
    """Return a model document of these parts."""
    return json.dumps(
        {
            "format": "keepclear",
            "version": 1,
            "title": title,
            "motion": motion,
            "bodies": bodies,
            "supports": supports,
            "links": links,
        }
    )


def _line(model: Tree) -> tuple[str, list[Tree], list[Tree], list[Tree]]:
    bodies = [{"id": body["id"], "mass": f"{body['mass_kg']!r} kg"} for body in model["bodies"]]
    links = [
        {"id": one["id"], "kind": "spring", **_ends(one), "stiffness": f"{one['stiffness_N_per_m']!r} N/m"}
        for one in model["springs"]
    ]
    links += [
        {"id": one["id"], "kind": "damper", **_ends(one), "damping": f"{one['damping_Ns_per_m']!r} N s/m"}
        for one in model.get("dashpots", [])
    ]
    return "single axis", bodies, links, [{"id": "ground"}]


def _train(model: Tree) -> tuple[str, list[Tree], list[Tree], list[Tree]]:
    bodies = [
        {"id": body["id"], "inertia": f"{body['inertia_kgm2']['rx']!r} kg m2"} for body in model["bodies"]
    ]
    shafts = [
        {
            "id": one["id"],
            "kind": "shaft",
            **_ends(one),
            "stiffness": f"{one['stiffness_Nm_per_rad']!r} N m/rad",
        }
        for one in model["springs"]
    ]
    gears = [
        {
            "id": f"mesh {one['a']} {one['b']}",
            "kind": "gear",
            "from": {"body": one["a"]},
            "to": {"body": one["b"]},
            "ratio": one["ratio_b_over_a"],
        }
        for one in model.get("gears", [])
    ]
    return "shaft train", bodies, shafts + gears, [{"id": "ground"}]


def _ends(link: Tree) -> Tree:
    return {key: _end(end["body"]) for key, end in zip(("from", "to"), link["ends"], strict=True)}


def _end(body: str) -> Tree:
    return {"support": "ground"} if body == "ground" else {"body": body}


def _solid(freedoms: set[str]) -> Callable[[Tree], tuple[str, list[Tree], list[Tree], list[Tree]]]:
    plane = freedoms <= set(PLANE_FROM)

    def build(model: Tree) -> tuple[str, list[Tree], list[Tree], list[Tree]]:
        axes = PLANE_AXES if plane else SPACE_AXES
        places = {body["id"]: body["position_m"] for body in model["bodies"]}
        bodies = [_flat_body(body) if plane else _space_body(body) for body in model["bodies"]]
        links = [_solid_link(one, places, axes) for one in model["springs"]]
        supports = [
            {"id": f"ground {one['id']}", "position": _metres(end["point_m"], axes)}
            for one in model["springs"]
            for end in one["ends"]
            if end["body"] == "ground"
        ]
        return "plane" if plane else "space", bodies, links, supports

    return build


def _metres(point: list[float], axes: Axis) -> list[str]:
    return [f"{point[axis]!r} m" for axis in axes]


def _flat_body(body: Tree) -> Tree:
    return {
        "id": body["id"],
        "mass": f"{body['mass_kg']!r} kg",
        "inertia": f"{body['inertia_kgm2']['ry']!r} kg m2",
        "position": _metres(body["position_m"], PLANE_AXES),
        "dof": [PLANE_FROM[one] for one in body["freedoms"]],
    }


def _space_body(body: Tree) -> Tree:
    tensor = body["inertia_tensor_kgm2"]
    moments = {f"I{2 * LETTERS[axis]}": f"{tensor[axis][axis]!r} kg m2" for axis in SPACE_AXES}
    products = {
        f"P{LETTERS[a]}{LETTERS[b]}": f"{-tensor[a][b]!r} kg m2"
        for a, b in ((0, 1), (0, 2), (1, 2))
        if tensor[a][b]
    }
    return {
        "id": body["id"],
        "mass": f"{body['mass_kg']!r} kg",
        "inertia": {**moments, **products},
        "position": _metres(body["position_m"], SPACE_AXES),
        "dof": body["freedoms"],
    }


def _solid_link(link: Tree, places: Tree, axes: Axis) -> Tree:
    ends: Tree = {}
    for key, end in zip(("from", "to"), link["ends"], strict=True):
        if end["body"] == "ground":
            ends[key] = {"support": f"ground {link['id']}"}
            continue
        at = places[end["body"]]
        offset = [point - centre for point, centre in zip(end.get("point_m", at), at, strict=True)]
        ends[key] = {"body": end["body"], "offset": _metres(offset, axes)}
    if link["kind"] == "linear":
        direction = [link["direction"][axis] for axis in axes]
        stiffness = f"{link['stiffness_N_per_m']!r} N/m"
        return {"id": link["id"], "kind": "spring", **ends, "stiffness": stiffness, "direction": direction}
    along = zip(LETTERS, link["stiffness_N_per_m"], strict=True)
    return {
        "id": link["id"],
        "kind": "mount",
        **ends,
        "stiffness": {axis: f"{value!r} N/m" for axis, value in along},
        "axes": {"x": link["axes"][0], "y": link["axes"][1]},
    }

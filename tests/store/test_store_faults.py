"""Every fault of the file format is refused by name, with its place and a reason."""

import json

import pytest

from modalview.errors import FileFaultsError
from modalview.store import parse_model
from modalview.store.json_text import JsonMap

HEAD = {"format": "keepclear", "version": 1}
ENDS = {"from": {"body": "a"}, "to": {"support": "ground"}}
MACHINE = {
    "id": "m",
    "speed": "1500 rpm",
    "on": "a",
    "margin": "15 %",
    "excitations": [
        {
            "id": "1x",
            "order": 1,
            "at": {"body": "a"},
            "direction": "y",
            "magnitude": {"grade": "G 6.3", "rotor_mass": "1 kg"},
        }
    ],
}
SINGLE = {
    **HEAD,
    "motion": "single axis",
    "bodies": [{"id": "a", "mass": "1 kg"}, {"id": "b", "mass": {"value": "1 kg", "tolerance": "3 %"}}],
    "supports": [{"id": "ground"}],
    "links": [
        {
            "id": "k",
            "kind": "spring",
            "from": {"body": "a"},
            "to": {"body": "b"},
            "stiffness": {"value": "4 N/m"},
        },
        {"id": "c", "kind": "damper", **ENDS, "damping": "1 N s/m"},
        {"id": "r", "kind": "rigid link", "from": {"body": "a"}, "to": {"body": "b"}},
    ],
    "machines": [MACHINE],
}
TRAIN = {
    **HEAD,
    "motion": "shaft train",
    "bodies": [{"id": "a", "inertia": "1 kg m2"}, {"id": "b", "inertia": "1 kg m2"}],
    "supports": [{"id": "ground"}],
    "links": [
        {"id": "s", "kind": "shaft", **ENDS, "stiffness": "1 N m/rad"},
        {"id": "g", "kind": "gear", "from": {"body": "a"}, "to": {"body": "b"}, "ratio": -2},
        {
            "id": "e",
            "kind": "gear",
            "from": {"body": "a"},
            "to": {"body": "b"},
            "teeth": [40, 20],
            "stiffness": "1 N/m",
            "pitch_radius": {"from": "2 m", "to": "1 m"},
        },
    ],
    "machines": [
        {"id": "m", "speed": "1500 rpm", "margin": "1 %", "excitations": [{"id": "1x", "order": 1}]}
    ],
}
PLANE = {
    **HEAD,
    "motion": "plane",
    "bodies": [
        {"id": "a", "mass": "1 kg", "inertia": "1 kg m2", "position": ["0 m", "1 m"]},
        {"id": "b", "mass": "1 kg", "position": ["0 m", "2 m"]},
    ],
    "supports": [{"id": "ground", "position": ["0 m", "0 m"]}],
    "links": [
        {"id": "k", "kind": "spring", **ENDS, "stiffness": "1 N/m"},
        {"id": "m1", "kind": "mount", **ENDS, "stiffness": {"x": "1 N/m"}, "axes": {"x": [1, 0]}},
        {"id": "b1", "kind": "beam", **ENDS, "E": "1 GPa", "A": "1 m2", "I": "1 m4"},
    ],
    "machines": [MACHINE],
}
SPACE = {
    **HEAD,
    "motion": "space",
    "bodies": [
        {
            "id": "a",
            "mass": "1 kg",
            "inertia": {"Ixx": "2 kg m2", "Iyy": "3 kg m2", "Izz": "4 kg m2"},
            "position": ["0 m", "0 m", "1 m"],
        },
        {"id": "b", "mass": "1 kg", "position": ["1 m", "0 m", "0 m"]},
    ],
    "supports": [{"id": "ground", "position": ["0 m", "0 m", "0 m"]}],
    "links": [
        {"id": "k", "kind": "spring", **ENDS, "stiffness": "1 N/m"},
        {"id": "m1", "kind": "mount", **ENDS, "stiffness": {"z": "1 N/m"}},
        {
            "id": "b1",
            "kind": "beam",
            **ENDS,
            "E": "1 GPa",
            "A": "1 m2",
            "Iy": "1 m4",
            "Iz": "2 m4",
            "G": "1 GPa",
            "J": "1 m4",
            "axes": {"y": [0, 1, 0]},
        },
    ],
    "machines": [MACHINE],
}
GONE = object()


def changed(tree, place, new):
    """Return the tree with ``new`` at a place such as "links.0.stiffness"; GONE removes it."""
    tree = json.loads(json.dumps(tree))  # a copy in which no object stands twice
    *steps, last = [int(step) if step.isdigit() else step for step in place.split(".")]
    node = tree
    for step in steps:
        node = node[step]
    if new is GONE:
        del node[last]
    else:
        node[last] = new
    return tree


def faults_of(tree):
    text = tree if isinstance(tree, str) else json.dumps(tree)
    with pytest.raises(FileFaultsError) as caught:
        parse_model(text)
    return caught.value.faults


@pytest.mark.parametrize("tree", [SINGLE, TRAIN, PLANE, SPACE], ids=lambda tree: tree["motion"])
def test_the_models_are_right_before_they_are_spoiled(tree):
    assert parse_model(json.dumps(tree)).bodies


CASES = [
    # keys
    (SINGLE, "bodies.0.weight", "1 kg", 'bodies[0] "a" . weight', "is not a key here"),
    (SINGLE, "bodies.0.nam", "x", 'bodies[0] "a" . nam', 'did you mean "name"'),
    (SINGLE, "machins", [], "machins", 'did you mean "machines"'),
    (SINGLE, "links.0.stiffnes", "1 N/m", 'links[0] "k" . stiffnes', 'did you mean "stiffness"'),
    (SINGLE, "links.0.from.bdy", "a", 'links[0] "k" . from . bdy', 'did you mean "body"'),
    (
        SINGLE,
        "bodies.1.mass.tolerence",
        "1 %",
        'bodies[1] "b" . mass . tolerence',
        'did you mean "tolerance"',
    ),
    (SINGLE, "links.0.kind", "sprng", 'links[0] "k" . kind', 'did you mean "spring"'),
    (SINGLE, "links.0.kind", GONE, 'links[0] "k" . kind', "is missing"),
    (SINGLE, "motion", "sideways", "motion", 'one of "single axis"'),
    (SINGLE, "motion", GONE, "motion", "is missing"),
    # values and units
    (SINGLE, "bodies.0.mass", "1 m", 'bodies[0] "a" . mass', "cannot be read as mass"),
    (SINGLE, "bodies.0.mass", "1,5 kg", 'bodies[0] "a" . mass', "comma"),
    (SINGLE, "bodies.0.mass", "", 'bodies[0] "a" . mass', "empty"),
    (SINGLE, "bodies.0.mass", 620, 'bodies[0] "a" . mass', 'such as "620 kg"'),
    (SINGLE, "bodies.0.mass", None, 'bodies[0] "a" . mass', "null"),
    (SINGLE, "bodies.0.mass", True, 'bodies[0] "a" . mass', "found true"),
    (SINGLE, "bodies.0.mass", ["1 kg"], 'bodies[0] "a" . mass', "a list"),
    (SINGLE, "bodies.0.mass", {"tolerance": "3 %"}, 'bodies[0] "a" . mass . value', "is missing"),
    (SINGLE, "bodies.0.mass", {"value": 3}, 'bodies[0] "a" . mass . value', "the number 3"),
    (SINGLE, "bodies.0.mass", float("nan"), 'bodies[0] "a" . mass', "NaN, which is not a number"),
    (SINGLE, "bodies.0.mass", "nan kg", 'bodies[0] "a" . mass', "plain number"),
    (SINGLE, "bodies.0.mass", "1e999 kg", 'bodies[0] "a" . mass', "too large"),
    (SINGLE, "bodies.0.mass", "1e200 kg", 'bodies[0] "a" . mass', "check unit and power"),
    (SINGLE, "bodies.0.mass", "1e-200 kg", 'bodies[0] "a" . mass', "check unit and power"),
    (PLANE, "links.0.direction", [1e-200, 1], 'links[0] "k" . direction[0]', "beyond all measure"),
    (PLANE, "bodies.0.position.0", "1 kg", 'bodies[0] "a" . position[0]', "as length"),
    (PLANE, "bodies.0.position.0", "1e12 m", 'bodies[0] "a" . position[0]', "is 1e12 m; a length"),
    (
        PLANE,
        "bodies.0.position.1",
        "-100100 m",
        'bodies[0] "a" . position[1]',
        "is -100100 m; a length is at most 100000 m",
    ),
    (PLANE, "bodies.0.drawn", {"width": "1e6 m"}, 'bodies[0] "a" . drawn . width', "nearer zero"),
    (SINGLE, "bodies.0.mass", "-1 kg", 'bodies[0] "a" . mass', "must not be negative"),
    (SINGLE, "bodies.0.mass", GONE, 'bodies[0] "a" . mass', "is missing"),
    (SINGLE, "bodies.0.id", GONE, "bodies[0] . id", "is missing"),
    (SINGLE, "bodies.0.id", " ", 'bodies[0] " " . id', "must not be empty"),
    (SINGLE, "bodies.0.id", "a\nb", r'bodies[0] "a\u000ab" . id', "holds a line break as character 2"),
    (SINGLE, "bodies.0.id", "a\u00a0b", "id", "the invisible character U+00A0 (no-break space)"),
    (SINGLE, "bodies.0.id", "a\U0001f469\u200d\U0001f527", "id", "U+200D (zero width joiner) as character 3"),
    (SINGLE, "machines.0.excitations.0.id", "1\tx", 'excitations[0] "1\\u0009x" . id', "holds a tab"),
    # names
    (SINGLE, "title", "Pump\r\nset", "title", "a line break as character 5; it must stand on one line"),
    (SINGLE, "bodies.0.name", "\x1b[31mred", 'bodies[0] "a" . name', "an escape sign (U+001B)"),
    (SINGLE, "bodies.0.name", "ab\u202ecd", 'bodies[0] "a" . name', "(right-to-left override)"),
    (SINGLE, "bodies.0.name", "a\u2028b", 'bodies[0] "a" . name', "(line separator) as character 2"),
    (SINGLE, "links.0.name", "a\x85b", 'links[0] "k" . name', "the control character U+0085 as"),
    (SINGLE, "machines", [MACHINE | {"name": "a\x7f"}], 'machines[0] "m" . name', "U+007F"),
    (SINGLE, "load_cases", [{"id": "l", "name": "a\vb"}], 'load_cases[0] "l" . name', "U+000B"),
    (SINGLE, "title_block", {"revision": "A\n2"}, "title_block . revision", "write a space instead"),
    (SINGLE, "machines.0.excitations.0.name", "a\nb", 'excitations[0] "1x" . name', "a line break"),
    (SINGLE, "bodies.0.mass", "1\nkg", 'bodies[0] "a" . mass', "holds a line break or an invisible"),
    (SINGLE, "bodies.0.name", 3, 'bodies[0] "a" . name', "found the number 3"),
    (SINGLE, "bodies.0.name", "\ud800", 'bodies[0] "a" . name', "half of a character"),
    (SINGLE, "bodies.0", "pump", "bodies[0]", "an object with id"),
    (SINGLE, "bodies", {"id": "a"}, "bodies", "a list"),
    (
        SINGLE,
        "machines.0.excitations.0.order",
        float("inf"),
        'machines[0] "m" . excitations[0] "1x" . order',
        "Inf",
    ),
    (
        SINGLE,
        "machines.0.excitations.0.order",
        10**400,
        'machines[0] "m" . excitations[0] "1x" . order',
        "measure",
    ),
    (
        SINGLE,
        "machines.0.excitations.0.order",
        "1",
        'machines[0] "m" . excitations[0] "1x" . order',
        "a number",
    ),
    (SINGLE, "units", "cgs", "units", "inch-pound"),
    # ids
    (SINGLE, "bodies.1.id", "a", 'bodies[1] "a" . id', "already the id of bodies[0]"),
    (SINGLE, "links.0.id", "ground", 'links[0] "ground" . id', "already the id of supports[0]"),
    (
        SINGLE,
        "machines.0.excitations",
        [{"id": "x", "order": 1}] * 2,
        "excitations[1]",
        "already an excitation",
    ),
    # tolerances
    (SINGLE, "bodies.1.mass.tolerance", "100 %", 'bodies[1] "b" . mass . tolerance', "below 100 %"),
    (SINGLE, "bodies.1.mass.tolerance", "-1 %", 'bodies[1] "b" . mass . tolerance', "from 0 %"),
    (SINGLE, "bodies.1.mass.tolerance", 3, 'bodies[1] "b" . mass . tolerance', "a tolerance"),
    (SINGLE, "bodies.1.mass.tolerance", {"minus": "1 %"}, "tolerance . plus", "both minus and plus"),
    (SINGLE, "bodies.1.mass.tolerance", {"minus": "120 %", "plus": "120 %"}, "tolerance", "downwards"),
    (SINGLE, "bodies.1.mass.tolerance", {"minus": "1 %", "plus": "-1 %"}, "tolerance", "upwards"),
    (SINGLE, "bodies.1.mass.tolerance", {"from": "2 kg", "to": "3 kg"}, "tolerance", "must enclose"),
    (SINGLE, "bodies.1.mass.tolerance", {"from": "0 kg", "to": "3 kg"}, "tolerance", "above zero"),
    (SINGLE, "bodies.1.mass.tolerance", {"from": "2 N", "to": "3 kg"}, "tolerance . from", "as mass"),
    (SINGLE, "bodies.1.tolerance", {"from": "2 kg", "to": "3 kg"}, 'bodies[1] "b" . tolerance', "percentage"),
    (SINGLE, "default_tolerance", {"mass": "100 %"}, "default_tolerance . mass", "below 100 %"),
    # bodies
    (PLANE, "bodies.0.position", GONE, 'bodies[0] "a" . position', "is missing"),
    (PLANE, "bodies.0.position", ["1 m"], 'bodies[0] "a" . position', "has 1 numbers"),
    (PLANE, "supports.0.position", GONE, 'supports[0] "ground" . position', "is missing"),
    (SPACE, "bodies.0.position", ["0 m", "0 m"], 'bodies[0] "a" . position', "needs three"),
    (SINGLE, "bodies.0.position", ["0 m", "0 m", "0 m"], 'bodies[0] "a" . position', "needs two"),
    (PLANE, "bodies.0.dof", ["x", "z"], 'bodies[0] "a" . dof', 'no direction "z"'),
    (PLANE, "bodies.0.dof", ["x", "x"], 'bodies[0] "a" . dof', "twice"),
    (PLANE, "bodies.0.drawn", {"shape": "star"}, 'bodies[0] "a" . drawn . shape', "box, disc, point"),
    (PLANE, "bodies.0.inertia", "-1 kg m2", 'bodies[0] "a" . inertia', "must not be negative"),
    (
        PLANE,
        "bodies.0.inertia",
        SPACE["bodies"][0]["inertia"],
        'bodies[0] "a" . inertia',
        "one value about z",
    ),
    (SPACE, "bodies.0.inertia", "1 kg m2", 'bodies[0] "a" . inertia', "in space is"),
    (TRAIN, "bodies.0.inertia", GONE, 'bodies[0] "a" . inertia', "is missing"),
    (SPACE, "bodies.0.inertia.Ixx", "9 kg m2", 'bodies[0] "a" . inertia . Ixx', "more than Iyy + Izz"),
    (SPACE, "bodies.0.inertia.Iyy", "9 kg m2", 'bodies[0] "a" . inertia . Iyy', "more than Ixx + Izz"),
    (SPACE, "bodies.0.inertia.Izz", "9 kg m2", 'bodies[0] "a" . inertia . Izz', "more than Ixx + Iyy"),
    (SPACE, "bodies.0.inertia.Ixx", "0 kg m2", 'bodies[0] "a" . inertia . Ixx', "above zero"),
    (SPACE, "bodies.0.inertia.Ixx", GONE, 'bodies[0] "a" . inertia . Ixx', "is missing"),
    (SPACE, "bodies.0.inertia.Pxy", "3 kg m2", 'bodies[0] "a" . inertia', "too large"),
    (
        SPACE,
        "bodies.0.inertia.Ixx",
        {"value": "2 kg m2", "tolerance": "1 %"},
        "Ixx . tolerance",
        "as a whole",
    ),
    # ends
    (SINGLE, "links.0.to", GONE, 'links[0] "k" . to', "is missing"),
    (SINGLE, "links.0.to", {}, 'links[0] "k" . to', "neither is given"),
    (SINGLE, "links.0.to", {"body": "a", "support": "ground"}, 'links[0] "k" . to', "both are given"),
    (SINGLE, "links.0.to", {"body": "zz"}, 'links[0] "k" . to . body', 'no body "zz"'),
    (SINGLE, "links.0.to", {"body": "ground"}, 'links[0] "k" . to . body', "it is a support"),
    (SINGLE, "links.0.to", {"support": "zz"}, 'links[0] "k" . to . support', 'no support "zz"'),
    (SINGLE, "links.0.to", {"body": "a"}, 'links[0] "k" . to', "both ends are on"),
    (SINGLE, "links.1.from", {"support": "ground"}, 'links[1] "c" . to', "both ends are on supports"),
    (PLANE, "links.0.from.offset", ["1 m"], 'links[0] "k" . from . offset', "has 1 numbers"),
    (PLANE, "links.0.to.offset", ["1 m", "1 m"], 'links[0] "k" . to . offset', "centre of gravity"),
    (SPACE, "links.0.from.offset", ["1 m", "0 m"], 'links[0] "k" . from . offset', "needs three"),
    (SINGLE, "links.2.to", {"support": "ground"}, 'links[2] "r" . to', "joins two bodies"),
    (TRAIN, "links.1.to", {"support": "ground"}, 'links[1] "g" . to', "joins two bodies"),
    (PLANE, "links.0.from.offset", ["0 m", "-1 m"], 'links[0] "k" . direction', "the ends coincide"),
    (PLANE, "links.2.from.offset", ["0 m", "-1 m"], 'links[2] "b1" . to', "no length"),
    # links
    (SINGLE, "links.0.stiffness", "0 N/m", 'links[0] "k" . stiffness', "above zero"),
    (SINGLE, "links.0.stiffness.value", "-4 N/m", 'links[0] "k" . stiffness', "above zero"),
    (SINGLE, "links.0.stiffness", GONE, 'links[0] "k" . stiffness', "is missing"),
    (SINGLE, "links.0.stiffness.tolerance", "150 %", "stiffness . tolerance", "below 100 %"),
    (SINGLE, "links.1.damping", "-1 N s/m", 'links[1] "c" . damping', "must not be negative"),
    (SINGLE, "links.0.loss_factor", "-1 %", 'links[0] "k" . loss_factor', "must not be negative"),
    (SINGLE, "links.0.dynamic_ratio", "0", 'links[0] "k" . dynamic_ratio', "above zero"),
    (SINGLE, "links.0.rated_load", "0 N", 'links[0] "k" . rated_load', "above zero"),
    (SINGLE, "links.0.vary_limits", {"low": "1 m"}, 'links[0] "k" . vary_limits . low', "as stiffness"),
    (SINGLE, "links.0.vary_limits", {"low": "2 N/m", "high": "1 N/m"}, "vary_limits", "must rise"),
    (SINGLE, "links.2.vary_limits", {"low": "1 m"}, 'links[2] "r" . vary_limits', "no value"),
    (SINGLE, "links.0.direction", "x", 'links[0] "k" . direction', 'found "x"'),
    (SINGLE, "links.2.directions", ["x"], 'links[2] "r" . directions', 'no direction "x"'),
    (SINGLE, "links.2.directions", [], 'links[2] "r" . directions', "is empty"),
    (SINGLE, "links.0", PLANE["links"][2], 'links[0] "b1" . kind', "no meaning in single axis"),
    (TRAIN, "links.0", SINGLE["links"][0], 'links[0] "k" . kind', "no meaning in shaft train"),
    (PLANE, "links.0.direction", "z", 'links[0] "k" . direction', 'found "z"'),
    (PLANE, "links.0.direction", "rotating", 'links[0] "k" . direction', "rotating"),
    (PLANE, "links.0.direction", [0, 0], 'links[0] "k" . direction', "no length"),
    (PLANE, "links.0.direction", [1, 0, 0], 'links[0] "k" . direction', "needs 2"),
    (PLANE, "links.0.direction", [1, float("nan")], 'links[0] "k" . direction[1]', "NaN"),
    (SPACE, "links.0.direction", "30 deg", 'links[0] "k" . direction', 'found "30 deg"'),
    (PLANE, "links.1.stiffness", {"z": "1 N/m"}, 'links[1] "m1" . stiffness . z', "no direction z"),
    (PLANE, "links.1.stiffness", {"x": "0 N/m"}, 'links[1] "m1" . stiffness . x', "above zero"),
    (PLANE, "links.1.stiffness", GONE, 'links[1] "m1" . stiffness', "needs stiffness or damping"),
    (PLANE, "links.1.axes", {"x": [1, 0], "y": [1, 1]}, 'links[1] "m1" . axes', "right angles"),
    (PLANE, "links.1.axes", {}, 'links[1] "m1" . axes', "need x or y"),
    (SPACE, "links.1.axes", {}, 'links[1] "m1" . axes', "need x or y"),
    (SPACE, "links.1.axes", {"x": [1, 0]}, 'links[1] "m1" . axes . x', "needs 3"),
    (TRAIN, "links.1.ratio", "-21:5", 'links[1] "g" . ratio', "fraction"),
    (SPACE, "machines.0.excitations.0.direction", "rx", "direction", 'found "rx"'),
    (PLANE, "links.2.I", GONE, 'links[2] "b1" . I', "needs E, A, I"),
    (PLANE, "links.2.E", GONE, 'links[2] "b1" . E', "is missing"),
    (PLANE, "links.2.J", "1 m4", 'links[2] "b1" . J', "does not belong"),
    (SPACE, "links.2.G", GONE, 'links[2] "b1" . G', "needs E, A, Iy, Iz, G, J"),
    (SPACE, "links.2.Iy", "0 m4", 'links[2] "b1" . Iy', "above zero"),
    (SPACE, "links.2.axes", GONE, 'links[2] "b1" . axes', "Iy and Iz differ"),
    (SPACE, "links.2.axes", {"y": [0, 0, 1]}, 'links[2] "b1" . axes . y', "runs along the beam"),
    (SPACE, "links.2.axes", {"x": [0, 0, 1]}, 'links[2] "b1" . axes', "y alone"),
    (PLANE, "links.2.axes", {"y": [0, 1]}, 'links[2] "b1" . axes', "no meaning"),
    (TRAIN, "links.0.axis", [1, 0], 'links[0] "s" . axis', "in space only"),
    (TRAIN, "links.1.ratio", 0, 'links[1] "g" . ratio', "not zero"),
    (TRAIN, "links.1.ratio", "1/0", 'links[1] "g" . ratio', "not zero"),
    (TRAIN, "links.1.ratio", "1e9", 'links[1] "g" . ratio', "fraction"),
    (TRAIN, "links.1.ratio", GONE, 'links[1] "g" . ratio', "neither is given"),
    (TRAIN, "links.1.teeth", [20, 40], 'links[1] "g" . ratio', "both are given"),
    (TRAIN, "links.2.teeth", [0, 40], 'links[2] "e" . teeth', "neither zero"),
    (TRAIN, "links.2.teeth", [-20, -40], 'links[2] "e" . teeth', "at most one negative"),
    (TRAIN, "links.2.teeth", [20], 'links[2] "e" . teeth', "a list of 2"),
    (TRAIN, "links.2.teeth", [20.5, 40], 'links[2] "e" . teeth[0]', "a whole number"),
    (TRAIN, "links.2.pitch_radius", GONE, 'links[2] "e" . pitch_radius', "is missing"),
    (TRAIN, "links.2.pitch_radius", {"from": "0 m", "to": "1 m"}, "pitch_radius . from", "above zero"),
    (TRAIN, "links.2.pitch_radius", {"from": "1 m", "to": "1 m"}, "pitch_radius", "the ratio is 2"),
    # machines
    (SINGLE, "machines.0.margin", GONE, 'machines[0] "m" . margin', "no default"),
    (SINGLE, "machines.0.margin", "100 %", 'machines[0] "m" . margin', "below 100 %"),
    (SINGLE, "machines.0.margin", "-5 %", 'machines[0] "m" . margin', "from 0 %"),
    (SINGLE, "machines.0.margin", {"below": "5 %", "above": "100 %"}, "margin . above", "below 100 %"),
    (SINGLE, "machines.0.margin", {"below": "5 %"}, 'machines[0] "m" . margin . above', "is missing"),
    (SINGLE, "machines.0.speed", "0 rpm", 'machines[0] "m" . speed', "above zero"),
    (SINGLE, "machines.0.speed", {"from": "2 rpm", "to": "1 rpm"}, 'machines[0] "m" . speed', "must rise"),
    (SINGLE, "machines.0.speed", {"from": "-2 rpm", "to": "1 rpm"}, "speed . from", "must not be negative"),
    (SINGLE, "machines.0.speed_tolerance", "100 %", 'machines[0] "m" . speed_tolerance', "below 100 %"),
    (SINGLE, "machines.0.on", "zz", 'machines[0] "m" . on', 'no body "zz"'),
    (SINGLE, "machines.0.run_up", {"acceleration": "0 rpm/s"}, "run_up . acceleration", "above zero"),
    (SINGLE, "machines.0.barred_ranges", [{"from": "2 rpm", "to": "1 rpm"}], "barred_ranges[0]", "must rise"),
    (SINGLE, "machines.0.speed", GONE, 'excitations[0] "1x" . order', "give the machine a speed"),
    (SINGLE, "machines.0.excitations.0.order", 0, "order", "above zero"),
    (SINGLE, "machines.0.excitations.0.order", -1, "order", "above zero"),
    (SINGLE, "machines.0.excitations.0.order", GONE, "order", "neither is given"),
    (SINGLE, "machines.0.excitations.0.frequency", "1 Hz", "order", "both are given"),
    (SINGLE, "machines.0.excitations.0.margin", "100 %", 'excitations[0] "1x" . margin', "below 100 %"),
    (SINGLE, "machines.0.excitations.0.at", {"body": "zz"}, "at . body", 'no body "zz"'),
    (SINGLE, "machines.0.excitations.0.at", {"support": "ground"}, "at", "acts on a body"),
    (SINGLE, "machines.0.excitations.0.direction", "rotating", "direction", 'found "rotating"'),
    (SINGLE, "machines.0.excitations.0.of", "a", "of", "nothing turns"),
    (PLANE, "machines.0.excitations.0.direction", "q", "direction", '"rotating"'),
    (PLANE, "machines.0.excitations.0.direction", "rz", "direction", 'found "rz"'),
    (PLANE, "machines.0.excitations.0.axis", [1, 0], "axis", "in space only"),
    (SPACE, "machines.0.excitations.0.axis", [1, 0, 0], "axis", "belongs to"),
    (TRAIN, "machines.0.excitations.0.of", "b", "of", "needs the machine's on"),
    (TRAIN, "machines.0.excitations.0.magnitude", {"force": "1 N"}, "magnitude . force", "no meaning"),
    (SINGLE, "machines.0.excitations.0.magnitude", {}, "magnitude", "none is given"),
    (
        SINGLE,
        "machines.0.excitations.0.magnitude",
        {"force": "1 N", "motion": "1 m"},
        "magnitude",
        "force and",
    ),
    (SINGLE, "machines.0.excitations.0.magnitude", {"grade": "G 1"}, "magnitude . rotor_mass", "is missing"),
    (SINGLE, "machines.0.excitations.0.magnitude", {"force": "0 N"}, "magnitude . force", "above zero"),
    (
        SINGLE,
        "machines.0.excitations.0.magnitude",
        {"force": "1 N", "rotor_mass": "1 kg"},
        "rotor_mass",
        "grade",
    ),
    (SINGLE, "machines.0.excitations.0.magnitude", {"motion": "1 mm"}, "at", "imposed at a support"),
    # what goes along
    (SINGLE, "damping", {"ratio": "2 %", "alpha": "1 1/s"}, "damping", "both are given"),
    (SINGLE, "damping", {}, "damping", "neither is given"),
    (SINGLE, "damping", {"ratio": "100 %"}, "damping . ratio", "below 100 %"),
    (SINGLE, "damping", {"alpha": "-1 1/s"}, "damping . alpha", "must not be negative"),
    (SINGLE, "measured", [{"id": "p", "frequency": "0 Hz"}], 'measured[0] "p" . frequency', "above zero"),
    (
        SINGLE,
        "limits",
        [{"id": "l", "at": {"body": "a"}, "quantity": "noise", "value": "1 m"}],
        "quantity",
        "rms",
    ),
    (
        SINGLE,
        "limits",
        [{"id": "l", "at": {"body": "a"}, "quantity": "velocity rms", "value": "1 m"}],
        'limits[0] "l" . value',
        "as velocity",
    ),
    (
        SINGLE,
        "load_cases",
        [{"id": "l", "changes": [{"part": "q", "key": "mass", "value": "1 kg"}]}],
        "part",
        '"q"',
    ),
    (
        SINGLE,
        "load_cases",
        [{"id": "l", "changes": [{"part": "a", "key": "name", "value": "1"}]}],
        "key",
        "changes",
    ),
    (
        SINGLE,
        "load_cases",
        [{"id": "l", "changes": [{"part": "a", "key": "mass", "value": "1 m"}]}],
        "value",
        "mass",
    ),
    (
        SINGLE,
        "load_cases",
        [{"id": "l", "changes": [{"part": "k", "key": "stiffness", "value": "0 N/m"}]}],
        "value",
        "0",
    ),
]


@pytest.mark.parametrize(("tree", "place", "new", "path", "reason"), CASES, ids=lambda one: str(one)[:40])
def test_a_fault_is_told_with_its_place(tree, place, new, path, reason):
    found = faults_of(changed(tree, place, new))
    assert any(path in fault.path and reason in fault.reason for fault in found), found
    # One slip is not told as many; only a part that is gone or misnamed may be missed in a few places.
    several = place in ("bodies.0", "bodies.0.id", "bodies.1.id", "links.0.id", "machines.0.speed")
    assert several or len(found) <= 2


def test_all_faults_are_told_at_once():
    tree = changed(PLANE, "bodies.0.mass", "1 m")
    tree = changed(tree, "links.0.stiffness", "0 N/m")
    tree = changed(tree, "links.1.kind", "mouse")
    tree = changed(tree, "machines.0.margin", GONE)
    tree = changed(tree, "titel", "x")
    assert len(faults_of(tree)) == 5


def test_a_value_that_cannot_be_read_is_not_missed_again_by_the_rules():
    assert len(faults_of(changed(PLANE, "bodies.0.position", "nowhere"))) == 1
    assert len(faults_of(changed(PLANE, "links.0.from", "a"))) == 1


@pytest.mark.parametrize(
    ("text", "path", "reason"),
    [
        ("", "", "the file is empty"),
        (" \n", "", "the file is empty"),
        ("{", "line 1, column 2", "not JSON"),
        ('{\n"a": 1 2}', "line 2, column 8", "not JSON"),
        ("[]", "", "one JSON object"),
        ("7", "", "one JSON object"),
        ("{}", "format", "missing"),
        ('{"format": "other"}', "format", "not a Keepclear model"),
        ('{"format": "keepclear"}', "version", "missing"),
        ('{"format": "keepclear", "version": true}', "version", "found true"),
        ('{"format": "keepclear", "version": "1"}', "version", "found"),
        ('{"format": "keepclear", "version": 0}', "version", "must be 1"),
        ('{"format": "keepclear", "version": 2}', "version", "newer Keepclear"),
        ("[" * 100_000, "", "nested"),
        ('{"a":' * 100_000, "", "nested"),
        ("9" * 10_000, "", "number"),
    ],
    ids=lambda one: one[:20],
)
def test_what_is_no_model_at_all_is_told_in_one_fault(text, path, reason):
    (fault,) = faults_of(text)
    assert fault.path == path
    assert reason in fault.reason


def test_a_key_given_twice_is_a_fault_anywhere():
    text = (
        '{"format": "keepclear", "version": 1, "motion": "single axis", "title": "a", "title": "b", '
        '"bodies": [{"id": "a", "mass": "1 kg", "mass": {"value": "2 kg", "given": {"x": 1, "x": 2}}}]}'
    )
    places = [fault.path for fault in faults_of(text)]
    assert places == ["title", 'bodies[0] "a" . mass', 'bodies[0] "a" . mass . given . x']


def test_a_handbook_entry_holds_no_nan_and_is_not_endless():
    deep = {"x": 1}
    for _ in range(40):
        deep = {"x": deep}
    for given in (deep, {"x": float("nan")}):
        (fault,) = faults_of(changed(SINGLE, "bodies.1.mass.given", given))
        assert fault.path.startswith('bodies[1] "b" . mass . given . x')


def test_more_freedoms_than_can_be_solved_are_refused_before_the_walk():
    bodies = '{"id": "a"},' * 33_334
    text = '{"format": "keepclear", "version": 1, "motion": "space", "bodies": [' + bodies[:-1] + "]}"
    (fault,) = faults_of(text)
    assert "200004 degrees of freedom; the most is 200000" in fault.reason


def test_so_many_faults_are_counted_not_listed():
    tree = {
        **SINGLE,
        "bodies": [{"id": f"b{i}", "mass": "1 m"} for i in range(1500)],
        "links": [],
        "machines": [],
    }
    found = faults_of(tree)
    assert len(found) == 1001
    assert found[-1].reason == "500 more faults were found; mend these first"


def test_a_monstrous_id_or_key_is_cut_in_messages():
    found = faults_of({**SINGLE, "x" * 1000: 1, "bodies": [{"id": "y" * 1000, "mass": "1 m"}]})
    assert max(len(str(fault.path)) for fault in found) < 100


def test_repeated_keys_are_remembered():
    assert JsonMap([("a", 1), ("b", 2), ("a", 3)]).repeated == ("a",)

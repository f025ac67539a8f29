"""Entries against the program itself: a body of 1 kg (or 1 kg m2) moves with omega^2 = stiffness."""

import json
from itertools import pairwise

import numpy as np
import pytest

from modalview.eigen.solve import find_modes
from modalview.handbook.catalogue import recipe
from modalview.store import parse_model
from modalview.study import Request, look

SECTION = {"E": "1 Pa", "A": "1 m2", "I": "1 m4"}
FLEXIBLE = {"young": "1 Pa", "second": "1 m4"}


def squares(motion, bodies, links, supports=({"id": "ground"},)):
    """Return omega^2 of every mode."""
    tree = {"format": "keepclear", "version": 1, "motion": motion, "bodies": bodies, "links": links}
    model = parse_model(json.dumps({**tree, "supports": list(supports)}))
    return find_modes(look(Request(model)).assembly.pencil()).eigenvalues


def made(name, **texts):
    return recipe(name).evaluate({key: str(text) for key, text in texts.items()}).si


def node(name, x, dof, mass="0 kg", **more):
    return {"id": name, "mass": mass, "position": [f"{x!r} m", "0 m"], "dof": dof, **more}


def beam_of(nodes, walls=()):
    """Return omega^2 of a beam through nodes and clamped ends, given along x: the one with mass moves."""
    supports = [{"id": f"wall{n}", "position": [f"{x!r} m", "0 m"]} for n, x in enumerate(walls)]
    points = [(float(one["position"][0].split()[0]), {"body": one["id"]}) for one in nodes]
    points += [(x, {"support": f"wall{n}"}) for n, x in enumerate(walls)]
    ends = [end for _, end in sorted(points, key=lambda point: point[0])]
    links = [
        {"id": f"b{n}", "kind": "beam", "from": one, "to": other, **SECTION}
        for n, (one, other) in enumerate(pairwise(ends))
    ]
    (found,) = squares("plane", nodes, links, supports)
    return found


def loaded(x):
    return node("load", x, ["y", "rz"], "1 kg")


def turned(x, dof):
    return node("load", x, dof, "0 kg", inertia="1 kg m2")


def pin(name, x):
    return node(name, x, ["rz"])


@pytest.mark.parametrize(("length", "place"), [(2.0, 0.5), (1.7, 1.3), (3.1, 1.55)])
class TestBeams:
    def test_cantilever(self, length, place):  # noqa: ARG002
        assert made("cantilever-tip", length=f"{length} m", **FLEXIBLE) == pytest.approx(
            beam_of([loaded(length)], [0.0]), rel=1e-12
        )

    def test_cantilever_turned(self, length, place):  # noqa: ARG002
        assert made("cantilever-turn", length=f"{length} m", **FLEXIBLE) == pytest.approx(
            beam_of([turned(length, ["y", "rz"])], [0.0]), rel=1e-12
        )

    def test_leg_in_sway(self, length, place):  # noqa: ARG002
        assert made("beam-guided", length=f"{length} m", **FLEXIBLE) == pytest.approx(
            beam_of([node("load", length, ["y"], "1 kg")], [0.0]), rel=1e-12
        )

    def test_pinned_turned(self, length, place):  # noqa: ARG002
        assert made("beam-pinned-turn", length=f"{length} m", **FLEXIBLE) == pytest.approx(
            beam_of([turned(0.0, ["rz"]), pin("far", length)]), rel=1e-12
        )

    @pytest.mark.parametrize("middle", [False, True])
    def test_pinned(self, length, place, middle):
        at = length / 2 if middle else place
        wanted = beam_of([pin("near", 0.0), loaded(at), pin("far", length)])
        self.compare("beam-pinned", length, at, wanted, middle=middle)

    @pytest.mark.parametrize("middle", [False, True])
    def test_clamped(self, length, place, middle):
        at = length / 2 if middle else place
        self.compare("beam-clamped", length, at, beam_of([loaded(at)], [0.0, length]), middle=middle)

    @pytest.mark.parametrize("middle", [False, True])
    def test_propped(self, length, place, middle):
        at = length / 2 if middle else place
        wanted = beam_of([loaded(at), pin("far", length)], [0.0])
        self.compare("beam-propped", length, at, wanted, middle=middle)

    def compare(self, name, length, at, wanted, *, middle):
        if middle:
            found = made(f"{name}-middle", length=f"{length} m", **FLEXIBLE)
        else:
            found = made(f"{name}-at", length=f"{length} m", place=f"{at} m", **FLEXIBLE)
        assert found == pytest.approx(wanted, rel=1e-12)

    def test_overhang_beyond_pins(self, length, place):
        wanted = beam_of([pin("near", 0.0), pin("far", length), loaded(length + place)])
        found = made("beam-pinned-overhang", span=f"{length} m", overhang=f"{place} m", **FLEXIBLE)
        assert found == pytest.approx(wanted, rel=1e-12)

    def test_overhang_beyond_clamped_and_pinned(self, length, place):
        wanted = beam_of([pin("far", length), loaded(length + place)], [0.0])
        found = made("beam-propped-overhang", span=f"{length} m", overhang=f"{place} m", **FLEXIBLE)
        assert found == pytest.approx(wanted, rel=1e-12)


SIZES = (20.0, 5.0, 8.0)
LISTED = "; ".join(f"{one} kN/m" for one in SIZES)


def spring(name, one, other, stiffness, **more):
    link = {"id": name, "kind": "spring", "from": one, "to": other, "stiffness": f"{stiffness} kN/m"}
    return {**link, **more}


def test_springs_side_by_side():
    links = [spring(f"k{n}", {"body": "m"}, {"support": "ground"}, one) for n, one in enumerate(SIZES)]
    (wanted,) = squares("single axis", [{"id": "m", "mass": "1 kg"}], links)
    assert made("springs-in-parallel", stiffness=LISTED) == pytest.approx(wanted, rel=1e-12)


def test_springs_one_after_another():
    bodies = [{"id": f"m{n}", "mass": f"{1 if n == len(SIZES) - 1 else 0} kg"} for n in range(len(SIZES))]
    ends = [{"support": "ground"}, *({"body": one["id"]} for one in bodies)]
    links = [spring(f"k{n}", ends[n], ends[n + 1], one) for n, one in enumerate(SIZES)]
    (wanted,) = squares("single axis", bodies, links)
    assert made("springs-in-series", stiffness=LISTED) == pytest.approx(wanted, rel=1e-12)


def test_inclined_springs():
    body = {"id": "m", "mass": "1 kg", "position": ["0 m", "0 m"], "dof": ["x", "y"]}
    links = [
        spring(f"k{n}", {"body": "m"}, {"support": f"s{n}"}, 300, direction=f"{side} deg")
        for n, side in enumerate((90 - 25, 90 + 25))
    ]
    supports = [{"id": "s0", "position": ["1 m", "1 m"]}, {"id": "s1", "position": ["-1 m", "1 m"]}]
    wanted = squares("plane", [body], links, supports)
    texts = {"stiffness": "300 kN/m", "angle": "25 deg", "springs": 2}
    found = [made(f"inclined-springs-{way}", **texts) for way in ("across", "along")]
    assert found == pytest.approx(wanted, rel=1e-12)


def shaft(name, one, other, stiffness):
    ends = {"from": {"body": one}, "to": other if isinstance(other, dict) else {"body": other}}
    return {"id": name, "kind": "shaft", **ends, "stiffness": f"{stiffness!r} N m/rad"}


def test_stepped_shaft():
    pieces = [("300 mm", "200 mm", "2 m"), ("250 mm", "150 mm", "3 m"), ("180 mm", "0 mm", "0.7 m")]
    each = [
        made("shaft-hollow", outer=big, inner=hole, length=long, shear="80 GPa") for big, hole, long in pieces
    ]
    joints = [
        {"id": "a", "mass": "0 kg", "inertia": "0 kg m2"},
        {"id": "b", "mass": "0 kg", "inertia": "0 kg m2"},
    ]
    disc = {"id": "disc", "mass": "0 kg", "inertia": "1 kg m2"}
    links = [
        shaft("k0", "a", {"support": "ground"}, each[0]),
        shaft("k1", "b", "a", each[1]),
        shaft("k2", "disc", "b", each[2]),
    ]
    (wanted,) = squares("shaft train", [*joints, disc], links)
    outer, inner, length = ("; ".join(column) for column in zip(*pieces, strict=True))
    found = made("shaft-stepped", outer=outer, inner=inner, length=length, shear="80 GPa")
    assert found == pytest.approx(wanted, rel=1e-12)
    assert made(
        "torsion-in-series", stiffness="; ".join(f"{one!r} N m/rad" for one in each)
    ) == pytest.approx(wanted, rel=1e-12)


def test_inertia_and_stiffness_through_a_gear():
    """A disc geared to another that a shaft holds: seen from either side."""
    bodies = [
        {"id": "slow", "mass": "0 kg", "inertia": "46 kg m2"},
        {"id": "fast", "mass": "0 kg", "inertia": "1.6 kg m2"},
    ]
    gear = {"id": "g", "kind": "gear", "from": {"body": "slow"}, "to": {"body": "fast"}, "ratio": 4.2}
    held = shaft("k", "fast", {"support": "ground"}, 1.9e5)
    (wanted,) = squares("shaft train", bodies, [gear, held])
    on_slow = made("reflected-stiffness", stiffness="1.9e5 N m/rad", ratio=4.2)
    assert on_slow / (46 + made("reflected-inertia", inertia="1.6 kg m2", ratio=4.2)) == pytest.approx(
        wanted, rel=1e-12
    )


def test_springs_around_a_centre():
    body = {"id": "disc", "mass": "1 kg", "inertia": "1 kg m2", "position": ["0 m", "0 m"], "dof": ["rz"]}
    link = spring("k", {"body": "disc", "offset": ["0.25 m", "0 m"]}, {"support": "s"}, 5000, direction="y")
    (wanted,) = squares("plane", [body], [link], [{"id": "s", "position": ["0.25 m", "-1 m"]}])
    assert made("spring-on-a-radius", stiffness="5 kN/mm", radius="250 mm") == pytest.approx(
        wanted, rel=1e-12
    )


def rod_of(pieces, own, body):
    """Lowest omega^2 of a spring of 1 N/m cut into equal pieces, half of each piece's mass at its ends."""
    step = own / pieces
    bodies = [
        {"id": f"m{n}", "mass": f"{(step if n < pieces else step / 2 + body)!r} kg"}
        for n in range(1, pieces + 1)
    ]
    ends = [{"support": "ground"}, *({"body": one["id"]} for one in bodies)]
    links = [spring(f"k{n}", ends[n], ends[n + 1], pieces / 1000) for n in range(pieces)]
    return float(np.min(squares("single axis", bodies, links)))


@pytest.mark.parametrize(("own", "body"), [(0.3, 1.0), (2.0, 1.0), (1.0, 0.0)])
def test_exact_part_of_a_springs_own_mass(own, body):
    """Lumped rods of 8 and 16 pieces; the error falls with the square of the step, and is taken away."""
    coarse, fine = rod_of(8, own, body), rod_of(16, own, body)
    limit = fine + (fine - coarse) / 3
    exact = 1 / (body + made("own-mass-spring-exact", own=f"{own} kg", body=f"{body} kg"))
    assert exact == pytest.approx(limit, rel=1e-5)
    assert exact <= 1 / (body + made("own-mass-spring", own=f"{own} kg"))

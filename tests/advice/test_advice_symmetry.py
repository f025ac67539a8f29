"""Mounts and springs that are symmetric but for one."""

import pytest

ALL = ((-1, -0.5), (1, -0.5), (1, 0.5), (-1, 0.5))


def on_mounts(corners, values=None):
    values = values or ["9e5 N/m"] * len(corners)
    supports = [{"id": f"s{i}", "position": [f"{x} m", f"{y} m", "0 m"]} for i, (x, y) in enumerate(corners)]
    links = [
        {
            "id": f"m{i}",
            "kind": "mount",
            "from": {"body": "set", "offset": [f"{x} m", f"{y} m", "-1 m"]},
            "to": {"support": f"s{i}"},
            "stiffness": {"x": "5e5 N/m", "z": value},
        }
        for i, ((x, y), value) in enumerate(zip(corners, values, strict=True))
    ]
    tensor = {"Ixx": "10 kg m2", "Iyy": "10 kg m2", "Izz": "10 kg m2"}
    body = {"id": "set", "mass": "100 kg", "inertia": tensor, "position": ["0 m", "0 m", "1 m"]}
    return {"bodies": [body], "supports": supports, "links": links}


def test_three_of_four_corners_miss_the_fourth(told):
    [doubt] = told("mirror partner", "space", **on_mounts(ALL[:3]))
    assert doubt.parts == ("m2", "set")
    assert (
        "opposite, at (-1 m, 500 mm, -1 m) from the centre of gravity of set; is one missing?" in doubt.text
    )


def test_five_of_six_miss_the_sixth(told):
    six = (*ALL, (0.2, -0.5), (0.2, 0.5))
    [doubt] = told("mirror partner", "space", **on_mounts(six[:5]))
    assert doubt.parts == ("m4", "set")


def test_one_value_unlike_those_of_three_equal_mounts_is_told_against_its_partner(told):
    values = ["9e5 N/m", "9e5 N/m", "1.62e6 N/m", "9e5 N/m"]
    [doubt] = told("mirror partner", "space", **on_mounts(ALL, values))
    assert doubt.parts[0] == "m2"
    assert doubt.text.startswith("Mount m2 has 1.62e6 N/m, its mirrored partner m3 9e5 N/m;")


@pytest.mark.parametrize(
    ("corners", "values"),
    [
        (ALL, None),
        ((*ALL, (0.2, -0.5), (0.2, 0.5)), None),
        (((-1, 0), (1, 0.5), (1, -0.5)), None),  # a tripod
        (ALL, ["9e5 N/m", "1.2e6 N/m", "1.2e6 N/m", "9e5 N/m"]),  # one side carries more
        (((-1, -0.5), (0.7, -0.4), (0.9, 0.5)), None),
    ],
)
def test_symmetric_and_plainly_unsymmetric_sets_are_not_doubted(told, corners, values):
    assert not told("mirror partner", "space", **on_mounts(corners, values))


def test_springs_in_a_plane_are_mirrored_left_to_right(told):
    def foot(x, stiffness="1e6 N/m"):
        end = {"body": "a", "offset": [f"{x} m", "-1 m"]}
        ends = {"from": end, "to": {"support": "g"}}
        return {"id": f"k{x}", "kind": "spring", "stiffness": stiffness, "direction": "y", **ends}

    body = {"id": "a", "mass": "100 kg", "inertia": "10 kg m2", "position": ["0 m", "1 m"]}
    parts = {"bodies": [body], "supports": [{"id": "g", "position": ["0 m", "0 m"]}]}
    even = [foot(-2), foot(-1), foot(1), foot(2)]
    assert not told("mirror partner", **parts, links=even)
    [doubt] = told("mirror partner", **parts, links=[*even, foot(0.5)])
    assert doubt.parts == ("k0.5", "a")
    [doubt] = told("mirror partner", **parts, links=[*even[:3], foot(2, "1e7 N/m")])
    assert doubt.parts[:2] == ("k2", "k-2")

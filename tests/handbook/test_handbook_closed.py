"""Entries against what they follow from: integrals, energies, limits, other entries, and the units."""

import math

import numpy as np
import pytest

from modalview.handbook.catalogue import recipe
from modalview.handbook.rubber import LINDLEY
from modalview.units import quantities as q
from modalview.units.parse import read


def made(name, **texts):
    return recipe(name).evaluate({key: str(text) for key, text in texts.items()}).si


def mean(function, low, high, count=4000):
    """Return the mean of a function by the midpoint rule."""
    x = low + (high - low) * (np.arange(count) + 0.5) / count
    return float(np.mean(function(x)))


# --- springs, rods, sections -------------------------------------------------------------------------


def test_a_coil_spring_is_its_wire_in_torsion():
    """Load F twists the wire by F D/2 over the length pi D n; the deflection is the twist times D/2."""
    wire = made("shaft-solid", diameter="12 mm", length=f"{math.pi * 0.09 * 6!r} m", shear="79 GPa")
    found = made("coil-spring", wire="12 mm", mean="90 mm", turns=6, shear="79 GPa")
    assert found == pytest.approx(wire / 0.045**2, rel=1e-12)


def test_a_tapered_rod_is_a_row_of_slices():
    def per_area(x):
        return 4 / (math.pi * (0.03 + (0.02 - 0.03) * x) ** 2)

    found = made("rod-tapered", first="30 mm", second="20 mm", length="1 m", young="210 GPa")
    assert found == pytest.approx(210e9 / mean(per_area, 0, 1), rel=1e-7)
    same = {"length": "1 m", "young": "210 GPa"}
    even = made("rod", diameter="30 mm", **same)
    assert made("rod-tapered", first="30 mm", second="30 mm", **same) == pytest.approx(even, rel=1e-12)
    assert made("bar", area=f"{math.pi * 0.03**2 / 4!r} m2", **same) == pytest.approx(even, rel=1e-12)


def test_a_hollow_shaft_is_a_solid_one_less_its_core():
    same = {"length": "2 m", "shear": "80 GPa"}
    outside, core = (made("shaft-solid", diameter=size, **same) for size in ("300 mm", "200 mm"))
    assert made("shaft-hollow", outer="300 mm", inner="200 mm", **same) == pytest.approx(outside - core)


def test_a_plate_strip_is_a_beam_of_a_stiffer_modulus():
    second = made("second-moment-rectangle", width="900 mm", depth="12 mm")
    for plate, beam in (("cantilever", "cantilever-tip"), ("clamped", "beam-clamped-middle")):
        sizes = {"length": "300 mm", "width": "900 mm", "thickness": "12 mm"}
        found = made(f"plate-strip-{plate}", **sizes, young="206 GPa", poisson=0.3)
        same = made(beam, length="300 mm", young="206 GPa", second=f"{second!r} m4")
        assert found == pytest.approx(same / (1 - 0.3**2), rel=1e-12)


def test_second_moments_are_integrals_over_the_section():
    depth, width, flange, web = 0.3, 0.15, 0.0107, 0.0071

    def breadth(y):
        return np.where(np.abs(y) > depth / 2 - flange, width, web)

    found = made("second-moment-i-section", width="150 mm", depth="300 mm", flange="10.7 mm", web="7.1 mm")
    wanted = depth * mean(lambda y: breadth(y) * y**2, -depth / 2, depth / 2, 300_000)
    assert found == pytest.approx(wanted, rel=1e-4)
    found = made("second-moment-tube", outer="2 m", inner="1 m")
    chord = lambda y: 2 * (np.sqrt(1 - y**2) - np.sqrt(np.maximum(0.25 - y**2, 0)))  # noqa: E731
    assert found == pytest.approx(2 * mean(lambda y: chord(y) * y**2, -1, 1), rel=1e-4)
    solid = made("second-moment-i-section", width="5 cm", depth="10 cm", flange="1 cm", web="5 cm")
    assert solid == pytest.approx(made("second-moment-rectangle", width="5 cm", depth="10 cm"))


def test_bolts_are_rods_side_by_side():
    rod = made("rod", diameter="22 mm", length="120 mm", young="206 GPa")
    same = {"diameter": "22 mm", "grip": "120 mm", "young": "206 GPa"}
    assert made("bolt-group", bolts=8, **same) == pytest.approx(8 * rod)
    rocking = made("bolt-group-rocking", distances="0.4 m; 400 mm; 0.1 m", **same)
    assert rocking == pytest.approx(rod * (0.16 + 0.16 + 0.01))


# --- mounts ------------------------------------------------------------------------------------------


def test_static_deflection_is_what_a_field_reads():
    assert made("static-deflection", mass="900 kg", deflection="35 mm") == pytest.approx(
        read("35 mm under 900 kg", q.STIFFNESS), rel=1e-12
    )
    # f = 15.76/sqrt(mm) Hz: common practice.
    assert made("deflection-frequency", deflection="25 mm") / (2 * math.pi) == pytest.approx(
        15.76 / 5, rel=1e-4
    )


def test_a_cable_is_stiffest_near_its_ends_and_alike_from_both():
    same = {"tension": "500 N", "length": "1.6 m"}
    assert made("cable-at", place="0.8 m", **same) == pytest.approx(made("cable-middle", **same))
    assert made("cable-at", place="0.4 m", **same) == pytest.approx(made("cable-at", place="1.2 m", **same))


def test_an_air_spring_under_its_own_load():
    sizes = {"pressure": "5 bar", "area": "0.02 m2", "volume": "4 l"}
    stiffness = made("air-spring", **sizes)
    mass = made("air-spring-load", pressure="5 bar", area="0.02 m2")
    assert made("air-spring-frequency", **sizes) == pytest.approx(math.sqrt(stiffness / mass))


@pytest.mark.parametrize("row", LINDLEY)
def test_rubber_takes_the_rows_of_the_table(row):
    hardness, young, shear, factor = row
    sizes = {"length": "100 mm", "width": "100 mm", "thickness": "50 mm", "hardness": hardness}
    assert made("rubber-rectangle-shear", **sizes) == pytest.approx(shear * 1e6 * 0.01 / 0.05)
    # S = 0.5 for this block.
    wanted = young * 1e6 * (1 + 2 * factor * 0.25) * 0.01 / 0.05
    assert made("rubber-rectangle", **sizes) == pytest.approx(wanted)


def test_rubber_between_the_rows_and_round():
    half = made("rubber-round-shear", diameter="100 mm", thickness="25 mm", hardness=52.5)
    assert half == pytest.approx(0.5e6 * (0.64 + 0.81) * math.pi * 0.01 / 4 / 0.025)
    thin, thick = (
        made("rubber-round", diameter="100 mm", thickness=one, hardness=50) for one in ("10 mm", "20 mm")
    )
    assert thin > 2 * thick  # the shape factor makes thin layers stiffer still


def test_dynamic_ratio_runs_over_what_the_trade_uses():
    found = [made("rubber-dynamic-ratio", hardness=one) for one in (35, 55, 75)]
    assert found == pytest.approx([1.2, 1.8, 2.4])


# --- soil --------------------------------------------------------------------------------------------

SOIL = {"shear": "50 MPa", "poisson": 0.3}
SQUARE = {"length": "3 m", "width": "3 m"}


@pytest.mark.parametrize(
    ("rectangle", "circle", "equal", "apart"),
    [
        ("vertical", "vertical", 4 / math.pi, 0.05),
        ("sliding-long", "sliding", 4 / math.pi, 0.03),
        ("sliding-short", "sliding", 4 / math.pi, 0.03),
        ("rocking-long", "rocking", (16 / (3 * math.pi)) ** 0.5, 0.02),
        ("rocking-short", "rocking", (16 / (3 * math.pi)) ** 0.5, 0.02),
        ("torsion", "torsion", (16 / (3 * math.pi)) ** 0.5, 0.05),
    ],
)
def test_a_square_footing_is_near_the_circle_of_equal_area_or_second_moment(rectangle, circle, equal, apart):
    """``equal`` is r^2/B^2: of equal area, or of equal second moment for rocking and torsion."""
    texts = {key: text for key, text in SOIL.items() if rectangle != "torsion" or key != "poisson"}
    square = made(f"footing-rectangle-{rectangle}", **SQUARE, **texts)
    disc = made(f"footing-circle-{circle}", radius=f"{1.5 * math.sqrt(equal)!r} m", **texts)
    assert square == pytest.approx(disc, rel=apart)


def test_a_square_has_no_long_side():
    for motion in ("sliding", "rocking"):
        long, short = (
            made(f"footing-rectangle-{motion}-{way}", **SQUARE, **SOIL) for way in ("long", "short")
        )
        assert long == pytest.approx(short, rel=1e-12)


@pytest.mark.parametrize(
    "motion", ["vertical", "sliding-long", "sliding-short", "rocking-long", "rocking-short"]
)
def test_the_order_of_the_sides_does_not_matter(motion):
    one = made(f"footing-rectangle-{motion}", length="4 m", width="2 m", **SOIL)
    assert made(f"footing-rectangle-{motion}", length="2 m", width="4 m", **SOIL) == one


def test_a_longer_footing_is_stiffer_and_most_about_its_short_axis():
    long = {"length": "4 m", "width": "2 m"}
    about_long, about_short = (
        made(f"footing-rectangle-rocking-{way}", **long, **SOIL) for way in ("long", "short")
    )
    assert about_short > about_long
    square = {"length": "2 m", "width": "2 m"}
    for motion in ("vertical", "sliding-long", "sliding-short", "rocking-long", "rocking-short"):
        name = f"footing-rectangle-{motion}"
        assert made(name, **long, **SOIL) > made(name, **square, **SOIL)


# --- liquids -----------------------------------------------------------------------------------------

WATER = {"density": "1000 kg/m3"}


def test_water_in_a_wide_bore_is_open_water():
    open_water = made("added-mass-cylinder", diameter="0.2 m", length="2 m", **WATER)
    far, near = (
        made("added-mass-in-bore", diameter="0.2 m", bore=bore, length="2 m", **WATER)
        for bore in ("90 m", "0.3 m")
    )
    assert far == pytest.approx(open_water, rel=1e-4)
    assert near == pytest.approx(open_water * (0.09 + 0.04) / (0.09 - 0.04))


def test_added_mass_against_the_water_displaced():
    """A long cylinder drags as much as it displaces, a sphere half of that (Lamb)."""
    assert made("added-mass-cylinder", diameter="0.4 m", length="6 m", **WATER) == pytest.approx(
        made("liquid-in-pipe", inner="0.4 m", length="6 m", **WATER)
    )
    displaced = 1000 * 4 / 3 * math.pi * 0.3**3
    assert made("added-mass-sphere", diameter="0.6 m", **WATER) == pytest.approx(displaced / 2)
    strip = made("added-mass-plate", width="0.5 m", length="3 m", **WATER)
    assert strip == pytest.approx(made("added-mass-cylinder", diameter="0.5 m", length="3 m", **WATER))


def test_a_u_tube_swings_as_a_pendulum_of_half_its_length():
    """omega^2 = 2 g/L: twice the area at the water lines over the mass of the column."""
    stiffness = made("water-line-stiffness", area="0.02 m2", **WATER)
    mass = made("liquid-column", area="0.01 m2", length="3 m", **WATER)
    assert stiffness / mass == pytest.approx(2 * 9.80665 / 3)


def test_a_closed_column_carries_sound_at_its_speed():
    """k m = (A sqrt(K rho))^2, the square of the impedance of the column."""
    stiffness = made("liquid-column-stiffness", area="0.02 m2", length="0.5 m", bulk="2.2 GPa")
    mass = made("liquid-column", area="0.02 m2", length="0.5 m", **WATER)
    assert math.sqrt(stiffness * mass) == pytest.approx(0.02 * math.sqrt(2.2e9 * 1000))


# --- masses and inertias -----------------------------------------------------------------------------

RING = {"outer": "800 mm", "inner": "200 mm"}


def test_masses_of_the_same_body_agree():
    steel = {"density": "7850 kg/m3"}
    plate = made("mass-plate", length="3 m", width="1.2 m", thickness="40 mm", **steel)
    assert plate == pytest.approx(7850 * 3 * 1.2 * 0.04)
    assert made("mass-bar", area="0.048 m2", length="3 m", **steel) == pytest.approx(plate)
    assert made("mass-section", line_mass=f"{0.048 * 7850!r} kg/m", length="3 m") == pytest.approx(plate)
    area = math.pi * (0.8**2 - 0.2**2) / 4
    ring = made("mass-cylinder", **RING, length="0.4 m", **steel)
    assert ring == pytest.approx(made("mass-bar", area=f"{area!r} m2", length="0.4 m", **steel))


def test_the_mass_of_an_i_section_is_near_its_table():
    """A rolled section IPE 300 has 42.2 kg/m with its fillets (from memory); without them a little less."""
    sizes = {"width": "150 mm", "depth": "300 mm", "flange": "10.7 mm", "web": "7.1 mm"}
    found = made("mass-i-section", **sizes, length="1 m", density="7850 kg/m3")
    assert 0.94 * 42.2 < found < 42.2
    full = {**sizes, "web": "150 mm"}
    block = made("mass-plate", length="1 m", width="150 mm", thickness="300 mm", density="7850 kg/m3")
    assert made("mass-i-section", **full, length="1 m", density="7850 kg/m3") == pytest.approx(block)


def test_mass_from_weight_in_either_system():
    assert made("mass-of-weight", weight="1000 kgf") == pytest.approx(1000)
    assert made("mass-of-weight", weight="100 lbf") == pytest.approx(read("100 lb", q.MASS))


def test_the_inertia_of_a_ring_is_an_integral():
    steel = {"density": "7850 kg/m3"}
    mass = made("mass-cylinder", **RING, length="0.4 m", **steel)
    wanted = 7850 * 0.4 * 0.3 * mean(lambda r: 2 * math.pi * r**3, 0.1, 0.4)
    assert made("inertia-cylinder-made", **RING, length="0.4 m", **steel) == pytest.approx(wanted, rel=1e-6)
    assert made("inertia-cylinder", mass=f"{mass!r} kg", **RING) == pytest.approx(wanted, rel=1e-6)


def test_a_thin_cylinder_is_a_ring_and_a_long_one_a_rod():
    ring = made("inertia-ring", mass="5 kg", diameter="1 m")
    assert made("inertia-cylinder", mass="5 kg", outer="1 m", inner="0.9999 m") == pytest.approx(
        ring, rel=2e-4
    )
    rod = made("inertia-rod", mass="5 kg", length="2 m")
    assert made("inertia-cylinder-across", mass="5 kg", outer="1 mm", length="2 m") == pytest.approx(
        rod, rel=1e-6
    )
    assert made("inertia-block", mass="5 kg", first="2 m", second="1 mm") == pytest.approx(rod, rel=1e-6)


def test_two_halves_of_a_cylinder_make_the_whole():
    half = made("inertia-cylinder-across", mass="10 kg", outer="0.3 m", length="0.5 m")
    beside = made("inertia-moved", inertia=f"{half!r} kg m2", mass="10 kg", distance="0.25 m")
    whole = made("inertia-cylinder-across", mass="20 kg", outer="0.3 m", length="1 m")
    assert 2 * beside == pytest.approx(whole)


def test_wr2_and_gd2_are_what_a_field_reads():
    assert made("inertia-wr2", mass="273 lb", radius="2 ft") == pytest.approx(
        read("WR2 1092 lb ft2", q.INERTIA)
    )
    assert made("inertia-gd2", mass="184 kg", diameter="1 m") == pytest.approx(
        read("GD2 184 kgf m2", q.INERTIA)
    )


# --- own mass ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("name", "shape", "length"),
    [
        ("own-mass-spring", lambda x: x, 1.0),
        ("own-mass-cantilever", lambda x: (3 * x**2 - x**3) / 2, 1.0),
        ("own-mass-pinned", lambda x: 3 * x - 4 * x**3, 0.5),
        ("own-mass-clamped", lambda x: 12 * x**2 - 16 * x**3, 0.5),
        ("own-mass-clamped", lambda x: 3 * x**2 - 2 * x**3, 1.0),
    ],
    ids=["spring", "cantilever", "pinned", "clamped", "sway"],
)
def test_rayleighs_part_is_the_mean_square_of_the_shape_at_rest(name, shape, length):
    """Shapes from an end to the body, 1 at the body; of symmetric beams half."""
    assert shape(length) == pytest.approx(1)
    assert made(name, own="1 kg") == pytest.approx(mean(lambda x: shape(x) ** 2, 0, length), rel=1e-6)


@pytest.mark.parametrize(("kind", "share"), [("spring", 1 / 3), ("cantilever", 33 / 140)])
def test_exact_parts_tend_to_rayleighs_for_light_springs(kind, share):
    name = f"own-mass-{kind}-exact"
    shares = [made(name, own=f"{own!r} kg", body="1 kg") / own for own in (1e-2, 1e-4, 1e-7)]
    assert shares == pytest.approx([share] * 3, rel=1e-3)
    assert shares[0] > shares[1] > share  # Rayleigh's frequency is never too low


def test_a_shaft_and_a_spring_follow_the_same_waves():
    spring = made("own-mass-spring-exact", own="1 kg", body="2 kg")
    assert made("own-inertia-shaft-exact", own="1 kg m2", body="2 kg m2") == spring
    assert made("own-mass-spring-exact", own="1 kg", body="0 kg") == pytest.approx(4 / math.pi**2)


# --- orders ------------------------------------------------------------------------------------------


def test_orders_count_what_passes():
    for name in ("order-vanes", "order-teeth", "order-rotor-bars", "order-jaws"):
        assert made(name, count=12, harmonic=3) == 36


def test_a_gear_meshes_at_one_frequency_seen_from_either_shaft():
    driven = made("order-driven-shaft", driving=84, driven=20)
    assert driven * made("order-teeth", count=20) == pytest.approx(made("order-teeth", count=84))


def test_a_belt_as_long_as_two_turns_of_its_pulley_goes_round_at_half_order():
    assert made("order-belt", diameter="200 mm", length=f"{2 * math.pi * 0.2!r} m") == pytest.approx(0.5)
    assert made("order-belt", diameter="200 mm", length="2 m", harmonic=2) == pytest.approx(0.2 * math.pi)


def test_six_cylinders_fire_as_often_as_six_times_one():
    for strokes in (2, 4):
        assert made("order-firing", cylinders=6, strokes=strokes) == 6 * made("order-gas", strokes=strokes)
    assert [made("order-gas", strokes=4, harmonic=n) for n in (1, 2, 3)] == [0.5, 1, 1.5]
    assert [made("order-inertia", harmonic=n) for n in (1, 2)] == [1, 2]


def test_a_universal_joint_repeats_twice_a_turn_and_swings_as_its_angles_say():
    bend, turns = math.radians(20), np.linspace(0, 2 * math.pi, 20_001)
    ahead = np.unwrap(np.arctan2(np.sin(turns), math.cos(bend) * np.cos(turns))) - turns
    assert made("universal-joint-swing", angle="20 deg") == pytest.approx(ahead.max(), rel=1e-6)
    assert made("universal-joint-swing", angle="0 deg") == 0
    spectrum = np.abs(np.fft.rfft(ahead[:-1]))
    assert int(np.argmax(spectrum)) == made("order-universal-joint")


def test_slip_and_pole_pass_of_a_motor():
    motor = {"line": "60 Hz", "poles": 2, "speed": "3540 rpm"}
    slip = made("slip-frequency", **motor)
    assert slip == pytest.approx(read("1 Hz", q.FREQUENCY))
    assert made("pole-pass", **motor) == pytest.approx(2 * slip)


def test_orders_of_a_bearing_hang_together():
    sizes = {"ball": "7.94 mm", "pitch": "39 mm", "angle": "12 deg"}
    cage = made("bearing-cage", **sizes)
    outer, inner = (made(f"bearing-{race}", elements=9, **sizes) for race in ("outer", "inner"))
    assert outer == pytest.approx(9 * cage)
    assert outer + inner == pytest.approx(9)
    assert made("bearing-ball-strikes", **sizes) == pytest.approx(2 * made("bearing-spin", **sizes))
    # The ball rolls on the still outer race: its spin over the cage's turning is the ratio of their circles.
    share = 7.94 / 39 * math.cos(math.radians(12))
    assert made("bearing-spin", **sizes) / cage == pytest.approx((1 + share) / (7.94 / 39))


# --- guidance ----------------------------------------------------------------------------------------


def test_permissible_unbalance_is_mass_times_offset():
    rotor = {"grade": "G 2.5", "speed": "1500 rpm"}
    offset = made("specific-unbalance", **rotor)
    assert made("permissible-unbalance", mass="200 kg", **rotor) == pytest.approx(200 * offset)


def test_zones_of_severity_rise_with_zone_and_class():
    for zone in "ABC":
        limits = [made("severity-limit", machine=machine, zone=zone) for machine in ("I", "II", "III", "IV")]
        assert limits == sorted(limits)
    for machine in ("I", "II", "III", "IV"):
        limits = [made("severity-limit", machine=machine, zone=zone) for zone in "ABC"]
        assert limits == sorted(limits)


def test_margins_grow_without_a_jump_where_the_formula_begins():
    for side, at in (("below", 0.05), ("above", 0.15)):
        found = [made(f"margin-{side}", amplification=one) for one in (2.49, 2.5, 3.55, 3.5501, 8)]
        assert found[0] == 0
        assert found[1:4] == pytest.approx([at, at, at], abs=1e-3)
        assert found[4] > found[3]


@pytest.mark.parametrize("name", ["balance-grade", "severity-limit", "margin-below", "margin-above"])
def test_figures_of_standards_are_marked_as_examples(name):
    entry = recipe(name)
    made_one = entry.evaluate({one.name: one.example for one in entry.inputs})
    assert any("check against the current edition" in note for note in made_one.notes)
    assert "check against the current edition" in entry.source.status

"""Groups H and I of the check bank: stiffness, own mass and orders from dimensions, by the handbook.

Every figure is its own test; ``Figure.check`` tells its citation and status where it fails.
"""

import math
from functools import partial

import pytest
from check_bank import Figure, cases, figures

from modalview.handbook.catalogue import recipe
from modalview.handbook.guidance import DAMPING, ZONES
from modalview.units import quantities as q
from modalview.units.parse import read

RAD_PER_HZ = 2 * math.pi
# Cases of group I that are no matter of dimensions: checked in test_reference_speeds and, I06 too, _response.
KEEP_OUT = ("I13", "I16")
CASES = {name: case["inputs"] for name, case in cases().items() if case["group"] in {"H", "I"}}


def si(name: str, **texts: str | float) -> float:
    """Return what an entry makes, in SI; plain numbers are typed as such."""
    typed = {key: text if isinstance(text, str) else repr(text) for key, text in texts.items()}
    return recipe(name).evaluate(typed).si


def size(case: str, key: str) -> str:
    """Return an input of a case as it would be typed."""
    one = CASES[case][key]
    return f"{one['value']!r} {one['unit'].replace('N m^2', '').replace('^', '')}".strip()


def hertz(name: str, **texts: str | float) -> float:
    return si(name, **texts) / RAD_PER_HZ


# --- H: stiffness ------------------------------------------------------------------------------------


def coil() -> float:
    turns = CASES["H01"]["turns"]
    return si(
        "coil-spring", wire=size("H01", "d"), mean=size("H01", "D"), turns=turns, shear=size("H01", "G")
    )


def three_coils() -> float:
    one = f"{coil()!r} N/m"
    return si("springs-in-parallel", stiffness="; ".join([one] * CASES["H01"]["springs"]))


def propeller_shaft(first: int, last: int) -> float:
    parts = CASES["H03"]["segments"][first:last]
    listed = {
        name: "; ".join(f"{part[key]!r} m" for part in parts)
        for name, key in (("outer", "D_m"), ("inner", "d_m"), ("length", "L_m"))
    }
    if len(parts) > 1:
        return si("shaft-stepped", **listed, shear=size("H03", "G"))
    return si("shaft-hollow", **listed, shear=size("H03", "G"))


def beam(case: str, name: str, **lengths: str) -> float:
    """E I of the case as 1 Pa and so many m4."""
    return si(name, **lengths, young="1 Pa", second=f"{CASES[case]['EI']['value']!r} m4")


def overhang(name: str) -> float:
    return beam("H04", name, span=size("H04", "l"), overhang=size("H04", "a"))


def one_span(name: str) -> float:
    return beam("H05", name, length=size("H05", "L"))


def rod() -> float:
    return si("rod", diameter=size("H07", "d"), length=size("H07", "L"), young=size("H07", "E"))


def tapered() -> float:
    ends = {"first": size("H07", "d1"), "second": size("H07", "d2")}
    return si("rod-tapered", **ends, length=size("H07", "L"), young=size("H07", "E"))


def footing(motion: str) -> float:
    texts = {"radius": size("H10", "radius"), "shear": size("H10", "G")}
    if motion != "torsion":
        texts["poisson"] = repr(CASES["H10"]["nu"])
    return si(f"footing-circle-{motion}", **texts)


def air() -> dict[str, str]:
    case = CASES["H12"]
    gauge = case["pressure_absolute"]["value"] - case["pressure_ambient"]["value"]
    return {
        "pressure": f"{gauge!r} Pa",
        "ambient": size("H12", "pressure_ambient"),
        "area": size("H12", "area"),
        "volume": size("H12", "volume"),
        "exponent": repr(case["exponent"]),
    }


def carried_mass() -> float:
    return si("air-spring-load", pressure=air()["pressure"], area=air()["area"])


def cable(name: str, **place: str) -> float:
    return si(name, tension=size("H13", "tension"), length=size("H13", "L"), **place)


# --- H: own mass -------------------------------------------------------------------------------------


def heavy_spring(name: str) -> list[float]:
    """sqrt(k/(M + m)) with the part m of the spring's own mass that the entry gives."""
    k, body, owns = (CASES["H15"][key]["value"] for key in ("k", "M", "ms"))
    parts = [si(name, own=f"{own!r} kg", body=f"{body!r} kg") for own in owns]
    return [math.sqrt(k / (body + part)) for part in parts]


def rule_error_percent() -> float:
    rule, exact = heavy_spring("own-mass-spring")[-1], heavy_spring("own-mass-spring-exact")[-1]
    return 100 * (rule / exact - 1)


def heavy_cantilever(name: str) -> list[float]:
    """In units of sqrt(E I/(m L^3)): E I = m = L = 1."""
    stiffness = si("cantilever-tip", length="1 m", young="1 Pa", second="1 m4")
    bodies = CASES["H16"]["tip_mass_over_beam_mass"]
    parts = [si(name, own="1 kg", body=f"{body!r} kg") for body in bodies]
    return [math.sqrt(stiffness / (body + part)) for body, part in zip(bodies, parts, strict=True)]


def heavy_shaft(name: str) -> float:
    k, disc = (CASES["H18"][key]["value"] for key in ("k", "Jd"))
    own = CASES["H18"]["Js_over_Jd"] * disc
    return math.sqrt(k / (disc + si(name, own=f"{own!r} kg m2", body=f"{disc!r} kg m2")))


# --- I: orders and guidance --------------------------------------------------------------------------


def at_1480(order: float) -> float:
    return hertz("order-frequency", order=order, speed=size("I01", "speed"))


def motor() -> dict[str, str]:
    return {"line": size("I02", "line"), "poles": repr(CASES["I02"]["poles"]), "speed": size("I02", "speed")}


def synchronous_rpm() -> float:
    texts = {key: text for key, text in motor().items() if key != "speed"}
    return si("synchronous-speed", **texts) / RAD_PER_HZ * 60


def bearing(name: str) -> float:
    case = CASES["I04"]
    texts = {"ball": size("I04", "d"), "pitch": size("I04", "D"), "angle": size("I04", "contact_angle")}
    if name in {"bearing-outer", "bearing-inner"}:
        texts["elements"] = repr(case["elements"])
    return hertz("order-frequency", order=si(name, **texts), speed=size("I04", "speed"))


def unbalance_g_mm() -> float:
    rotor = {"grade": "G 6.3", "speed": size("I06", "speed")}
    return 1e6 * si("permissible-unbalance", **rotor, mass=size("I06", "mass"))


def offset_um() -> float:
    return 1e6 * si("specific-unbalance", grade="G 6.3", speed=size("I06", "speed"))


def grades() -> list[str]:
    return [recipe("balance-grade").evaluate({"machine": one}).text for one in CASES["I08"]["machines"]]


def zones() -> list[str]:
    reading = read(f"{CASES['I09']['reading']['value']} mm/s", q.VELOCITY)
    found = []
    for machine in CASES["I09"]["classes"]:
        limits = [si("severity-limit", machine=machine, zone=zone) for zone in ZONES]
        found.append("ABCD"[sum(reading > limit for limit in limits)])
    return found


def margins(name: str) -> list[float]:
    return [100 * si(name, amplification=factor) for factor in CASES["I11"]["amplification"]]


def major_orders() -> list[float]:
    return [whole(si("order-firing", cylinders=one, strokes=4)) for one in CASES["I14"]["cylinders"]]


def whole(order: float) -> float:
    """The bank writes whole orders as whole numbers, and compares them as such."""
    return int(order) if order == int(order) else order


def two_stroke() -> float:
    return whole(si("order-firing", cylinders=CASES["I14"]["two_stroke_cylinders"], strokes=2))


def damping_inside() -> list[bool]:
    case = CASES["I18"]
    ranges = [DAMPING[one] for one in case["structures"]]
    middles = [si("damping-ratio", structure=one) for one in case["structures"]]
    assert all(low < middle < high for (low, high), middle in zip(ranges, middles, strict=True))
    return [low <= trial <= high for (low, high), trial in zip(ranges, case["trial"], strict=True)]


OWN = {
    "H01-stiffness": coil,
    "H01-stiffness_three_parallel": three_coils,
    "H03-stiffness_12": partial(propeller_shaft, 0, 1),
    "H03-stiffness_23": partial(propeller_shaft, 1, 2),
    "H03-stiffness_total": partial(propeller_shaft, 0, 2),
    "H04-pinned_pinned_overhang": partial(overhang, "beam-pinned-overhang"),
    "H04-clamped_pinned_overhang": partial(overhang, "beam-propped-overhang"),
    "H05-cantilever_tip": partial(one_span, "cantilever-tip"),
    "H05-pinned_mid": partial(one_span, "beam-pinned-middle"),
    "H05-clamped_mid": partial(one_span, "beam-clamped-middle"),
    "H05-propped_mid": partial(one_span, "beam-propped-middle"),
    "H07-uniform": rod,
    "H07-tapered": tapered,
    "H10-vertical": partial(footing, "vertical"),
    "H10-horizontal": partial(footing, "sliding"),
    "H10-rocking": partial(footing, "rocking"),
    "H10-torsion": partial(footing, "torsion"),
    "H12-stiffness": lambda: si("air-spring", **air()),
    "H12-carried_mass": carried_mass,
    "H12-frequency": lambda: hertz("air-spring-frequency", **air()),
    "H13-mid": partial(cable, "cable-middle"),
    "H13-at_a": partial(cable, "cable-at", place=size("H13", "a")),
    "H15-omega_exact": partial(heavy_spring, "own-mass-spring-exact"),
    "H15-omega_rule": partial(heavy_spring, "own-mass-spring"),
    "H15-rule_error_percent_ms_equals_M": rule_error_percent,
    "H16-omega_rule": partial(heavy_cantilever, "own-mass-cantilever"),
    "H16-omega_exact": partial(heavy_cantilever, "own-mass-cantilever-exact"),
    "H16-exact_no_tip_mass": lambda: heavy_cantilever("own-mass-cantilever-exact")[0],
    "H16-matching_factor": lambda: si("own-mass-cantilever-exact", own="1 kg", body="0 kg"),
    "H18-omega_exact": partial(heavy_shaft, "own-inertia-shaft-exact"),
    "H18-omega_rule": partial(heavy_shaft, "own-inertia-shaft"),
    "I01-f1": partial(at_1480, 1),
    "I01-f2": partial(at_1480, 2),
    "I01-vane_pass": lambda: at_1480(si("order-vanes", count=CASES["I01"]["vanes"])),
    "I01-mesh": lambda: at_1480(si("order-teeth", count=CASES["I01"]["teeth"])),
    "I02-synchronous_speed": synchronous_rpm,
    "I02-slip_frequency": lambda: hertz("slip-frequency", **motor()),
    "I02-pole_pass": lambda: hertz("pole-pass", **motor()),
    "I02-twice_line": lambda: hertz("line-twice", line=size("I02", "line")),
    "I02-twice_line_60Hz": lambda: hertz("line-twice", line="60 Hz"),
    "I04-cage": partial(bearing, "bearing-cage"),
    "I04-outer": partial(bearing, "bearing-outer"),
    "I04-inner": partial(bearing, "bearing-inner"),
    "I04-ball_spin": partial(bearing, "bearing-spin"),
    "I06-specific_unbalance": offset_um,
    "I06-permissible_unbalance": unbalance_g_mm,
    "I08-grades": grades,
    "I09-zones": zones,
    "I11-margin_below_minimum_percent": partial(margins, "margin-below"),
    "I11-margin_above_maximum_percent": partial(margins, "margin-above"),
    "I14-major_orders_four_stroke": major_orders,
    "I14-lowest_gas_order_four_stroke": lambda: si("order-gas", strokes=4),
    "I14-lowest_inertia_order": lambda: whole(si("order-inertia")),
    "I14-major_order_two_stroke_6": two_stroke,
    "I18-trial_inside_range": damping_inside,
    "I18-ranges": lambda: [list(DAMPING[one]) for one in CASES["I18"]["structures"]],
}
FIGURES = [*figures("H"), *(one for one in figures("I") if one.case["id"] not in KEEP_OUT)]


@pytest.mark.parametrize("figure", FIGURES, ids=lambda figure: figure.id)
def test_figure(figure: Figure):
    figure.check(OWN[figure.id]())


def test_every_figure_made_here_is_asked():
    assert sorted(OWN) == sorted(figure.id for figure in FIGURES)


def test_the_other_published_form_of_sliding_is_not_the_one_used():
    """The trap of H10: 32 (1 - nu) G r/(7 - 8 nu) is 2.6 % higher; the entry says which form it is."""
    nu, shear, radius = CASES["H10"]["nu"], CASES["H10"]["G"]["value"], CASES["H10"]["radius"]["value"]
    other = 32 * (1 - nu) * shear * radius / (7 - 8 * nu)
    assert other / footing("sliding") == pytest.approx(1.026, abs=5e-4)
    assert recipe("footing-circle-sliding").formula == "k = 8 G r/(2 - nu)"


def test_twice_the_mains_is_not_four_times_the_speed():
    """The trap of I02: 100 Hz is 1.4 % from 4 x 1480 rpm."""
    four = hertz("order-frequency", order=4, speed="1480 rpm")
    assert hertz("line-twice", line="50 Hz") / four == pytest.approx(1.0135, abs=1e-4)

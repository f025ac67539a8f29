"""Frozen forced responses, computed for one mass on a spring, to draw without the study."""

import numpy as np

from modalview.model.parts import (
    Body,
    End,
    Excitation,
    Link,
    Machine,
    Model,
    RunUp,
    SpeedRange,
    Spring,
    Support,
)
from modalview.model.values import Entry, Value
from modalview.study.response_results import (
    ACCELERATION,
    DISPLACEMENT,
    VELOCITY,
    Curve,
    DampingUsed,
    Driver,
    ForceCurve,
    LimitCheck,
    MachineResponse,
    PartForce,
    Peak,
    ResponseRequest,
    ResponseResult,
    Steady,
    Traces,
    Watch,
)
from modalview.units import quantities as q

MASS, STIFFNESS, UNBALANCE = 900.0, 5.6e7, 3e-3  # kg, N/m, kg m: resonance at 2382 rpm
RAD_PER_RPM = np.pi / 30
NATURAL_RPM = float(np.sqrt(STIFFNESS / MASS)) / RAD_PER_RPM


def fan(speed: Entry | SpeedRange | None = None) -> Model:
    links: tuple[Link, ...] = (
        Spring(
            id="springs",
            from_=End(body="fan"),
            to=End(support="ground"),
            stiffness=Value.typed("56 kN/mm", q.STIFFNESS, "10 %"),
        ),
    )
    machine = Machine(
        id="drive",
        speed=speed or SpeedRange(from_=Entry.typed("600 rpm", q.SPEED), to=Entry.typed("1480 rpm", q.SPEED)),
        margin=Entry.typed("20 %", q.RATIO),
        run_up=RunUp(acceleration=Entry.typed("20 rpm/s", q.SPEED_RATE)),
        barred_ranges=(
            SpeedRange(from_=Entry.typed("1000 rpm", q.SPEED), to=Entry.typed("1100 rpm", q.SPEED)),
        ),
        excitations=(
            Excitation(id="1x", name="unbalance", order=1, at=End(body="fan"), direction="y"),
            Excitation(id="2x", name="misalignment", order=2, at=End(body="fan"), direction="y"),
        ),
    )
    return Model(
        title="Fan on springs",
        bodies=(Body(id="fan", mass=Value.typed("900 kg", q.MASS)),),
        supports=(Support(id="ground"),),
        links=links,
        machines=(machine,),
    )


def traces(speeds: np.ndarray, order: float, force: np.ndarray, ratio: float) -> Traces:
    omega = order * RAD_PER_RPM * speeds
    dynamic = STIFFNESS - omega**2 * MASS + 2j * ratio * omega * np.sqrt(STIFFNESS * MASS)
    with np.errstate(divide="ignore"):
        peak = np.where(np.abs(dynamic) > 1e-9 * STIFFNESS, force / np.abs(dynamic), np.inf)
    return Traces(peak, peak * omega / np.sqrt(2), peak * omega**2 / np.sqrt(2))


def added(*some: Traces) -> Traces:
    return Traces(
        sum(one.displacement for one in some),
        sum(one.velocity for one in some),
        sum(one.acceleration for one in some),
    )


def curve(speeds: np.ndarray, name: str | None, at: dict[float, Traces], tops: tuple[float, ...]) -> Curve:
    nominal = at[1.0]
    peaks = tuple(
        Peak(
            quantity,
            top,
            float(nominal.values(quantity)[np.argmin(abs(speeds - top))]),
            (0.98 * top, 1.02 * top),
        )
        for quantity in (DISPLACEMENT, VELOCITY, ACCELERATION)
        for top in tops
    )
    return Curve("fan", name, nominal, at.get(0.5), at.get(2.0), peaks)


def response(model: Model | None = None, ratio: float = 0.02, orders: int = 2) -> ResponseResult:
    """Return the response of ``fan`` to so many orders; a ratio of 0 leaves it undamped."""
    model = model or fan()
    speed = model.machines[0].speed
    running = (
        (speed.from_.si / RAD_PER_RPM, speed.to.si / RAD_PER_RPM)
        if isinstance(speed, SpeedRange)
        else (speed.si / RAD_PER_RPM,) * 2
    )
    tops = tuple(NATURAL_RPM / order for order in range(1, orders + 1))
    near = [top * (1 + 0.2 * np.linspace(-1, 1, 201) ** 3) for top in tops]
    speeds = np.unique(np.concatenate([np.linspace(0.1 * running[0], 3000.0, 400), *near, running]))
    cases = (1.0, 0.5, 2.0) if ratio else (1.0,)
    found = []
    for order in range(1, orders + 1):
        force = UNBALANCE / order * (RAD_PER_RPM * speeds) ** 2
        found.append({case: traces(speeds, order, force, case * ratio) for case in cases})
    total = {case: added(*(one[case] for one in found)) for case in cases}
    names = [f"drive/{order}x" for order in range(1, orders + 1)]
    curves = [curve(speeds, name, one, (top,)) for name, one, top in zip(names, found, tops, strict=True)]
    if orders > 1:
        curves.append(curve(speeds, None, total, tuple(sorted(tops))))
    labels = ("1× unbalance", "2× misalignment", "3× fan blades")
    drivers = tuple(
        Driver(name, label, (at + 1) / 60, None, "unbalance", UNBALANCE, "3 kg mm, typed")
        for at, (name, label) in enumerate(zip(names, labels, strict=False))
    )
    pressed = np.abs(STIFFNESS * found[0][1.0].displacement)
    states = tuple(
        Steady(
            name,
            rpm,
            rpm / 60,
            not ratio and abs(rpm - NATURAL_RPM) < 1e-6,
            12.0,
            np.array([[0, 1e-5 + 2e-6j, 0, 0, 0, 0]]),
            (PartForce("springs", "springs", 420.0, None),),
            (PartForce("ground", "ground", 420.0, None),),
            1.4,
            -40.0,
        )
        for name in names
        for rpm in dict.fromkeys(running)
    )
    machine = MachineResponse(
        machine="drive",
        label="fan drive",
        running_rpm=running,
        drivers=drivers,
        left_out=(),
        speeds_rpm=speeds,
        watches=(Watch("fan", "fan, y", End(body="fan"), "y"),),
        curves=tuple(curves),
        transmissions=(),
        forces=tuple(ForceCurve("ground", "ground", "N", name, pressed) for name in (*names, None)),
        limits=(
            LimitCheck(
                "good", "your limit", "fan", VELOCITY, 4.5e-3, "4.5 mm/s", 3e-3, running[1], None, None, False
            ),
        ),
        states=states,
    )
    damping = DampingUsed(
        "modal ratio" if ratio else "none",
        "2 % of critical in every mode, given for the whole model." if ratio else "none is given: undamped.",
        (),
    )
    return ResponseResult(
        request=ResponseRequest(model),
        damping=damping,
        machines=(machine,),
        left_out=(),
        evidence=("dense solves",),
        notes=(),
        worst_residual=1e-15,
        seconds=0.01,
    )

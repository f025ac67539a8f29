"""What the sheet writes beside a part: names and values as typed, with their tolerance."""

from modalview.drawing.primitives import Size
from modalview.drawing.textsize import text_width
from modalview.model.parts import (
    Beam,
    Body,
    Damper,
    Excitation,
    Gear,
    InertiaTensor,
    Link,
    Model,
    Motion,
    Mount,
    RigidLink,
    Shaft,
    Spring,
)
from modalview.model.values import Tolerance, Value
from modalview.units.show import short


def tolerance_text(tolerance: Tolerance | None) -> str:
    """Write a tolerance: "±10 %", "−10 % +20 %", "1.5e8 to 2e8 N/m"; empty for none.

    >>> tolerance_text(Tolerance.symmetric("10 %"))
    '±10 %'
    """
    if tolerance is None:
        return ""
    if tolerance.low is not None and tolerance.high is not None:
        return f"({tolerance.low.text} to {tolerance.high.text})"
    if tolerance.both is not None:
        return f"±{tolerance.both.text}"
    minus, plus = tolerance.minus, tolerance.plus
    return " ".join(sign + entry.text for sign, entry in (("−", minus), ("+", plus)) if entry is not None)


def with_tolerance(value: Value, *others: Tolerance | None) -> str:
    """Write a value with the first tolerance of its own, its part's and the model's."""
    tolerance = next((t for t in (value.tolerance, *others) if t is not None), None)
    return f"{value.text} {tolerance_text(tolerance)}".strip()


def body_lines(model: Model, body: Body) -> tuple[str, ...]:
    """Return name, mass and inertia of a body."""
    default = model.default_tolerance.mass if model.default_tolerance else None
    lines = [body.name or body.id]
    if body.mass is not None and model.motion is not Motion.SHAFT_TRAIN:
        lines.append(with_tolerance(body.mass, body.tolerance, default))
    if isinstance(body.inertia, Value):
        lines.append(with_tolerance(body.inertia, body.tolerance, default))
    elif isinstance(body.inertia, InertiaTensor):
        moments = (body.inertia.Ixx, body.inertia.Iyy, body.inertia.Izz)
        lines.append(
            "I " + ", ".join(_number(moment.text) for moment in moments) + f" {_unit(moments[0].text)}"
        )
    return tuple(lines)


def link_lines(model: Model, link: Link) -> tuple[str, ...]:
    """Return name and values of a link."""
    default = model.default_tolerance.stiffness if model.default_tolerance else None
    lines = [link.name or link.id]
    match link:
        case Spring() | Shaft():
            lines.append(with_tolerance(link.stiffness, link.tolerance, default))
        case Damper():
            lines.append(with_tolerance(link.damping, link.tolerance))
        case Mount():
            lines.extend(_mount_lines(link, default))
        case Gear():
            lines.append(_gear_line(link))
        case Beam():
            lines.append(f"E {link.E.text}")
        case RigidLink():
            lines.append("rigid" if link.directions is None else "rigid in " + ", ".join(link.directions))
    return tuple(lines)


def excitation_line(excitation: Excitation) -> str:
    """Write an excitation: "1× unbalance, rotor 190 kg, G 6.3"."""
    head = _order(excitation) if excitation.order is not None else ""
    if excitation.frequency is not None:
        head = excitation.frequency.text
    words = [f"{head} {excitation.name or excitation.id}".strip()]
    magnitude = excitation.magnitude
    if magnitude is not None:
        if magnitude.rotor_mass is not None:
            words.append(f"rotor {magnitude.rotor_mass.text}")
        strengths = (
            magnitude.grade,
            magnitude.unbalance,
            magnitude.force,
            magnitude.torque,
            magnitude.motion,
        )
        words += [entry.text for entry in strengths if entry is not None]
    return ", ".join(words)


def shortened(text: str, room: float, size: Size = Size.NORMAL, text_scale: float = 1.0) -> str:
    """Cut a text so that it fits into a width in pixels, ending in an ellipsis.

    >>> shortened("baseplate of the pump", 70.0)
    'baseplat…'
    """
    if text_width(text, size, text_scale=text_scale) <= room:
        return text
    kept = text
    while kept and text_width(kept + "…", size, text_scale=text_scale) > room:
        kept = kept[:-1]
    return kept.rstrip() + "…"


def in_two(text: str, room: float, text_scale: float = 1.0) -> tuple[str, ...]:
    """Break a small text that is wider than its room after the last word that fits.

    >>> in_two("baseplate of the pump", 90.0)
    ('baseplate of', 'the pump')
    """
    words = text.split()
    if len(words) < 2 or text_width(text, Size.SMALL, text_scale=text_scale) <= room:
        return (text,)
    heads = [" ".join(words[:count]) for count in range(1, len(words))]
    fitting = [head for head in heads if text_width(head, Size.SMALL, text_scale=text_scale) <= room]
    head = fitting[-1] if fitting else heads[0]
    return head, text[len(head) :].strip()


def _order(excitation: Excitation) -> str:
    return f"{short(excitation.order or 0.0)}×"


def _mount_lines(mount: Mount, default: Tolerance | None) -> list[str]:
    """Group the directions that share a value: "x, y 9.7e5 N/m", "z 1.62e6 N/m ±15 %"."""
    groups: dict[str, list[str]] = {}
    for values in (mount.stiffness, mount.damping):
        for direction in ("x", "y", "z", "rx", "ry", "rz"):
            value = getattr(values, direction, None)
            if value is not None:
                groups.setdefault(with_tolerance(value, mount.tolerance, default), []).append(direction)
    return [f"{', '.join(directions)} {text}" for text, directions in groups.items()]


def _gear_line(gear: Gear) -> str:
    if gear.teeth is not None:
        return f"{gear.teeth[0]} : {gear.teeth[1]} teeth"
    return f"ratio {gear.ratio}"


def _number(text: str) -> str:
    return text.split(" ", 1)[0]


def _unit(text: str) -> str:
    return text.split(" ", 1)[1] if " " in text else ""

"""Starting points: whole models from a few numbers, to be changed by hand afterwards."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace

from modalview.errors import Fault, ModelFaultsError, UnitError
from modalview.model.adding import starting_value
from modalview.model.adding_machines import add_excitation, add_machine
from modalview.model.entries import point_of
from modalview.model.parts import (
    Body,
    Drawn,
    End,
    Gear,
    InertiaTensor,
    Link,
    Model,
    Motion,
    Mount,
    MountStiffness,
    Shaft,
    Spring,
    Support,
)
from modalview.model.rules import faults
from modalview.model.tolerance_text import typed_entry
from modalview.model.values import Value
from modalview.units import quantities as q
from modalview.units.quantities import Quantity

# Parts in a row that a starting point makes at most: more are copied by hand.
MOST = 60


@dataclass(frozen=True, slots=True)
class TemplateField:
    """One number that a starting point asks for.

    Parameters
    ----------
    name : str
        For the program.
    label : str
        For the person.
    default : str
        What stands there at first; a value left so is marked as not given yet.
    quantity : Quantity or None
        None is a whole number from ``low`` to ``high``.
    """

    name: str
    label: str
    default: str
    quantity: Quantity | None = None
    low: int = 1
    high: int = MOST


@dataclass(frozen=True, slots=True)
class Template:
    """A starting point.

    Parameters
    ----------
    id, title, sentence : str
        Name in the program, and what the person reads.
    motion : Motion
    fields : tuple of TemplateField
    """

    id: str
    title: str
    sentence: str
    motion: Motion
    fields: tuple[TemplateField, ...]


# Every starting point may have a machine; without a speed it has none.
MACHINE_FIELDS = (
    TemplateField("speed", "machine speed (may wait)", "", q.SPEED),
    TemplateField("margin", "margin wanted (with a speed)", "", q.RATIO),
)


class _Given:
    """The typed texts of a form, read field by field; all that cannot be read is told at once."""

    def __init__(self, template: Template, texts: Mapping[str, str]) -> None:
        self._fields = {field.name: field for field in template.fields}
        self._texts = texts
        self.wrong: list[Fault] = []

    def text(self, name: str) -> str:
        return self._texts.get(name, self._fields[name].default).strip()

    def count(self, name: str) -> int:
        field = self._fields[name]
        text = self.text(name)
        if text.isdigit() and field.low <= int(text) <= field.high:
            return int(text)
        reason = f'is a whole number from {field.low} to {field.high}; found "{text}"'
        self.wrong.append(Fault(field.name, reason))
        return field.low

    def value(self, name: str) -> Value:
        """Return a typed value; one that was left as it stood is marked as not given yet."""
        field = self._fields[name]
        quantity = field.quantity or q.RATIO
        try:
            entry = typed_entry(self.text(name), quantity)
        except UnitError as reason:
            self.wrong.append(Fault(name, str(reason)))
            return starting_value(field.default, quantity)
        if self.text(name) == field.default:
            return starting_value(field.default, quantity)
        return Value(entry)

    def length(self, name: str) -> float:
        value = self.value(name)
        if value.si <= 0:
            self.wrong.append(Fault(name, f'must be above zero; found "{value.text}"'))
            return 1.0
        return value.si


_Build = Callable[[_Given], Model]


def build(template: Template, texts: Mapping[str, str]) -> Model:
    """Return the model of a starting point.

    Parameters
    ----------
    template : Template
    texts : mapping of str to str
        What was typed in each field, by its name; a missing one keeps its default.

    Raises
    ------
    ModelFaultsError
        Each fault's path is the name of a field.

    Examples
    --------
    >>> chain = next(one for one in TEMPLATES if one.id == "chain")
    >>> [body.name for body in build(chain, {"number": "2"}).bodies]
    ['mass 1', 'mass 2']
    """
    whole = replace(template, fields=(*template.fields, *MACHINE_FIELDS))
    given = _Given(whole, texts)
    model = replace(_BUILD[template.id](given), title=template.title)
    if given.wrong:
        raise ModelFaultsError(tuple(given.wrong))
    wrong = faults(model)
    if wrong:
        raise ModelFaultsError(wrong)
    return _with_machine(model, given)


def _with_machine(model: Model, given: _Given) -> Model:
    if not given.text("speed"):
        return model
    turning = model.motion is Motion.SHAFT_TRAIN
    first = model.bodies[0].id
    model, machine = add_machine(
        model, "", given.text("speed"), given.text("margin"), on=first if turning else None
    )
    direction = None if turning else {Motion.SPACE: "z"}.get(model.motion, "y")
    if model.bodies[0].dof == ("x",):
        direction = "x"
    top = model.bodies[-1].id if model.motion is Motion.SINGLE_AXIS else first
    return add_excitation(
        model,
        machine,
        "1",
        at=End(body=top),
        direction=direction,
        name="unbalance" if not turning else "shaft",
    )[0]


def _box(width: float, height: float) -> Drawn:
    wide, high = point_of((width, height))
    return Drawn(width=wide, height=high)


def _chain(given: _Given) -> Model:
    number, mass, stiffness = given.count("number"), given.value("mass"), given.value("stiffness")
    both = given.count("held") == 2
    bodies = tuple(
        Body(
            id=f"m{n}",
            name=f"mass {n}",
            mass=mass,
            position=point_of((0.0, 1.0 * n)),
            drawn=_box(1.2, 0.4),
        )
        for n in range(1, number + 1)
    )
    supports = [Support(id="s1", name="ground", position=point_of((0.0, 0.0)))]
    links: list[Link] = [Spring(id="k1", from_=End(body="m1"), to=End(support="s1"), stiffness=stiffness)]
    for n in range(2, number + 1):
        ends = End(body=f"m{n}"), End(body=f"m{n - 1}")
        links.append(Spring(id=f"k{n}", from_=ends[0], to=ends[1], stiffness=stiffness))
    if both:
        supports.append(Support(id="s2", name="held above", position=point_of((0.0, number + 1.0))))
        links.append(
            Spring(
                id=f"k{number + 1}", from_=End(body=f"m{number}"), to=End(support="s2"), stiffness=stiffness
            )
        )
    return Model(motion=Motion.SINGLE_AXIS, bodies=bodies, supports=tuple(supports), links=tuple(links))


def _on_two_mounts(given: _Given) -> Model:
    left, right, below = given.length("left"), given.length("right"), given.length("below")
    body = Body(
        id="b1",
        name="machine",
        mass=given.value("mass"),
        inertia=given.value("inertia"),
        position=point_of((0.0, below + 0.5)),
        drawn=_box(left + right + 0.3, 2 * below),
    )
    stiffness = MountStiffness(x=given.value("sideways"), y=given.value("upright"))
    supports: list[Support] = []
    links: list[Link] = []
    for number, (name, x) in enumerate((("left mount", -left), ("right mount", right)), start=1):
        supports.append(Support(id=f"s{number}", name="ground", position=point_of((x, 0.0))))
        links.append(
            Mount(
                id=f"mt{number}",
                name=name,
                from_=End(body="b1", offset=point_of((x, -below))),
                to=End(support=f"s{number}"),
                stiffness=stiffness,
            )
        )
    return Model(motion=Motion.PLANE, bodies=(body,), supports=tuple(supports), links=tuple(links))


def _on_mounts(given: _Given) -> Model:
    number = given.count("number")
    if number % 2:
        given.wrong.append(Fault("number", "must be even: mounts stand in pairs left and right"))
    length, width, below = given.length("length"), given.length("width"), given.length("below")
    body = Body(
        id="b1",
        name="machine",
        mass=given.value("mass"),
        inertia=InertiaTensor(Ixx=given.value("Ixx"), Iyy=given.value("Iyy"), Izz=given.value("Izz")),
        position=point_of((0.0, 0.0, below + 0.3)),
        drawn=_box(length + 0.4, 2 * below),
    )
    stiffness = MountStiffness(x=given.value("sideways"), y=given.value("sideways"), z=given.value("upright"))
    rows = max(number // 2, 2)
    supports: list[Support] = []
    links: list[Link] = []
    for row in range(rows):
        x = -length / 2 + length * row / (rows - 1)
        for side, y in (("right", -width / 2), ("left", width / 2)):
            mark = len(links) + 1
            supports.append(Support(id=f"s{mark}", position=point_of((x, y, 0.0))))
            links.append(
                Mount(
                    id=f"mt{mark}",
                    name=f"mount {row + 1} {side}",
                    from_=End(body="b1", offset=point_of((x, y, -below))),
                    to=End(support=f"s{mark}"),
                    stiffness=stiffness,
                )
            )
    return Model(motion=Motion.SPACE, bodies=(body,), supports=tuple(supports), links=tuple(links))


def _geared_train(given: _Given) -> Model:
    places = {"driver": (-1.6, 0.0), "wheel": (0.0, 0.0), "pinion": (0.0, 0.6), "driven": (1.6, 0.6)}
    names = {"driver": "driver", "wheel": "gear wheel", "pinion": "pinion", "driven": "driven machine"}
    sizes = {"driver": (0.7, 0.7), "wheel": (0.22, 0.8), "pinion": (0.22, 0.4), "driven": (0.7, 0.5)}
    bodies = tuple(
        Body(
            id=f"d{number}",
            name=names[key],
            inertia=given.value(key),
            position=point_of(place),
            drawn=_box(*sizes[key]),
        )
        for number, (key, place) in enumerate(places.items(), start=1)
    )
    teeth = given.count("teeth from"), given.count("teeth to")
    links: tuple[Link, ...] = (
        Shaft(
            id="sh1",
            name="driver shaft",
            from_=End(body="d1"),
            to=End(body="d2"),
            stiffness=given.value("low"),
        ),
        Gear(id="g1", name="gear pair", from_=End(body="d2"), to=End(body="d3"), teeth=teeth),
        Shaft(
            id="sh2",
            name="driven shaft",
            from_=End(body="d3"),
            to=End(body="d4"),
            stiffness=given.value("high"),
        ),
    )
    return Model(motion=Motion.SHAFT_TRAIN, bodies=bodies, links=links)


def _storeys(given: _Given) -> Model:
    number, mass, stiffness = given.count("number"), given.value("mass"), given.value("stiffness")
    high = given.length("height")
    bodies = tuple(
        Body(
            id=f"m{n}",
            name=f"floor {n}",
            mass=mass,
            position=point_of((0.0, high * n)),
            dof=("x",),
            drawn=_box(1.6 * high, 0.16 * high),
        )
        for n in range(1, number + 1)
    )
    supports = (Support(id="s1", name="ground", position=point_of((0.0, 0.0))),)
    links: list[Link] = []
    for n in range(1, number + 1):
        below = End(support="s1") if n == 1 else End(body=f"m{n - 1}")
        links.append(
            Spring(
                id=f"k{n}",
                name=f"storey {n}",
                from_=End(body=f"m{n}"),
                to=below,
                stiffness=stiffness,
                direction="x",
            )
        )
    return Model(motion=Motion.PLANE, bodies=bodies, supports=supports, links=tuple(links))


def _floor_and_machine(given: _Given) -> Model:
    bodies = (
        Body(
            id="m1",
            name="floor",
            mass=given.value("floor"),
            position=point_of((0.0, 0.8)),
            drawn=_box(2.6, 0.3),
        ),
        Body(
            id="m2",
            name="machine",
            mass=given.value("machine"),
            position=point_of((0.0, 1.9)),
            drawn=_box(1.2, 0.7),
        ),
    )
    links: tuple[Link, ...] = (
        Spring(
            id="k1", name="floor", from_=End(body="m1"), to=End(support="s1"), stiffness=given.value("below")
        ),
        Spring(
            id="k2",
            name="mounts together",
            from_=End(body="m2"),
            to=End(body="m1"),
            stiffness=given.value("mounts"),
        ),
    )
    ground = Support(id="s1", name="columns", position=point_of((0.0, 0.0)))
    return Model(motion=Motion.SINGLE_AXIS, bodies=bodies, supports=(ground,), links=links)


_BUILD: dict[str, _Build] = {
    "chain": _chain,
    "two mounts": _on_two_mounts,
    "mounts": _on_mounts,
    "geared train": _geared_train,
    "storeys": _storeys,
    "floor and machine": _floor_and_machine,
}

TEMPLATES: tuple[Template, ...] = (
    Template(
        "chain",
        "Masses in a row",
        "Equal masses on equal springs, moving along one axis; each can be changed afterwards.",
        Motion.SINGLE_AXIS,
        (
            TemplateField("number", "number of masses", "3"),
            TemplateField("mass", "each mass", "100 kg", q.MASS),
            TemplateField("stiffness", "each spring", "1e6 N/m", q.STIFFNESS),
            TemplateField("held", "ends held (1 or 2)", "1", None, 1, 2),
        ),
    ),
    Template(
        "floor and machine",
        "Machine on a floor",
        "A machine on mounts on a floor that gives way itself, up and down.",
        Motion.SINGLE_AXIS,
        (
            TemplateField("machine", "mass of the machine", "1500 kg", q.MASS),
            TemplateField("mounts", "stiffness of all its mounts", "4e6 N/m", q.STIFFNESS),
            TemplateField("floor", "mass of the floor that moves", "5000 kg", q.MASS),
            TemplateField("below", "stiffness of the floor", "5e7 N/m", q.STIFFNESS),
        ),
    ),
    Template(
        "two mounts",
        "Body on two lines of mounts",
        "A rigid machine seen from the side: up and down, sideways and rocking.",
        Motion.PLANE,
        (
            TemplateField("mass", "mass", "1800 kg", q.MASS),
            TemplateField("inertia", "inertia about its centre", "600 kg m2", q.INERTIA),
            TemplateField("left", "centre of gravity to left line", "0.8 m", q.LENGTH),
            TemplateField("right", "centre of gravity to right line", "0.8 m", q.LENGTH),
            TemplateField("below", "mounts below centre of gravity", "0.6 m", q.LENGTH),
            TemplateField("upright", "upright stiffness per line", "2e6 N/m", q.STIFFNESS),
            TemplateField("sideways", "sideways stiffness per line", "1e6 N/m", q.STIFFNESS),
        ),
    ),
    Template(
        "storeys",
        "Storeys",
        "Floors over each other that sway sideways on their columns.",
        Motion.PLANE,
        (
            TemplateField("number", "number of floors", "3"),
            TemplateField("mass", "mass of each floor", "20 t", q.MASS),
            TemplateField("stiffness", "sideways stiffness of each storey", "5e7 N/m", q.STIFFNESS),
            TemplateField("height", "height of a storey", "3 m", q.LENGTH),
        ),
    ),
    Template(
        "geared train",
        "Shaft train with a gear",
        "A driver, a gear pair and a driven machine, turning about their shafts.",
        Motion.SHAFT_TRAIN,
        (
            TemplateField("driver", "inertia of the driver", "20 kg m2", q.INERTIA),
            TemplateField("low", "stiffness of its shaft", "1e6 N m/rad", q.TORSIONAL_STIFFNESS),
            TemplateField("wheel", "inertia of the gear wheel", "5 kg m2", q.INERTIA),
            TemplateField("teeth from", "teeth of the gear wheel", "80", None, 5, 999),
            TemplateField("teeth to", "teeth of the pinion", "20", None, 5, 999),
            TemplateField("pinion", "inertia of the pinion", "0.2 kg m2", q.INERTIA),
            TemplateField("high", "stiffness of the driven shaft", "2e5 N m/rad", q.TORSIONAL_STIFFNESS),
            TemplateField("driven", "inertia of the driven machine", "1 kg m2", q.INERTIA),
        ),
    ),
    Template(
        "mounts",
        "Machine on four, six or more mounts",
        "A rigid machine in space on mounts in two rows: six ways to move.",
        Motion.SPACE,
        (
            TemplateField("number", "number of mounts", "4", None, 4, MOST),
            TemplateField("mass", "mass", "3000 kg", q.MASS),
            TemplateField("Ixx", "inertia about x, along the machine", "800 kg m2", q.INERTIA),
            TemplateField("Iyy", "inertia about y, across", "3500 kg m2", q.INERTIA),
            TemplateField("Izz", "inertia about z, upright", "3500 kg m2", q.INERTIA),
            TemplateField("length", "first to last mount along x", "2.2 m", q.LENGTH),
            TemplateField("width", "between the rows", "1 m", q.LENGTH),
            TemplateField("below", "mounts below centre of gravity", "0.6 m", q.LENGTH),
            TemplateField("upright", "upright stiffness of each mount", "1.5e6 N/m", q.STIFFNESS),
            TemplateField("sideways", "sideways stiffness of each mount", "1e6 N/m", q.STIFFNESS),
        ),
    ),
)

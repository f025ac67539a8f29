"""Starting values that hang on others: the inertia of a body that was drawn goes with its mass."""

from dataclasses import replace

from modalview.model.parts import Body, InertiaTensor
from modalview.model.values import STARTING, Value
from modalview.units.quantities import INERTIA
from modalview.units.show import show


def with_mass(body: Body, mass: Value, units: str) -> Body:
    """Return a body with another mass, its inertia that nobody has given in proportion.

    An inertia that somebody typed stays, as does one whose mass was not above zero.

    Parameters
    ----------
    units : str
        The system that a new inertia is written in.

    Examples
    --------
    >>> from modalview.model.values import Entry
    >>> from modalview.units.quantities import MASS
    >>> drawn = Value(Entry("37.5 kg m2", 37.5), source=STARTING)
    >>> body = Body(id="b", mass=Value.typed("100 kg", MASS), inertia=drawn)
    >>> with_mass(body, Value.typed("200 kg", MASS), "SI").inertia.text
    '75 kg m2'
    """
    old = body.mass.si if body.mass is not None else 0.0
    after = replace(body, mass=mass)
    if not (old > 0 and mass.si > 0) or mass.si == old:
        return after
    share = mass.si / old
    if isinstance(body.inertia, InertiaTensor):
        along = (body.inertia.Ixx, body.inertia.Iyy, body.inertia.Izz)
        x, y, z = (_times(moment, share, units) for moment in along)
        return replace(after, inertia=replace(body.inertia, Ixx=x, Iyy=y, Izz=z))
    return after if body.inertia is None else replace(after, inertia=_times(body.inertia, share, units))


def _times(moment: Value, share: float, units: str) -> Value:
    if moment.source != STARTING:
        return moment
    text = show(moment.si * share, INERTIA, units)
    return replace(moment, entry=Value.typed(text, INERTIA).entry)

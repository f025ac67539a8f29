"""Rules of bodies and supports: mass, inertia, freedoms, places."""

from modalview.model.parts import Body, InertiaTensor, Motion, Support
from modalview.model.rules_context import Context, Findings, points
from modalview.model.rules_values import above_zero, listed, not_negative, tolerance
from modalview.model.values import Value
from modalview.units.show import short

SHAPES = ("box", "disc", "point")

_IMPOSSIBLE = (
    "no distribution of mass has these moments and products: Pxy, Pxz or Pyz is too large (the tensor is not "
    "positive definite, or one principal moment exceeds the sum of the other two)"
)

# Share of the moments that typed numbers may miss a rule by: a thin disc has Izz = Ixx + Iyy exactly.
ROUNDING = 1e-9


def body(given: Body, context: Context) -> Findings:
    """Yield every rule that a body breaks."""
    yield from _mass(given, context)
    yield from _inertia(given, context)
    yield from tolerance("tolerance", given.tolerance, None)
    yield from points("position", given.position, context, required=not context.drawn_only)
    yield from listed("dof", given.dof, context.freedoms, context.motion.value)
    if given.drawn is not None:
        yield from above_zero("drawn . width", given.drawn.width)
        yield from above_zero("drawn . height", given.drawn.height)
        if given.drawn.shape not in (None, *SHAPES):
            yield "drawn . shape", f'is one of {", ".join(SHAPES)}; found "{given.drawn.shape}"'


def support(given: Support, context: Context) -> Findings:
    """Yield every rule that a support breaks."""
    yield from points("position", given.position, context, required=not context.drawn_only)


def _mass(given: Body, context: Context) -> Findings:
    if given.mass is None:
        if context.motion is not Motion.SHAFT_TRAIN:
            yield "mass", 'is missing; a massless junction has the mass "0 kg"'
        return
    yield from not_negative("mass", given.mass)
    yield from tolerance("mass . tolerance", given.mass.tolerance, given.mass.entry)


def _inertia(given: Body, context: Context) -> Findings:
    inertia = given.inertia
    if inertia is None:
        if context.motion is Motion.SHAFT_TRAIN:
            yield (
                "inertia",
                'is missing; every body of a shaft train turns, a massless junction has "0 kg m2"',
            )
    elif isinstance(inertia, Value):
        if context.motion is Motion.SPACE:
            yield (
                "inertia",
                'in space is {"Ixx", "Iyy", "Izz"}, with Pxy, Pxz, Pyz where not zero',
            )
        yield from not_negative("inertia", inertia)
        yield from tolerance("inertia . tolerance", inertia.tolerance, inertia.entry)
    elif context.motion is not Motion.SPACE:
        yield "inertia", f"in {context.motion.value} is one value about z; three moments are for space"
    else:
        yield from _tensor(inertia)


def _tensor(tensor: InertiaTensor) -> Findings:
    yield from tolerance("inertia . tolerance", tensor.tolerance, None)
    for key in ("Ixx", "Iyy", "Izz", "Pxy", "Pxz", "Pyz"):
        value: Value | None = getattr(tensor, key)
        if value is not None and value.tolerance is not None:
            yield f"inertia . {key} . tolerance", "belongs to the inertia as a whole, which scales as one"
    wrong = [
        finding
        for key in ("Ixx", "Iyy", "Izz")
        for finding in above_zero(f"inertia . {key}", getattr(tensor, key))
    ]
    wrong = wrong or list(_triangle(tensor))
    yield from wrong
    if not wrong and not _can_be_mass(tensor):
        yield "inertia", _IMPOSSIBLE


def _triangle(tensor: InertiaTensor) -> Findings:
    moments = {"Ixx": tensor.Ixx, "Iyy": tensor.Iyy, "Izz": tensor.Izz}
    for key, value in moments.items():
        others = [other for other in moments if other != key]
        total = sum(moments[other].si for other in others)
        if value.si > total * (1 + ROUNDING):
            sum_text = f"{' + '.join(others)} = {short(total)} kg m2"
            yield f"inertia . {key}", f'"{value.text}" is more than {sum_text}; no body has such moments'


def _can_be_mass(tensor: InertiaTensor) -> bool:
    """Tell whether the second moments of mass, integrals of x x, x y ... dm, are not negative anywhere.

    With S their matrix, the inertia tensor is trace(S) I - S. S having no negative principal value is the
    same as the principal moments keeping Ixx <= Iyy + Izz, and makes the tensor positive; checked by all
    principal minors, moments taken relative to the largest.
    """
    size = max(tensor.Ixx.si, tensor.Iyy.si, tensor.Izz.si)  # above zero, checked before
    ixx, iyy, izz = tensor.Ixx.si / size, tensor.Iyy.si / size, tensor.Izz.si / size
    xx, yy, zz = (iyy + izz - ixx) / 2, (ixx + izz - iyy) / 2, (ixx + iyy - izz) / 2
    xy, xz, yz = (0.0 if p is None else p.si / size for p in (tensor.Pxy, tensor.Pxz, tensor.Pyz))
    if any(p * p > a * b + ROUNDING for a, b, p in ((xx, yy, xy), (xx, zz, xz), (yy, zz, yz))):
        return False
    determinant = xx * yy * zz + 2 * xy * xz * yz - xx * yz * yz - yy * xz * xz - zz * xy * xy
    return not determinant < -ROUNDING

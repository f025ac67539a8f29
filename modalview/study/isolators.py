"""What the mounts of a model carry at rest, with what that rests on and leaves out."""

from dataclasses import dataclass
from time import perf_counter

from modalview.assembly.assemble import assemble
from modalview.errors import InputError
from modalview.model.parts import Beam, Model, Motion, Mount, Spring
from modalview.response.isolators import AtRest, at_rest
from modalview.response.weight import GRAVITY
from modalview.study.results import Request

# A balance is not told closer than this: rounding differs from one processor to the next.
LEAST = 1e-14
# More mounts than this are not named one by one.
NAMED = 6
LEFT_OUT = (
    "Not covered: the stability of a high centre of gravity (the weight's own moment once it has tilted), "
    "mounts that stiffen or bottom out, and forces of pipes, ducts and drives."
)
SHARED = (
    "Mounts are taken as of one free height, set level without load; where there are more than statics needs "
    "they share by stiffness. Springs push as they pull."
)


@dataclass(frozen=True, slots=True, eq=False)
class MountsAtRest:
    """The mounts of a model under its weight.

    Parameters
    ----------
    request : Request
    found : AtRest
    sentence : str
        What matters, in words.
    evidence : tuple of str
        How closely the loads balance the weight.
    notes : tuple of str
        What was taken for granted, and what is not covered.
    coordinates : int
        Independent coordinates of the model.
    seconds : float
    """

    request: Request
    found: AtRest
    sentence: str
    evidence: tuple[str, ...]
    notes: tuple[str, ...]
    coordinates: int
    seconds: float

    @property
    def sound(self) -> bool:
        """Whether no mount is overloaded and none is pulled."""
        return not self.found.overloaded and not self.found.lifted


def mounts_at_rest(request: Request) -> MountsAtRest:
    """Return what every spring, mount and beam carries under the weight of a model.

    Raises
    ------
    InputError
        A shaft train, or a model in which nothing bears weight.
    ModelFaultsError
        The model cannot be analysed, or nothing holds some part up; names it.
    """
    start = perf_counter()
    model = request.model
    assembly = assemble(model)
    found = at_rest(assembly)
    if not found.feet:
        raise InputError(
            "No spring or mount of this model bears weight: "
            + ("upright motion is held still." if found.held else "give one a stiffness upwards.")
        )
    return MountsAtRest(
        request=request,
        found=found,
        sentence=_sentence(found),
        evidence=_evidence(found),
        notes=(*_taken(model), *assembly.notes, SHARED, LEFT_OUT),
        coordinates=assembly.n,
        seconds=perf_counter() - start,
    )


def _sentence(found: AtRest) -> str:
    said = []
    over, lifted = found.overloaded, found.lifted
    if over:
        worst = max(over, key=lambda foot: foot.of_rated or 0.0)
        beyond = 100 * ((worst.of_rated or 0.0) - 1)
        others = f", and {len(over) - 1} more" if len(over) > 1 else ""
        said.append(f"{worst.label} carries {beyond:.1f} % more than its rated load{others}.")
    if lifted:
        names = ", ".join(foot.label for foot in lifted[:NAMED])
        names += f" and {len(lifted) - NAMED} more" if len(lifted) > NAMED else ""
        verb = "is" if len(lifted) == 1 else "are"
        said.append(f"{names} {verb} pulled upward: a mount that cannot pull lifts off.")
    rated = [foot for foot in found.feet if foot.rated is not None]
    if not said and rated:
        most = max(rated, key=lambda foot: foot.of_rated or 0.0)
        share = 100 * (most.of_rated or 0.0)
        some = "" if len(rated) == len(found.feet) else f" ({len(found.feet) - len(rated)} have none)"
        said.append(
            f"No mount carries more than its rated load{some}; the most is {share:.1f} %, {most.label}."
        )
    return " ".join(said) or "Every mount is pressed; none has a rated load to be held against."


def _evidence(found: AtRest) -> tuple[str, ...]:
    missing = abs(found.weight - found.on_ground - found.held) / (found.weight or 1.0)
    return (
        f"loads at ground and weight balance to {max(missing, LEAST):.0e} of the weight",
        f"forces balance at every part to {max(found.unbalanced, LEAST):.0e} of the weight",
    )


def _taken(model: Model) -> tuple[str, ...]:
    up = {Motion.SPACE: "z", Motion.PLANE: "y"}.get(model.motion, "y, the one axis")
    said = [f"Weight acts against {up}, with g = {GRAVITY} m/s2, at nominal values."]
    bearing = (link for link in model.links if isinstance(link, Spring | Mount | Beam))
    if any(link.dynamic_ratio is not None for link in bearing):
        said.append("Stiffness is static: dynamic ratios are left out here.")
    return tuple(said)

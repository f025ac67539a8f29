"""Which damping holds in a steady response, and what loss factors mean for each mode."""

from dataclasses import dataclass, replace
from typing import Self

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.dampedterms import has_dashpots
from modalview.assembly.pencil import Pencil
from modalview.eigen.modes import Modes
from modalview.eigen.shares import strain_shares
from modalview.units.show import short

Array = npt.NDArray[np.float64]

DASHPOTS, LOSSES, BOTH = "dashpots", "loss factors", "dashpots and loss factors"
RATIO, PROPORTIONAL, NONE = "modal ratio", "proportional", "none"


@dataclass(frozen=True, slots=True, eq=False)
class Damping:
    """What takes energy out of a steady motion.

    Parameters
    ----------
    kind : str
        "dashpots", "loss factors", "dashpots and loss factors", "modal ratio", "proportional" or "none".
    ratio : float
        The same viscous ratio for every elastic mode; with "modal ratio" only.
    alpha, beta : float
        1/s, s; C = alpha M + beta K, with "proportional" only.
    losses : array (t,)
        Loss factor of every stiffness term: its stiffness is k (1 + i eta).
    times : float
        Factor on all of it, dashpots included: 0.5 and 2 for the band shown.
    """

    kind: str
    ratio: float
    alpha: float
    beta: float
    losses: Array
    times: float = 1.0

    @property
    def own(self) -> bool:
        """Whether the parts have damping of their own, so that a damping of the whole model is ignored."""
        return self.kind in (DASHPOTS, LOSSES, BOTH)

    @property
    def viscous(self) -> bool:
        """Whether dashpots are at work."""
        return self.kind in (DASHPOTS, BOTH)

    @property
    def uniform_loss(self) -> float | None:
        """The one loss factor of all terms; None where they differ."""
        if self.losses.size == 0 or np.ptp(self.losses) == 0:
            return float(self.losses[0]) if self.losses.size else 0.0
        return None

    def multiplied(self, factor: float) -> Self:
        """Return so many times this damping."""
        return replace(
            self,
            ratio=self.ratio * factor,
            alpha=self.alpha * factor,
            beta=self.beta * factor,
            losses=self.losses * factor,
            times=self.times * factor,
        )

    def modal_rates(self, eigenvalues: Array) -> Array:
        """Return c (modes,), 1/s, of p'' + c p' + lambda p: 2 zeta omega, or alpha + beta lambda.

        Lord Rayleigh (1877), The Theory of Sound, section 97 (from memory). A ratio gives a rigid-body mode
        nothing.
        """
        positive = np.maximum(eigenvalues, 0.0)
        rates: Array = 2 * self.ratio * np.sqrt(positive) + self.alpha + self.beta * positive
        return rates


def damping_of(assembly: Assembly) -> Damping:
    """Tell which damping holds in a model.

    Notes
    -----
    Dashpots and loss factors hold exactly as soon as any exists; then damping given for the whole model is
    ignored. A loss factor of a link holds for each of its stiffness terms.
    """
    model = assembly.model
    of_part = {link.id: link.loss_factor.si for link in model.links if link.loss_factor is not None}
    losses = np.array([of_part.get(part, 0.0) for part in assembly.structure.stiffness.part], dtype=float)
    dashpots, lossy = has_dashpots(assembly), bool(np.any(losses > 0))
    none = np.zeros_like(losses)
    if dashpots or lossy:
        kind = BOTH if dashpots and lossy else DASHPOTS if dashpots else LOSSES
        return Damping(kind, 0.0, 0.0, 0.0, losses)
    given = model.damping
    if given is None:
        return Damping(NONE, 0.0, 0.0, 0.0, none)
    ratio, alpha, beta = (entry.si if entry else 0.0 for entry in (given.ratio, given.alpha, given.beta))
    if ratio == alpha == beta == 0:
        return Damping(NONE, 0.0, 0.0, 0.0, none)
    return Damping(RATIO if given.ratio is not None else PROPORTIONAL, ratio, alpha, beta, none)


def damping_sentence(assembly: Assembly, damping: Damping) -> str:
    """Say in words which damping holds and what was ignored."""
    if damping.own:
        said = f"Damping by the {damping.kind} of the model."
        if damping.kind != DASHPOTS:
            said += " A loss factor makes the stiffness k (1 + i eta) at every frequency."
        if assembly.model.damping is not None:
            said += " The damping given for the whole model is ignored."
        return said
    if damping.kind == RATIO:
        return (
            f"Damping ratio {short(100 * damping.ratio, 4)} % for every mode, on motion relative to the base."
        )
    if damping.kind == PROPORTIONAL:
        alpha, beta = short(damping.alpha), short(damping.beta)
        return f"Proportional damping, alpha = {alpha} 1/s, beta = {beta} s, on motion relative to the base."
    return "No damping is given: the response at a resonance is infinite."


def modal_losses(pencil: Pencil, modes: Modes, losses: Array) -> Array:
    """Return the loss factor of every mode (modes,): sum of eta times strain energy share.

    Notes
    -----
    Approximate: it takes the undamped shape. Exact where all terms have the same loss factor. Zero for
    rigid-body modes.

    References
    ----------
    E. E. Ungar, E. M. Kerwin (1962), J. Acoust. Soc. Am. 34, 954-957 (from memory).
    """
    found: Array = losses @ strain_shares(pencil, modes)
    return found

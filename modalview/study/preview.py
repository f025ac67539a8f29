"""The lowest frequencies while a value is dragged, foretold from the last solve."""

from modalview.assembly.assemble import Assembly, assemble
from modalview.eigen.preview import Preview, preview_modes
from modalview.eigen.solve import LARGEST
from modalview.model.parts import Model
from modalview.study.results import Outlook, Solution


def preview(previous: Solution, model: Model) -> Preview | None:
    """Foretell the lowest modes of an edited model from the solution before the edit.

    Parameters
    ----------
    previous : Solution
    model : Model
        The same but for the size of one value, or a few.

    Returns
    -------
    Preview or None
        To be shown as a preview, never as found modes. None when the structure changed, or too much did:
        then only a new solve tells.

    Raises
    ------
    ModelFaultsError
        The model cannot be analysed.
    """
    return _preview(previous, assemble(model, previous.outlook.assembly))


def foretell(previous: Solution, outlook: Outlook) -> dict[int, float]:
    """Foretell the lowest modes of an edited model that was looked at already.

    Parameters
    ----------
    previous : Solution
        Of the model before the edit.
    outlook : Outlook
        Of the edited model.

    Returns
    -------
    dict of float
        Frequencies in Hz by the numbers of the modes; empty where only a new solve tells, and where a count
        contradicts.
    """
    found = _preview(previous, outlook.assembly)
    if found is None or found.complete is False:
        return {}
    return dict(zip(found.numbers, found.frequency_hz.tolist(), strict=True))


def _preview(previous: Solution, after: Assembly) -> Preview | None:
    before = previous.outlook.assembly
    if after.structure is not before.structure:
        return None
    # Of larger models the modes near the excitations are found, not the lowest.
    if before.pencil().modes > LARGEST:
        return None
    return preview_modes(previous.raw, before.pencil(), after.pencil())

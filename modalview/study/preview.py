"""The lowest frequencies while a value is dragged, foretold from the last solve."""

from modalview.assembly.assemble import assemble
from modalview.eigen.preview import Preview, preview_modes
from modalview.model.parts import Model
from modalview.study.results import Solution


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
    before = previous.outlook.assembly
    after = assemble(model, before)
    if after.structure is not before.structure:
        return None
    return preview_modes(previous.raw, before.pencil(), after.pencil())

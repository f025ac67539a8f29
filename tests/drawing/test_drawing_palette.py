import pytest

from modalview.drawing.palette import DARK, LEAST_CONTRAST, LIGHT, TEXT_ROLES, Palette, contrast, luminance
from modalview.drawing.primitives import Role

BOTH = pytest.mark.parametrize("palette", [LIGHT, DARK], ids=["light", "dark"])


@BOTH
def test_every_role_has_a_colour(palette: Palette):
    assert set(palette) == set(Role)


@BOTH
@pytest.mark.parametrize("role", TEXT_ROLES)
def test_texts_stand_out_from_the_paper(palette: Palette, role: Role):
    assert contrast(palette[role], palette[Role.PAPER]) >= LEAST_CONTRAST


@BOTH
def test_ghost_and_grid_stay_behind_the_ink(palette: Palette):
    paper = palette[Role.PAPER]
    strength = [contrast(palette[role], paper) for role in (Role.GRID, Role.GHOST, Role.INK)]
    assert strength == sorted(strength)


def test_luminance_of_the_ends():
    assert luminance("#000000") == 0
    assert luminance("#ffffff") == pytest.approx(1)

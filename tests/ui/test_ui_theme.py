import re

import pytest

from modalview.drawing.palette import LEAST_CONTRAST, contrast
from modalview.places import resources
from modalview.ui.theme import DARK, LIGHT, style_sheet, token_names

TEXTS = ("ink", "quiet", "accent", "clear", "nominal", "in_band")
GROUNDS = ("window", "paper", "card", "field")


def test_the_style_sheet_uses_tokens_only():
    text = (resources() / "style.qss").read_text(encoding="utf-8")
    without_comments = re.sub(r"/\*.*?\*/", "", text, flags=re.DOTALL)
    assert set(re.findall(r"\$(\w+)", without_comments)) <= set(token_names())
    assert not re.findall(r":\s*#[0-9a-fA-F]{3,8}\b", without_comments)


@pytest.mark.parametrize("theme", [LIGHT, DARK], ids=lambda one: one.name)
def test_every_token_is_filled(theme):
    assert "$" not in re.sub(r"/\*.*?\*/", "", style_sheet(theme, 10.0), flags=re.DOTALL)


@pytest.mark.parametrize("theme", [LIGHT, DARK], ids=lambda one: one.name)
@pytest.mark.parametrize("ground", GROUNDS)
@pytest.mark.parametrize("text", TEXTS)
def test_text_stands_out_from_what_is_behind_it(theme, ground, text):
    assert contrast(getattr(theme, text), getattr(theme, ground)) >= LEAST_CONTRAST


@pytest.mark.parametrize("theme", [LIGHT, DARK], ids=lambda one: one.name)
def test_pressed_and_refused_texts_stand_out_too(theme):
    assert contrast(theme.on_accent, theme.accent) >= LEAST_CONTRAST
    assert contrast(theme.ink, theme.accent_pale) >= LEAST_CONTRAST
    assert contrast(theme.ink, theme.in_band_pale) >= LEAST_CONTRAST


@pytest.mark.parametrize("theme", [LIGHT, DARK], ids=lambda one: one.name)
def test_every_rule_of_the_style_sheet_that_sets_text_and_ground_sets_them_apart(theme):
    text = re.sub(r"/\*.*?\*/", "", style_sheet(theme, 10.0), flags=re.DOTALL)
    rules = re.findall(r"([^{}]+)\{([^}]*)\}", text)
    checked = 0
    for selector, body in rules:
        colours = dict(re.findall(r"(?<![-\w])(color|background):\s*(#[0-9a-f]{6})", body))
        if len(colours) == 2:
            checked += 1
            assert contrast(colours["color"], colours["background"]) >= LEAST_CONTRAST, selector.strip()
    assert checked > 10

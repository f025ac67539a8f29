"""The play bar in little room and with large text."""

from types import SimpleNamespace

import pytest

from modalview.ui.playbar import PlayBar
from modalview.ui.swing import Swing
from modalview.ui.theme import LIGHT, apply_theme

MODE = SimpleNamespace(kind="elastic", number=1, frequency_hz=51.26, numerical_error_hz=1e-12)


@pytest.fixture
def bar(qtbot, qapp):
    made = PlayBar(Swing(None))
    qtbot.addWidget(made)
    made.show_mode(MODE, current=True)
    made.show()
    yield made
    apply_theme(qapp, "light", 100)


@pytest.mark.parametrize("percent", [100, 200])
@pytest.mark.parametrize("width", [1400, 740, 420, 300])
def test_a_slider_in_sight_has_its_caption_and_the_bar_is_not_passed(bar, qapp, percent, width):
    apply_theme(qapp, "light", percent)
    bar.set_theme(LIGHT)
    bar.resize(width, bar.sizeHint().height())
    for _ in range(3):
        qapp.processEvents()
    for sliding in bar._controls:
        if sliding.isVisible():
            assert sliding.caption.isVisible()
            assert sliding.caption.width() >= sliding.caption.sizeHint().width()
            assert sliding.x() + sliding.width() <= width
    assert bar.pause.isVisible()
    assert bar.name.width() >= bar.name.sizeHint().width()


def test_in_a_wide_bar_captions_stand_beside_and_in_a_narrow_one_above(bar, qapp):
    bar.resize(900, 60)
    qapp.processEvents()
    assert bar.phase.parentWidget().caption.x() < bar.phase.x()
    bar.resize(460, 60)
    qapp.processEvents()
    assert bar.phase.parentWidget().caption.y() < bar.phase.y()
    bar.resize(290, 60)
    qapp.processEvents()
    assert bar.phase.isVisible()
    assert not bar.amplitude.isVisible()


def test_the_button_grows_with_the_text(bar, qapp):
    small = bar.pause.iconSize().width()
    apply_theme(qapp, "light", 200)
    bar.set_theme(LIGHT)
    assert bar.pause.iconSize().width() == pytest.approx(2 * small, abs=1)

import math

import pytest
from conftest import settle

from modalview.model.parts import Damper, End
from modalview.model.values import Value
from modalview.ui.swing import SWING_S, Swing
from modalview.units.quantities import DAMPING


class Clock:
    now = 10.0

    def __call__(self) -> float:
        return self.now


@pytest.fixture
def clock():
    return Clock()


def test_it_stands_at_the_largest_motion_until_it_runs(clock):
    swing = Swing(clock=clock)
    clock.now += 1
    assert swing.factor(0.6) == 0.6
    swing.run(True)
    clock.now += SWING_S / 4
    assert swing.factor(0.6) == pytest.approx(0.6j)


def test_a_change_of_speed_does_not_jump(clock):
    swing = Swing(clock=clock)
    swing.run(True)
    clock.now += SWING_S / 4
    swing.set_speed(2.0)
    assert swing.phase == pytest.approx(math.pi / 2)
    clock.now += SWING_S / 4
    assert swing.phase == pytest.approx(1.5 * math.pi)


def test_what_dies_away_falls_within_one_turn(clock):
    swing = Swing(clock=clock)
    swing.run(True)
    sizes = []
    for _ in range(4):
        sizes.append(swing.fading())
        clock.now += SWING_S / 5
    assert sizes[0] == 1.0
    assert sizes == sorted(sizes, reverse=True)


def test_moving_the_phase_pauses_and_the_frozen_sheet_follows(pump):
    pump.on_move(True)
    pump.play_bar.phase.setValue(90)
    assert not pump.swing.running
    assert pump.swing.phase == pytest.approx(math.pi / 2)
    at_rest = pump.sheet.moving_drawing()
    pump.play_bar.phase.setValue(180)
    other_way = pump.sheet.moving_drawing()
    assert len(at_rest.items) == len(other_way.items)
    assert at_rest.items[0].segments.tolist() != other_way.items[0].segments.tolist()


def test_keys_move_the_phase_and_the_speed(pump):
    pump.menus.actions["on_phase_on"].trigger()
    assert pump.swing.phase == pytest.approx(math.pi / 12)
    assert pump.play_bar.phase.value() == 15
    pump.menus.actions["on_phase_back"].trigger()
    assert pump.swing.phase == pytest.approx(0.0)
    pump.menus.actions["on_faster"].trigger()
    assert pump.play_bar.speed.value() == 5
    pump.menus.actions["on_slower"].trigger()


def test_dashpots_add_a_row_of_damped_modes_that_move_with_their_phase(pump, qtbot):
    assert not pump.below.tabs.isTabVisible(1)
    model = pump.document.model
    dashpot = Damper(
        id="c1",
        from_=End(body="motor"),
        to=End(body="base"),
        damping=Value.typed("200 kN s/m", DAMPING),
    )
    pump.document.replace_model(type(model)(**{**fields_of(model), "links": (*model.links, dashpot)}))
    settle(qtbot, pump)
    qtbot.waitUntil(lambda: pump.analysis.damped_current, timeout=5000)
    assert pump.below.tabs.isTabVisible(1)
    pump.below.show_page("damped")
    mode = pump.sheet.mode
    assert mode.damping_ratio > 0
    assert pump.play_bar.name.text().startswith("mode 1 ")
    pump.swing.put(math.pi / 2)  # a natural mode would be at rest here; parts out of step are not
    points = pump.sheet._geometry.points.rest
    moved = pump.sheet._posed.steps.imag
    assert points.shape == moved.shape
    assert abs(moved).max() > 0
    pump.below.show_page("modes")
    assert not hasattr(pump.sheet.mode, "root")


def fields_of(model):
    return {name: getattr(model, name) for name in model.__dataclass_fields__}


def test_the_complex_plane_has_a_content_for_every_model(pump, qtbot):
    qtbot.waitUntil(lambda: pump.analysis.plane is not None, timeout=5000)
    pump.on_go_to_plane()
    assert pump.below.current() == "plane"
    assert not pump.plane.canvas.grab().isNull()

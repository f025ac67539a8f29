"""The modes before a change that is tried stand pale on the scale, with how far each has gone."""

from modalview.drawing.primitives import Lines, Role
from modalview.drawing.scale import axis_range, scale_drawing
from modalview.drawing.scalecontent import ScaleContent, ScaleMode

NOW = (ScaleMode(1, 65.3, 60.0, 70.0), ScaleMode(2, 141.0, 132.0, 150.0))
BEFORE = (ScaleMode(1, 51.3, 51.3, 51.3), ScaleMode(2, 141.0, 141.0, 141.0))


def pale(content):
    scale = scale_drawing(content, 300.0, 600.0)
    return scale, [one for one in scale.drawing.items if isinstance(one, Lines) and one.role is Role.MUTED]


def test_old_modes_are_pale_ticks_and_those_that_went_have_an_arrow():
    scale, (ticks, arrows) = pale(ScaleContent(modes=NOW, before=BEFORE))
    assert ticks.opacity < 1
    assert [line[1] for line in ticks.segments.tolist()] == [scale.axis.y_of(one.hz) for one in BEFORE]
    shaft = arrows.segments[0]
    assert (shaft[1], shaft[3]) == (scale.axis.y_of(51.3), scale.axis.y_of(65.3))
    assert len(arrows.segments) == 3  # one arrow: the second mode has stayed


def test_the_axis_holds_them_and_without_them_nothing_is_pale():
    assert axis_range(ScaleContent(modes=NOW, before=BEFORE))[0] < 51.3
    assert pale(ScaleContent(modes=NOW))[1] == []

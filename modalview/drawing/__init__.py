"""Lines, hatches and texts of sheet, mode picture and frequency scale.

Everything but ``paint`` and ``picture`` is free of Qt: a picture is a ``primitives.Drawing``, a tuple of
items in pixels (x right, y down) whose colours are roles. ``paint.paint(painter, drawing, palette)`` paints.

The sheet, in ``sheet``, built once per model and window size:

    geometry = sheet_geometry(model, width, height, text_scale=1.0, view=None)  # view: None fits the model
    # viewpoint=Viewpoint.FRONT, SIDE, TOP: a space model along one of its axes; geometry.view keeps it
    sheet_drawing(geometry, title_lines(model))  # at rest, with grid, labels, title block
    part_at(geometry, x, y)                         # id of the body, link or support under a point, or None
    geometry.view.panned(dx, dy), .zoomed(factor, x, y)  # for the next sheet_geometry

The sheet in motion, in ``motion``; a frame recomputes arrays and lays out no text:

    posed = pose(geometry, found_mode.motion)       # once per mode
    still_drawing(geometry, title)                  # what does not move, ghost included: cache as a pixmap
    frame(geometry, posed, factor)                  # factor -1..1 times the amplitude; every frame
    frozen(geometry, posed, factor)                 # a frame with arrows, and parts that stand still marked
    moved(geometry, motion, amplitude, phase, title)  # all of it in one drawing, for pictures

The frequency scale, in ``scale`` (its content, in ``scalecontent``, from the study's results):

    content = scale_content(outlook, solution=None)
    scale = scale_drawing(content, width, height, text_scale=1.0, discs=True)
    scale.drawing; scale.axis.y_of(hz); scale.axis.hz_at(y)

A small picture of a mode, in ``modepicture``:

    small = mode_geometry(model, width, height)     # once per model
    mode_picture(small, pose(small, motion), factor)

The complex plane (without dashpots the axis of lambda), in ``complexplane``, ``lambdaaxis`` and ``legend``:

    content = plane_content(outlook, solution=None, damped=None)  # in complexplanecontent
    plane_drawing(content, width, height, text_scale=1.0)

A file, in ``picture``: ``save_picture(drawing, path, width, height, palette.LIGHT)``.
"""

"""The moving picture of a drawing: what stands in the file, and that the film shows the drawing made."""

import struct
import zlib

import pytest
from PySide6.QtCore import QRect
from PySide6.QtGui import QColor, QImage

from modalview.ui import film
from modalview.ui.apng import SIGNATURE, Frame, moving_png
from modalview.ui.filming import changed

RED, BLUE = b"\xff\x00\x00", b"\x00\x00\xff"


def chunks(data):
    """Return name and content of each chunk, its check sum held against the content."""
    assert data.startswith(SIGNATURE)
    at, found = len(SIGNATURE), []
    while at < len(data):
        (length,) = struct.unpack(">I", data[at : at + 4])
        body = data[at + 4 : at + 8 + length]
        assert struct.unpack(">I", data[at + 8 + length : at + 12 + length]) == (zlib.crc32(body),)
        found.append((body[:4], body[4:]))
        at += 12 + length
    return found


def two_frames():
    return Frame(3, 2, RED * 6, duration_ms=500), Frame(1, 2, BLUE * 2, x=2, duration_ms=250)


def test_a_moving_picture_holds_its_frames_in_order():
    found = chunks(moving_png(two_frames()))
    assert [name for name, _ in found] == [b"IHDR", b"acTL", b"fcTL", b"IDAT", b"fcTL", b"fdAT", b"IEND"]
    assert struct.unpack(">II", found[1][1]) == (2, 0)  # two frames, without end
    first, second = (struct.unpack(">5I2H2B", content) for name, content in found if name == b"fcTL")
    assert first == (0, 3, 2, 0, 0, 500, 1000, 0, 0)
    assert second == (1, 1, 2, 2, 0, 250, 1000, 0, 0)
    assert struct.unpack(">I", found[5][1][:4]) == (2,)
    assert zlib.decompress(found[5][1][4:]) == b"\0" + BLUE + b"\0" + BLUE


def test_who_knows_still_pictures_only_sees_the_first_frame():
    image = QImage.fromData(moving_png(two_frames()), "PNG")
    assert (image.width(), image.height()) == (3, 2)
    assert image.pixelColor(2, 1) == QColor("red")


@pytest.mark.parametrize(
    ("frames", "why"),
    [
        ((), "at least one frame"),
        ((Frame(1, 1, RED), Frame(1, 1, RED, x=1)), "frame 2 does not lie inside"),
        ((Frame(1, 2, RED),), "frame 1 has not three bytes"),
    ],
)
def test_what_is_no_picture_is_refused(frames, why):
    with pytest.raises(ValueError, match=why):
        moving_png(frames)


def test_the_area_that_changed_is_as_small_as_can_be():
    before = QImage(7, 5, QImage.Format.Format_RGB888)
    before.fill(QColor("white"))
    after = before.copy()
    assert changed(before, after).isEmpty()
    after.setPixelColor(2, 1, QColor("black"))
    after.setPixelColor(5, 3, QColor("#fffffe"))
    assert changed(before, after) == QRect(2, 1, 4, 3)
    after.setPixelColor(0, 0, QColor("black"))
    after.setPixelColor(6, 4, QColor("black"))
    assert changed(before, after) == after.rect()


@pytest.mark.slow
def test_the_film_shows_every_step_and_stays_below_two_megabytes(tmp_path, qapp):
    del qapp
    out = tmp_path / "drawing.png"
    assert film.main(["-o", str(out), "--stills", str(tmp_path / "stills")]) == 0
    data = out.read_bytes()
    assert len(data) < 2_000_000
    frames = sum(name == b"fcTL" for name, _ in chunks(data))
    assert 30 < frames <= len(list((tmp_path / "stills").iterdir()))


def test_a_film_that_cannot_be_written_is_told(tmp_path, capsys, monkeypatch):
    monkeypatch.setattr("modalview.ui.filming.draw_pump", lambda filmed: filmed.say("nothing", 10))
    assert film.main(["-o", str(tmp_path / "no" / "drawing.png")]) == 2
    assert "cannot be written" in capsys.readouterr().err

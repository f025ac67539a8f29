import pytest
from PySide6.QtCore import QSettings

from modalview.ui import settings as names
from modalview.ui.settings import ALL, Settings


@pytest.fixture
def store(tmp_path):
    return QSettings(str(tmp_path / "kept.ini"), QSettings.Format.IniFormat)


@pytest.mark.parametrize("setting", ALL, ids=lambda one: one.name)
def test_a_setting_never_kept_has_its_default(store, setting):
    assert Settings(store).get(setting) == setting.default


@pytest.mark.parametrize(
    ("setting", "value"),
    [
        (names.AUTOMATIC, False),
        (names.THEME, "dark"),
        (names.TEXT_SIZE, 150),
        (names.RECENT, ["one.keepclear"]),
        (names.RECENT, ["one.keepclear", "two.keepclear"]),
    ],
)
def test_what_is_kept_is_read_again_from_the_disk(tmp_path, setting, value):
    path = str(tmp_path / "kept.ini")
    first = QSettings(path, QSettings.Format.IniFormat)
    Settings(first).set(setting, value)
    first.sync()
    assert Settings(QSettings(path, QSettings.Format.IniFormat)).get(setting) == value


def test_a_kept_value_that_no_longer_fits_counts_as_the_default(store):
    store.setValue("theme", "purple")
    store.setValue("text_percent", "large")
    assert Settings(store).get(names.THEME) == "system"
    assert Settings(store).get(names.TEXT_SIZE) == 100


def test_a_value_that_is_not_allowed_is_refused(store):
    with pytest.raises(ValueError, match="purple"):
        Settings(store).set(names.THEME, "purple")

import pytest
from PySide6.QtCore import QSettings, Qt
from PySide6.QtWidgets import QLabel, QPushButton

from modalview.ui import settings as names
from modalview.ui.settings import ALL, ASKED, Settings, settings_text
from modalview.ui.settingsdialog import SettingsDialog


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


@pytest.mark.parametrize("setting", ALL, ids=lambda one: one.name)
def test_every_default_is_allowed_and_explained(setting):
    assert setting.allows(setting.default)
    assert setting.text.endswith(".")


def test_numbers_beyond_their_ends_count_as_the_default(store):
    store.setValue("amplitude_percent", 400)
    assert Settings(store).get(names.AMPLITUDE) == 60
    with pytest.raises(ValueError, match="amplitude_percent"):
        Settings(store).set(names.AMPLITUDE, 101)


def test_dialog_and_help_are_made_from_the_table(qtbot, store):
    chosen = []
    dialog = SettingsDialog(Settings(store), lambda setting, value: chosen.append((setting.name, value)))
    qtbot.addWidget(dialog)
    assert list(dialog.fields) == [setting.name for setting in ASKED]
    dialog.fields["theme"].setCurrentIndex(2)
    dialog.fields["show_discs"].setChecked(False)
    assert chosen == [("theme", "dark"), ("show_discs", False)]
    dialog._go_back()
    assert chosen[2:] == [("theme", "system"), ("show_discs", True)]
    assert all(setting.text in settings_text() for setting in ASKED)
    dialog.close()


def test_units_are_shown_as_chosen_and_what_was_typed_stays(pump):
    pump.on_setting(names.UNITS, "inch-pound")
    lines = pump.parts.lines
    row = next(n for n, one in enumerate(lines.rows) if (one.part, one.what) == ("motor", "mass"))
    assert (lines.rows[row].text, lines.rows[row].converted) == ("620 kg", "1366.9 lb")
    pump.on_setting(names.UNITS, "mm-t")
    assert lines.rows[row].converted == "0.62 t"
    assert lines.headerData(3, Qt.Orientation.Horizontal) == "In mm and t"


def test_reduced_motion_keeps_modes_still_until_play_is_pressed(pump):
    pump.on_setting(names.MOVE, True)
    pump.on_setting(names.MOTION, "on")
    assert not pump.swing.running
    pump.on_setting(names.MOTION, "off")
    assert pump.swing.running
    pump.on_setting(names.MOTION, "on")
    pump.play_bar.pause.setChecked(False)
    assert pump.swing.running
    pump.on_move(False)


def test_the_settings_grow_with_the_text_and_cut_nothing(window, qapp):
    window.on_settings()
    (dialog,) = window.findChildren(SettingsDialog)
    for _ in range(3):
        qapp.processEvents()
    small = dialog.width()
    field = dialog.fields["text_percent"]
    field.setCurrentIndex(field.findData(200))
    for _ in range(5):
        qapp.processEvents()
    assert dialog.width() > 1.4 * small
    for label in dialog.form.findChildren(QLabel):
        assert label.width() >= label.minimumSizeHint().width()
        assert label.height() >= label.heightForWidth(label.width()) or not label.wordWrap()
    dialog.close()


def test_enter_in_the_settings_does_not_put_them_back(window, qapp):
    window.on_settings()
    (dialog,) = window.findChildren(SettingsDialog)
    qapp.processEvents()
    assert [one.text() for one in dialog.findChildren(QPushButton) if one.isDefault()] in (
        [],
        ["Close"],
        ["&Close"],
    )
    dialog.close()

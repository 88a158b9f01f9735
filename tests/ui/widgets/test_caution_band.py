"""Cautions: a gate stays until it is ticked, one at a time; nothing is hidden for good."""

import pytest
from PySide6.QtCore import QSettings

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.cautions import CAUTIONS, cautions_for
from kitplanner.session.document import PlanDocument
from kitplanner.session.gates import Gates
from kitplanner.session.settings import AppSettings
from kitplanner.ui.widgets.caution_band import CautionBand


@pytest.fixture
def band(qtbot, tmp_path):
    document = PlanDocument(new_plan("camp"))
    settings = AppSettings(QSettings(str(tmp_path / "s.ini"), QSettings.Format.IniFormat))
    gates = Gates(document, settings)
    band = CautionBand(gates)
    qtbot.addWidget(band)
    band.gates, band.document = gates, document
    band.show_cautions(cautions_for(document.plan, "people"))
    return band


def ids(band):
    return [note.caution for note in band.notes()]


def test_gates_stand_one_after_the_other_until_they_are_ticked(band):
    assert ids(band) == ["C1"]
    assert CAUTIONS["C1"].text in band.notes()[0].text
    band.notes()[0].box().click()
    assert band.gates.is_acknowledged("C1")
    assert ids(band) == ["C6"]
    band.notes()[0].box().click()
    assert ids(band) == []
    assert not band.isHidden()


def test_the_others_are_named_and_one_key_away(band):
    assert "Over-exertion" in band.button().accessibleName()
    band.button().click()
    assert set(ids(band)) == {"C1", "C6", "C5"}
    band.button().click()
    assert ids(band) == ["C1"]


def test_a_tick_can_be_taken_back(band):
    band.notes()[0].box().click()
    band.button().click()
    note = next(note for note in band.notes() if note.caution == "C1")
    assert note.box().isChecked()
    note.box().click()
    assert not band.gates.is_acknowledged("C1")


def test_the_box_says_the_caution_to_a_screen_reader(band):
    assert CAUTIONS["C1"].text in band.notes()[0].box().accessibleDescription()


def test_a_place_without_cautions_takes_no_room(band):
    band.show_cautions(())
    assert band.isHidden()

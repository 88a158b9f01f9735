"""Acknowledged cautions follow the file of a plan, not its content."""

import pytest
from PySide6.QtCore import QSettings

from kitplanner.plan.records import Plan
from kitplanner.session.document import PlanDocument
from kitplanner.session.gates import Gates
from kitplanner.session.settings import AppSettings


@pytest.fixture
def desk(qapp, tmp_path):
    document = PlanDocument(Plan(title="Hut"))
    settings = AppSettings(QSettings(str(tmp_path / "s.ini"), QSettings.Format.IniFormat))
    yield document, settings, Gates(document, settings)
    document.close()


def test_a_tick_stays_until_it_is_taken_back(desk):
    _, _, gates = desk
    changes = []
    gates.changed.connect(lambda: changes.append(1))
    gates.acknowledge("C1")
    gates.acknowledge("C1")
    assert gates.is_acknowledged("C1")
    gates.acknowledge("C1", done=False)
    assert not gates.is_acknowledged("C1")
    assert len(changes) == 2


def test_ticks_of_a_new_plan_go_with_it_into_its_file(desk, tmp_path):
    document, settings, gates = desk
    gates.acknowledge("C1")
    document.save_as(tmp_path / "a.kitplan")
    assert settings.acknowledged(tmp_path / "a.kitplan") == {"C1"}
    gates.acknowledge("C4")
    assert settings.acknowledged(tmp_path / "a.kitplan") == {"C1", "C4"}


def test_another_plan_asks_again_and_the_first_remembers(desk, tmp_path):
    document, _, gates = desk
    gates.acknowledge("C1")
    document.save_as(tmp_path / "a.kitplan")
    document.new_plan(Plan(title="Other"))
    assert not gates.is_acknowledged("C1")
    document.open_file(tmp_path / "a.kitplan")
    assert gates.is_acknowledged("C1")


def test_a_copy_under_another_name_keeps_the_ticks_of_both(desk, tmp_path):
    document, settings, gates = desk
    document.save_as(tmp_path / "a.kitplan")
    gates.acknowledge("C1")
    document.save_as(tmp_path / "b.kitplan")
    gates.acknowledge("C8")
    assert settings.acknowledged(tmp_path / "a.kitplan") == {"C1"}
    assert settings.acknowledged(tmp_path / "b.kitplan") == {"C1", "C8"}

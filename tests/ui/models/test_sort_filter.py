"""Rows in another order, or only some of them; the plan stays as it is."""

import pytest
from PySide6.QtCore import Qt

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.edits_many import sort_section
from kitplanner.plan.fields import FIELDS
from kitplanner.session.document import PlanDocument
from kitplanner.session.editing import Editing
from kitplanner.ui.models.records_model import PATH_ROLE, RecordsModel
from kitplanner.ui.models.sort_filter import SortFilter

COLUMNS = tuple(spec for spec in FIELDS["person"] if spec.column)
AGE = next(place for place, spec in enumerate(COLUMNS) if spec.key == "age")
FALLING = Qt.SortOrder.DescendingOrder


class Desk:
    def __init__(self):
        self.document = PlanDocument(new_plan("camp"))
        self.editing = Editing(self.document)
        self.model = RecordsModel(("people",), COLUMNS, self.editing)
        self.view = SortFilter(self.model, "people", self.editing)
        self.model.set_records(self.document.plan.people)
        self.document.plan_changed.connect(lambda _before, after: self.model.set_records(after.people))

    @property
    def plan_ids(self):
        return tuple(person.id for person in self.document.plan.people)


@pytest.fixture
def desk(qapp):
    return Desk()


def test_the_model_keeps_its_promises(desk, qtmodeltester):
    qtmodeltester.check(desk.view, force_py=True)


@pytest.mark.parametrize("falling", [False, True])
def test_the_order_shown_is_the_order_the_edit_gives(desk, falling):
    before = desk.plan_ids
    desk.view.sort(AGE, FALLING if falling else Qt.SortOrder.AscendingOrder)
    wanted = sort_section("people", "age", descending=falling)(desk.document.plan)
    assert desk.view.ids() == tuple(person.id for person in wanted.people)
    assert desk.plan_ids == before
    assert desk.view.sorted_by == ("age", falling)
    desk.view.sort(-1)
    assert desk.view.ids() == before
    assert desk.view.is_plan


def test_a_row_stays_in_place_while_it_is_edited_even_where_it_no_longer_fits(desk):
    desk.view.set_filter("quorin")
    assert desk.view.rowCount() == 1
    row_id = desk.view.id_at(0)
    assert desk.view.setData(desk.view.index(0, 0), "Zelda")
    assert desk.view.ids() == (row_id,)
    assert desk.view.index(0, 0).data() == "Zelda"
    desk.view.set_filter("")
    desk.view.sort(AGE)
    before = desk.view.ids()
    assert desk.view.setData(desk.view.index(0, AGE), "99")
    assert desk.view.ids() == before


def test_the_filter_looks_into_every_column_and_says_where_rows_are(desk):
    desk.view.set_filter("  QUORIN ")
    assert desk.view.filter_text == "QUORIN"
    assert desk.view.row_of(desk.view.id_at(0)) == 0
    others = [one for one in desk.plan_ids if one != desk.view.id_at(0)]
    assert all(desk.view.row_of(one) == -1 for one in others)
    assert desk.view.row_of("nobody") == -1
    assert desk.view.id_at(99) == ""


def test_cells_know_their_fields(desk):
    desk.view.sort(AGE, FALLING)
    index = desk.view.index(0, AGE)
    assert index.data(PATH_ROLE) == ("people", desk.view.id_at(0), "age") == desk.view.path_of(index)
    assert desk.view.spec_at(AGE).key == "age"


def test_new_records_come_last_in_a_sorted_view(desk):
    desk.view.sort(AGE)
    (added,) = desk.editing.add("people")
    assert desk.view.ids()[-1] == added
    assert set(desk.view.ids()) == set(desk.plan_ids)
    desk.view.sort(-1)
    assert desk.view.ids() == desk.plan_ids

"""Hand edits of a rota: one change each, everything else the same objects, nothing judged."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan import edits_rota as er
from kitplanner.plan.codec import decode, encode
from kitplanner.plan.edits import EditError
from kitplanner.plan.records import Bout, ChargeSpell, Person, Plan, Rota, Station


def bout(key, start, end, person, **more):
    return Bout(id=key, day=more.pop("day", 1), start=start, end=end, station="s", person=person, **more)


@pytest.fixture
def plan():
    return Plan(
        days=2,
        people=tuple(Person(id=key, name=key.upper()) for key in ("p", "q", "r")),
        stations=(Station(id="s", name="Crank", count=2), Station(id="t", name="Stand")),
        rota=Rota(
            id="rota",
            edition=3,
            bouts=(
                bout("b1", "09:00", "09:20", "p", watcher="r"),
                bout("b2", "10:00", "10:15", "q"),
                bout("b3", "11:00", "11:20", "p"),
            ),
        ),
    )


def only(plan, key):
    return er.bout_of(plan, key)


def test_a_move_keeps_the_length_and_the_other_records(plan):
    moved = er.move_bout("b1", 2, 615)(plan)
    assert (only(moved, "b1").day, only(moved, "b1").start, only(moved, "b1").end) == (2, "10:15", "10:35")
    assert only(moved, "b2") is only(plan, "b2")
    assert moved.people is plan.people
    assert [each.id for each in moved.rota.bouts] == ["b2", "b3", "b1"]


def test_a_move_to_where_it_stands_changes_nothing(plan):
    assert er.move_bout("b1", 1, 540)(plan) is plan


@pytest.mark.parametrize(("day", "start"), [(0, 540), (3, 540), (1, -5), (1, 1421)])
def test_a_move_out_of_the_plan_is_refused(plan, day, start):
    with pytest.raises(EditError, match=r"stay within|other times"):
        er.move_bout("b1", day, start)(plan)


def test_a_turn_may_end_at_midnight(plan):
    assert only(er.move_bout("b1", 1, 1420)(plan), "b1").end == "24:00"


def test_resize_and_its_refusal(plan):
    assert only(er.resize_bout("b1", 535, 575)(plan), "b1").end == "09:35"
    with pytest.raises(EditError, match="starts before it ends"):
        er.resize_bout("b1", 560, 560)(plan)


def test_hand_over_keeps_time_and_watcher(plan):
    after = only(er.hand_over("b1", "q")(plan), "b1")
    assert (after.person, after.watcher, after.start) == ("q", "r", "09:00")


def test_a_watcher_who_takes_the_turn_no_longer_watches(plan):
    after = only(er.hand_over("b1", "r")(plan), "b1")
    assert (after.person, after.watcher) == ("r", None)


def test_hand_over_to_nobody_known_is_refused(plan):
    with pytest.raises(EditError):
        er.hand_over("b1", "nobody")(plan)


def test_two_people_swap(plan):
    after = er.swap_people("b1", "b2")(plan)
    assert (only(after, "b1").person, only(after, "b2").person) == ("q", "p")
    assert er.swap_people("b1", "b2")(after) == plan


def test_one_person_cannot_swap_with_themselves(plan):
    with pytest.raises(EditError, match="same person"):
        er.swap_people("b1", "b3")(plan)


def test_watcher_place_lock(plan):
    assert only(er.set_watcher("b2", "r")(plan), "b2").watcher == "r"
    assert only(er.set_watcher("b1", None)(plan), "b1").watcher is None
    placed = only(er.place_bout("b1", "s", 2)(plan), "b1")
    assert (placed.station, placed.unit) == ("s", 2)
    with pytest.raises(EditError, match="no unit 2 of 1"):
        er.place_bout("b1", "t", 2)(plan)
    assert only(er.lock_bout("b1", True)(plan), "b1").locked
    assert er.lock_bout("b1", False)(plan) is plan


def test_add_and_remove(plan):
    key = er.new_bout_id(plan)
    new = bout(key, "08:00", "08:10", "q")
    added = er.add_bout(new)(plan)
    assert added.rota.bouts[0] == new
    assert er.remove_bout(key)(added) == plan
    with pytest.raises(EditError, match="taken"):
        er.add_bout(bout("b1", "08:00", "08:10", "q"))(plan)
    with pytest.raises(EditError, match="no such turn"):
        er.remove_bout("none")(plan)


def test_the_first_turn_makes_a_rota(plan):
    bare = structs.replace(plan, rota=None)
    made = er.add_bout(bout(er.new_bout_id(bare), "08:00", "08:10", "q"))(bare).rota
    assert (made.state, made.edition, made.valid_until_day, len(made.bouts)) == ("draft", 1, 2, 1)
    with pytest.raises(EditError, match="no rota yet"):
        er.remove_bout("b1")(bare)


def test_replace_takes_all_values(plan):
    new = Bout(id="b2", day=2, start="12:00", end="12:10", station="t", person="r", watcher="q", locked=True)
    assert only(er.replace_bout(new)(plan), "b2") == new


def test_posting_and_what_follows(plan):
    posted = er.post_rota(1)(plan).rota
    assert (posted.state, posted.edition, posted.valid_until_day) == ("posted", 3, 1)
    wall = er.post_rota(2)(plan)
    again = er.post_rota(2)(wall).rota
    assert (again.state, again.edition) == ("posted", 4)
    changed = er.move_bout("b1", 1, 600)(wall).rota
    assert (changed.state, changed.edition) == ("draft", 4)
    assert er.lock_bout("b1", True)(wall).rota.state == "posted"
    with pytest.raises(EditError, match="day 3"):
        er.post_rota(3)(plan)


def test_charging_is_put_beside_the_turns(plan):
    spell = ChargeSpell(id="c1", day=1, start="09:00", end="10:00", device="d", energy_wh=3.0)
    assert er.put_charging((spell,))(plan).rota.charging == (spell,)
    assert er.put_charging(())(plan) is plan


@given(
    st.lists(
        st.tuples(st.sampled_from(["move", "size", "hand", "lock", "unlock", "remove"]), st.integers(0, 2),
                  st.integers(0, 1435), st.integers(1, 2)),
        max_size=12,
    )
)  # fmt: skip
def test_any_chain_of_edits_leaves_a_plan_that_a_file_holds(steps):
    keys = ["b1", "b2", "b3"]
    plan = Plan(
        days=2,
        people=tuple(Person(id=key, name=key) for key in ("p", "q", "r")),
        stations=(Station(id="s", name="Crank"),),
        rota=Rota(id="rota", bouts=tuple(bout(key, "09:00", "09:20", "p") for key in keys)),
    )
    for kind, place, minute, day in steps:
        key = keys[place]
        edit = {
            "move": er.move_bout(key, day, minute),
            "size": er.resize_bout(key, minute, minute + 5),
            "hand": er.hand_over(key, "pqr"[place]),
            "lock": er.lock_bout(key, True),
            "unlock": er.lock_bout(key, False),
            "remove": er.remove_bout(key),
        }[kind]
        before = plan
        try:
            plan = edit(plan)
        except EditError:
            assert plan is before
    assert decode(encode(plan)) == plan
    assert list(plan.rota.bouts) == sorted(plan.rota.bouts, key=lambda b: (b.day, b.start, b.station, b.unit, b.id))

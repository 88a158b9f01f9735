"""Texts that are not valid yet stay exactly as typed."""

from kitplanner.session.drafts import Drafts


def test_a_draft_is_kept_as_typed_and_dropped():
    drafts = Drafts()
    drafts.keep(("people", "M1", "age"), " 4O ", "Age is not a number")
    assert drafts.get(("people", "M1", "age")).text == " 4O "
    drafts.drop(("people", "M1", "age"))
    drafts.drop(("people", "M1", "age"))
    assert len(drafts) == 0


def test_drafts_of_a_removed_record_go_with_it():
    drafts = Drafts()
    drafts.keep(("stations", "A", "count"), "x", "")
    drafts.keep(("stations", "A", "stages", "s1", "series"), "x", "")
    drafts.keep(("stations", "AB", "count"), "x", "")
    assert len(drafts.below(("stations", "A"))) == 2
    drafts.drop_below(("stations", "A"))
    assert [path for path, _ in drafts.below(())] == [("stations", "AB", "count")]
    drafts.clear()
    assert len(drafts) == 0

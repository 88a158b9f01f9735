"""Tables read and looked at, at once or as a job."""

import pytest

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.exchange import ExchangeError, TableChoices
from kitplanner.session.exchange_run import FEW_CELLS, Source, look, looking


def test_text_is_read_and_looked_at():
    looked = look(new_plan("camp"), "people", Source("Name\tAge\nAda\t40"), TableChoices())
    assert looked.preview.count("new") == 1
    assert looked.table.rows[1] == ("Ada", "40")


def test_a_table_at_hand_is_not_read_again(tmp_path):
    path = tmp_path / "people.csv"
    path.write_text("Name;Age\nAda;40\n")
    first = look(new_plan("camp"), "people", Source(path=path), TableChoices())
    path.unlink()
    again = look(new_plan("camp"), "people", first.source, TableChoices(header=False), first.table)
    assert not again.preview.header


def test_the_job_says_the_same(tmp_path):
    path = tmp_path / "people.csv"
    path.write_text("Name;Age\nAda;40\n")
    plan = new_plan("camp")
    assert looking(plan, "people", Source(path=path), TableChoices())(object()) == look(
        plan, "people", Source(path=path), TableChoices()
    )


def test_a_missing_file_is_one_sentence(tmp_path):
    with pytest.raises(ExchangeError, match=r"gone\.csv"):
        look(new_plan("camp"), "people", Source(path=tmp_path / "gone.csv"), TableChoices())


def test_files_and_long_texts_are_not_quick(tmp_path):
    assert Source("Name\tAge").is_quick
    assert not Source(path=tmp_path / "x.csv").is_quick
    assert not Source("x" * (FEW_CELLS * 10 + 1)).is_quick

"""A coordinator in a camp: one more person, another limit, undone again, a rota adopted, the effort table on paper."""

from __future__ import annotations

from pathlib import Path

from pypdf import PdfReader

from kitplanner.plan.catalogue import new_plan
from kitplanner.plan.files import read_plan
from kitplanner.planners.effort import effort
from kitplanner.planners.rota.check import judge

NAME = "Maren Test"
CAP = "Most a day"


def begun(walker) -> None:
    walker.until(lambda: not walker.parts("Button", "Camp example"), "the start to close")
    walker.find("ListItem", "People, 24 records")


def wait_for_cap(walker, text: str) -> None:
    walker.until(lambda: walker.find("EditableText", CAP).value == text, f"{text!r} minutes at most")


def wait_for_rota(walker) -> None:
    walker.find("Button", "Adopt", enabled=True)


def wait_for_adopted(walker) -> None:
    walker.find("Button", "Post", enabled=True)


def check(walker, saved: Path, paper: Path) -> None:
    """The plan has one person more with the limit as before, and a rota; the paper lists what can be charged."""
    walker.until(saved.exists, "the saved plan")
    plan, before = read_plan(saved), new_plan("camp")
    assert len(plan.people) == len(before.people) + 1
    added = plan.people[-1]
    assert (added.name, added.cap_min) == (NAME, None)
    assert plan.rota is not None
    assert plan.rota.bouts
    assert judge(plan, plan.rota) == ()
    charged = {row.device for row in effort(plan).rows}
    text = " ".join(" ".join(page.extract_text() for page in PdfReader(paper).pages).split())
    assert len(charged) > 5
    assert [one.name for one in plan.devices if one.id in charged and one.name not in text] == []


def test_with_the_mouse(walker, tmp_path):
    saved, paper = tmp_path / "camp.kitplan", tmp_path / "effort.pdf"
    walker.click(walker.find("Button", "Camp example"))
    begun(walker)
    walker.click(walker.find("ListItem", "People, 24 records"))
    walker.click(walker.find("Button", "Add: person"))
    walker.find("EditableText", "Name", focused=True)
    walker.type(NAME)
    walker.key("Return")
    walker.find("ListItem", "People, 25 records")
    field = walker.reveal("EditableText", CAP, walker.find("Client", "Details"))
    walker.click(field)
    walker.type("20")
    walker.key("Return")
    wait_for_cap(walker, "20")
    walker.click(walker.find("MenuItem", "Edit"))
    walker.click(walker.find("MenuItem", "Undo"))
    wait_for_cap(walker, "")
    walker.click(walker.find("PageTab", "Rota"))
    walker.click(walker.find("Button", "Plan the rota", enabled=True))
    wait_for_rota(walker)
    walker.click(walker.find("Button", "Adopt"))
    wait_for_adopted(walker)
    walker.click(walker.find("MenuItem", "File"))
    walker.click(walker.find("MenuItem", "Effort table as PDF…"))
    walker.find("Dialog", "Save as PDF")
    walker.type(str(paper))
    walker.key("Return")
    walker.until(lambda: not walker.parts("Dialog", "Save as PDF"), "the paper")
    walker.click(walker.find("MenuItem", "File"))
    walker.click(walker.find("MenuItem", "Save"))
    walker.find("Dialog", "Save the plan as")
    walker.type(str(saved))
    walker.key("Return")
    check(walker, saved, paper)
    walker.tell("camp, mouse")
    walker.leave()


def test_by_keyboard_alone(walker, tmp_path):
    saved, paper = tmp_path / "camp.kitplan", tmp_path / "effort.pdf"
    walker.key("alt+p")
    begun(walker)
    walker.key("ctrl+2", "ctrl+shift+n")
    walker.until(lambda: walker.focus().name == "Name", "the name of the new person")
    walker.type(NAME)
    walker.key("Return")
    walker.find("ListItem", "People, 25 records")
    walker.tab_to("EditableText", CAP)
    walker.type("20")
    walker.key("Return")
    wait_for_cap(walker, "20")
    walker.key("ctrl+z")
    wait_for_cap(walker, "")
    walker.tab_to("PageTab", "Effort")
    walker.key("Right", "Right")
    walker.find("Button", "Plan the rota", enabled=True)
    walker.key("alt+p")
    wait_for_rota(walker)
    walker.key("alt+a")
    wait_for_adopted(walker)
    walker.key("ctrl+shift+p")
    walker.find("Dialog", "Save as PDF")
    walker.type(str(paper))
    walker.key("Return")
    walker.until(lambda: not walker.parts("Dialog", "Save as PDF"), "the paper")
    walker.key("ctrl+s")
    walker.find("Dialog", "Save the plan as")
    walker.type(str(saved))
    walker.key("Return")
    check(walker, saved, paper)
    walker.tell("camp, keyboard")
    walker.leave()

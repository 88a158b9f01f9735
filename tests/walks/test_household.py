"""A parent at a kitchen table: a plan from five questions, minutes for a phone, what an empty bank changes, saved."""

from __future__ import annotations

from kitplanner.plan.files import read_plan


def read_minutes(walker) -> None:
    """The minutes for one phone stand in the verdict strip."""
    walker.until(lambda: walker.texts("One full charge, Smartphone"), "the minutes of a phone")
    (sentence, *_) = walker.texts("One full charge, Smartphone")
    assert " min of turning (between " in sentence
    walker.find("StaticText", "Fits")


def check_saved(walker, path) -> None:
    walker.until(path.exists, "the saved plan")
    plan = read_plan(path)
    assert (plan.title, plan.days, len(plan.people)) == ("Household", 3, 3)
    assert (plan.devices[0].name, plan.devices[0].count) == ("Smartphone", 1)
    assert [store.start_fraction for store in plan.stores] == [0.1]


def test_with_the_mouse(walker, tmp_path):
    path = tmp_path / "home.kitplan"
    walker.key("Escape")
    walker.until(lambda: not walker.parts("Button", "Household"), "the start to close")
    walker.click(walker.find("MenuItem", "File"))
    walker.click(walker.find("MenuItem", "New…"))
    walker.click(walker.find("Button", "Household"))
    walker.find("SpinBox", "Days")
    walker.click(walker.find("Button", "Next question"))
    walker.click(walker.find("SpinBox", "aged 18 to 49"), 2)
    walker.type("3")
    walker.click(walker.find("Button", "Next question"))
    walker.click(walker.find("SpinBox", "Smartphone"), 2)
    walker.type("1")
    walker.click(walker.find("Button", "Next question"))
    walker.find("SpinBox", "Pedal stand")
    walker.click(walker.find("Button", "Next question"))
    walker.find("SpinBox", "Power bank 20 Ah")
    walker.click(walker.find("Button", "Make the plan now"))
    read_minutes(walker)
    walker.click(walker.find("ListItem", "Stores, 1 records"))
    walker.find("EditableText", "Charge at the start")
    field = walker.reveal("EditableText", "Charge at the start", walker.find("Client", "Details"))
    x, y, _, height = field["box"]
    field["box"] = [x, y, 24, height]
    walker.click(field, 2)
    walker.type("10")
    walker.key("Return")
    walker.find("StaticText", "Does not fit")
    walker.click(walker.find("MenuItem", "File"))
    walker.click(walker.find("MenuItem", "Save"))
    walker.find("Dialog", "Save the plan as")
    walker.type(str(path))
    walker.key("Return")
    check_saved(walker, path)
    walker.tell("household, mouse")
    walker.leave()


def test_by_keyboard_alone(walker, tmp_path):
    path = tmp_path / "home.kitplan"
    walker.key("Escape")
    walker.until(lambda: not walker.parts("Button", "Household"), "the start to close")
    walker.key("ctrl+n")
    walker.find("Button", "Household", focused=True)
    walker.key("Return")
    walker.find("SpinBox", "Days")
    walker.key("Return")
    walker.find("SpinBox", "aged 18 to 49")
    walker.type("3")
    walker.key("Return")
    walker.find("SpinBox", "Smartphone")
    walker.type("1")
    walker.key("Return")
    walker.find("SpinBox", "Pedal stand")
    walker.key("Return")
    walker.find("SpinBox", "Power bank 20 Ah")
    walker.key("Return")
    read_minutes(walker)
    walker.key("ctrl+4", "F6")
    walker.tab_to("EditableText", "Charge at the start")
    walker.type("10")
    walker.key("Return")
    walker.find("StaticText", "Does not fit")
    walker.key("ctrl+s")
    walker.find("Dialog", "Save the plan as")
    walker.type(str(path))
    walker.key("Return")
    check_saved(walker, path)
    walker.tell("household, keyboard")
    walker.leave()

"""Small boards for tests: one rota by hand, no solver."""

from __future__ import annotations

from kitplanner.plan.records import Block, Bout, ChargeSpell, Device, Group, Person, Plan, Rota, Station, Window
from kitplanner.planners.rota.check import judge
from kitplanner.ui.board.board_data import BoardData, placed_breaks, shown_bouts, shown_charges
from kitplanner.ui.board.board_hand import BoardHand
from kitplanner.ui.board.rota_board import RotaBoard

HOURS = (Window(start="08:00", end="20:00"),)


def small_plan(**changes) -> Plan:
    """Two adults and a youth at a stand, a cook who only takes part, quiet hours, one meal."""
    values = {
        "days": 2,
        "groups": (Group(id="g", name="All"),),
        "people": (
            Person(id="l1", name="Hesmira", age=45, cap_min=40, hours=HOURS, group="g"),
            Person(id="l3", name="Quorin", age=31, cap_min=60, hours=HOURS, group="g"),
            Person(id="y1", name="Arvik", age=16, cap_min=40, hours=HOURS, group="g"),
            Person(id="c", name="Embrel", age=50, cap_min=0, role="cook"),
        ),
        "stations": (
            Station(id="s", name="Pedal stand", count=2, hours=HOURS, output_w=30.0, kind="pedal"),
            Station(id="k", name="Table crank", hours=HOURS, output_w=10.0),
        ),
        "devices": (Device(id="d", name="Radio", count=2, battery_wh=10.0, use_wh_per_day=2.0),),
        "blocks": (
            Block(id="q", name="Quiet hours", kind="quiet", windows=(Window(start="21:00", end="07:00"),)),
            Block(id="m", name="Meal", kind="meal", windows=(Window(start="12:00", end="14:00"),)),
        ),
        "rota": Rota(
            id="rota",
            slot_min=5,
            bouts=(
                Bout(id="b1", day=1, start="08:30", end="08:50", station="s", person="l3"),
                Bout(id="b2", day=1, start="10:00", end="10:20", station="s", person="y1", watcher="l1"),
                Bout(id="b3", day=1, start="15:00", end="15:15", station="k", person="l1", locked=True),
                Bout(id="b4", day=2, start="09:00", end="09:20", station="s", unit=2, person="l3"),
            ),
            charging=(ChargeSpell(id="c1", day=1, start="09:00", end="11:00", device="d", count=2, energy_wh=6.0),),
        ),
    }
    return Plan(**(values | changes))


def data_of(plan: Plan, **changes) -> BoardData:
    """What the board shows of a plan's own rota."""
    bouts = shown_bouts(plan.rota.bouts, {})
    turns, rows, spells = placed_breaks(bouts, judge(plan, plan.rota))
    values = {
        "plan": plan,
        "bouts": bouts,
        "charges": shown_charges(plan.rota.charging),
        "breaks": turns,
        "row_breaks": rows,
        "charge_breaks": spells,
        "grid_min": plan.rota.slot_min,
        "editable": True,
    }
    return BoardData(**(values | changes))


def board_of(qtbot, plan: Plan, size=(900, 500), **changes) -> RotaBoard:
    """A board in sight."""
    board = RotaBoard(BoardHand())
    board.hand.setParent(board)
    qtbot.addWidget(board)
    board.resize(*size)
    board.show_data(data_of(plan, **changes))
    board.show()
    qtbot.waitExposed(board)
    return board


class Edits:
    """Applies what a hand asks for, as the window does, and shows it again."""

    def __init__(self, board: RotaBoard, plan: Plan) -> None:
        self.board, self.plan = board, plan
        self.texts: list[str] = []
        self.keys: list[str] = []
        board.hand.edit_requested.connect(self.take)

    def take(self, edit, text, key) -> None:
        self.plan = edit(self.plan)
        self.texts.append(text)
        self.keys.append(key)
        self.board.show_data(data_of(self.plan))

    def bout(self, key):
        return next(one for one in self.plan.rota.bouts if one.id == key)

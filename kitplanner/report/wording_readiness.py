"""Warning received, dark hours, power is back and closing down, in words, each with its caution."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType

from kitplanner.domain.units import clock
from kitplanner.plan.cautions import CAUTIONS, Caution
from kitplanner.plan.records import Plan
from kitplanner.planners.balance_windows import Part
from kitplanner.planners.readiness import ChargeList, ChargeTask, ListName
from kitplanner.planners.readiness_closing import CloseDownTask, SavingTip, Tip
from kitplanner.planners.readiness_lamps import DarkHours, LampHours
from kitplanner.report.wording import counted, energy, hours, listed, minutes, percent, plain, sentence

CHARGE_HEADER = ("What", "Number", "From", "To", "Each", "All full after")
CLOSE_HEADER = ("What", "Number", "What to do")
_NO_CHARGE = "cannot be charged"
_PAPER_NAMES: Mapping[str, str] = MappingProxyType(
    {
        "effort": "minutes per charge",
        "rota": "rota for the wall",
        "slips": "personal slips",
        "packing": "packing list",
        "sign": "charging-point sign",
        "upkeep": "upkeep calendar",
        "handover": "hand-over sheet",
        "station": "station card",
        "daylog": "day log",
        "decision": "decision sheet",
        "report": "daily report",
        "forms": "blank forms",
        "first-hour": "first-hour card",
        "briefing": "briefing card",
        "benchsheet": "bench sheet",
    }
)
_TIPS: Mapping[Tip, str] = MappingProxyType(
    {
        "phone": "dim the screen, close what is not used, flight mode between message windows, write instead of "
        "calling, keep calls short, wait ten seconds before dialling again",
        "phone_no_network": "where there is no network, switch phones off: searching for a signal empties them",
        "radio": "listen five minutes every three hours from 07:00, starting five minutes early because clocks differ; "
        "off in between",
        "light": "lowest setting that does, one lamp where people sit together; the way to the toilets stays lit",
        "network": "switch on for the message windows only",
        "computer": "print for several days, then switch off: the planning computer is a load itself",
    }
)


def paper_words(paper: str) -> str:
    """Return a paper's name in words."""
    return _PAPER_NAMES.get(paper, plain(paper))


def print_sentence(plan: Plan, papers: Sequence[str]) -> str:
    """Return which papers to print now, of those that exist."""
    if not papers:
        return "No paper can be printed from this plan yet."
    text = f"print now, for {counted(plan.days, 'day', 'days')}: {listed([paper_words(one) for one in papers])}"
    computers = [plain(device.name) for device in plan.devices if device.planning_computer and device.count]
    if computers:
        text += f"; do it before {listed(computers)} runs empty"
    return sentence(text)


def charge_list_sentence(plan: Plan, result: ChargeList) -> str:
    """Return the list in one sentence: what first, and when all is full."""
    if not result.tasks:
        return "Everything is full; nothing has to be charged."
    first = [_name(plan, task) for task in result.tasks[:3]]
    possible = [task for task in result.tasks if task.minutes_each is not None]
    if not possible:
        return sentence(f"nothing can be charged now: {listed(first)} cannot take any charge")
    lead = "charge now" if result.name == "warning" else "when power is back, charge"
    ways = counted(result.sockets, "socket", "sockets")
    text = f"{lead} {listed(first)} first; with {ways} all is full after {minutes(result.total_min)}"
    stuck = [_name(plan, task) for task in result.tasks if task.minutes_each is None]
    if stuck:
        text += f"; {listed(stuck)} cannot be charged"
    return sentence(text)


def charge_rows(plan: Plan, result: ChargeList) -> tuple[tuple[str, ...], ...]:
    """Return the list as table rows under `CHARGE_HEADER`."""
    return tuple(
        (
            _name(plan, task),
            str(task.count),
            percent(task.from_fraction),
            percent(task.to_fraction),
            _NO_CHARGE if task.minutes_each is None else minutes(task.minutes_each),
            "–" if task.ready_min is None else minutes(task.ready_min),
        )
        for task in result.tasks
    )


def task_reason_words(task: ChargeTask) -> str:
    """Return why a line stands where it does."""
    match task.why:
        case "planning_computer":
            return "needed to print"
        case "evening":
            return "evening guarantee"
        case "store":
            return "serves everything"
        case "priority":
            return f"priority {task.priority}"


def cautions_of_list(name: ListName | str) -> tuple[Caution, ...]:
    """Return the cautions that stand at a list: charging C2 and C3, closing down C2, lamps C10 and C13."""
    keys = {"warning": ("C3", "C2"), "power_back": ("C3", "C2"), "close_down": ("C2",), "dark": ("C10", "C13")}
    return tuple(CAUTIONS[key] for key in keys[name])


def dark_sentences(plan: Plan, result: DarkHours) -> tuple[str, ...]:
    """Return lamps against dark hours, what is missing first."""
    if not result.is_known:
        return ("The plan states no dark hours, so lamps cannot be held against them.",)
    if not result.lamps:
        return (sentence(f"it is dark for {hours(result.dark_min)} a day and the plan has no lamp"),)
    lines = [_bare_sentence(result.bare_awake, "while people are up")]
    lines += [_bare_sentence(result.bare_asleep, "in the quiet hours; the way to the toilets wants light")]
    lines += [_daylight_sentence(plan, lamp) for lamp in result.lamps]
    if result.unplanned:
        names = listed([_device(plan, one) for one in result.unplanned])
        lines.append(sentence(f"when {names} burns is not stated: give it use windows"))
    found = tuple(line for line in lines if line)
    return found or (sentence(f"every one of the {hours(result.dark_min)} of dark has a lamp, and none burns by day"),)


def _bare_sentence(parts: Sequence[Part], when: str) -> str:
    if not parts:
        return ""
    return sentence(f"dark without any lamp {when}: {listed([_span(part) for part in parts])}")


def _span(part: Part) -> str:
    return f"{clock(part[0])} to {clock(part[1])}"


def _daylight_sentence(plan: Plan, lamp: LampHours) -> str:
    if not lamp.daylight_min:
        return ""
    return sentence(f"{_device(plan, lamp.device)} burns {minutes(lamp.daylight_min)} a day in daylight")


def close_rows(plan: Plan, tasks: Sequence[CloseDownTask]) -> tuple[tuple[str, ...], ...]:
    """Return the closing list as table rows under `CLOSE_HEADER`."""
    return tuple((_name(plan, task), str(task.count), fate_words(task)) for task in tasks)


def fate_words(task: CloseDownTask) -> str:
    """Return what to do with one line; damage is looked for first, everywhere."""
    match task.fate:
        case "return":
            return "look for damage, then back to the owner"
        case "take_out_cells":
            return "take the cells out, keep them dry and cool"
        case "replace":
            left = percent(task.health_fraction)
            return f"worn ({left} of its rated energy left): replace, hand in at a battery collection"
        case "store":
            return (
                f"look for damage, then keep at {percent(task.charge_fraction)} in a cool dry place, "
                "check every 3 months, charge full on a warning"
            )


def close_sentence(plan: Plan, tasks: Sequence[CloseDownTask]) -> str:
    """Return the closing list in one sentence."""
    if not tasks:
        return "There is nothing to close down."
    back = sum(task.count for task in tasks if task.fate == "return")
    kept = sum(task.count for task in tasks if task.fate in ("store", "take_out_cells"))
    worn = [_name(plan, task) for task in tasks if task.fate == "replace"]
    parts = [f"{counted(back, 'device goes', 'devices go')} back, {counted(kept, 'store is', 'stores are')} kept"]
    if worn:
        parts.append(f"worn and to be replaced: {listed(worn)}")
    parts.append("put anything swollen, dented, wet, hot or leaking outside first and hand it in, never in a bin")
    return sentence("; ".join(parts))


def tip_sentence(plan: Plan, tip: SavingTip) -> str:
    """Return one way to save with the devices it is for and what it saves."""
    names = listed([_device(plan, one) for one in tip.devices])
    text = f"{names} ({energy(tip.use_wh_per_day, 'D')} a day): {_TIPS[tip.tip]}"
    if tip.saved_wh_per_day:
        text += f"; saves about {energy(tip.saved_wh_per_day)} a day"
    return sentence(text)


def _name(plan: Plan, task: ChargeTask | CloseDownTask) -> str:
    records = plan.devices if task.section == "devices" else plan.stores
    found = (one for one in records if one.id == task.record)
    return next((plain(one.name) or plain(one.id) for one in found), plain(task.record))


def _device(plan: Plan, key: str) -> str:
    return next((plain(one.name) or plain(key) for one in plan.devices if one.id == key), plain(key))

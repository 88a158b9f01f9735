"""The rota page's own sentences and tables: aims, unmet use, charging, what a re-plan changes, state of the rota."""

from __future__ import annotations

from collections.abc import Iterable
from typing import get_args

from PySide6.QtCore import QCoreApplication

from kitplanner.plan.records import Bout, Plan, Rota
from kitplanner.planners.rota.replan_records import PersonChange
from kitplanner.planners.rota.result import ObjectiveName, RotaAnswer, RotaCharge, RotaProgress
from kitplanner.report.tables_rota import aim_table, charging_rows
from kitplanner.report.wording import counted, energy, listed, number, percent, plain
from kitplanner.report.wording_rota import aim_words, remark_sentence, verdict_lines, violation_sentence
from kitplanner.session.rota_run import Replanned
from kitplanner.ui.board.board_data import ShownCharge
from kitplanner.ui.pages.plain_table import TableData
from kitplanner.ui.pages.rota_desk import RotaDesk

translate = QCoreApplication.translate


def rota_state(plan: Plan, rota: Rota | None) -> str:
    """Return which rota the plan has: its version, whether it hangs on the wall, how long it holds."""
    if rota is None:
        return translate("RotaPage", "No rota is adopted yet.")
    if rota.state == "posted":
        text = translate("RotaPage", "Version {edition}, posted, valid to day {day}.")
    else:
        text = translate("RotaPage", "Version {edition}, draft, not posted.")
    return text.format(edition=rota.edition, day=rota.valid_until_day or plan.days)


def progress_words(moment: RotaProgress) -> str:
    """Return how far a search is: steps, value and bound of the aim at work."""
    stage = str(moment.stage)
    aim = aim_words(stage) if stage in get_args(ObjectiveName) else stage.replace("_", " ")  # type: ignore[arg-type]
    text = translate("RotaPage", "step {steps}, {aim}").format(steps=moment.steps, aim=aim)
    if not moment.value and not moment.bound:
        return text
    value, bound = (percent(x, 1) if stage == "greatest_load" else number(x, 2) for x in (moment.value, moment.bound))
    return text + translate("RotaPage", ": {value}, at best {bound}").format(value=value, bound=bound)


def aims_data(answer: RotaAnswer) -> TableData:
    """Return the aims with value, bound and gap."""
    table = aim_table(answer)
    return TableData(table.header, table.rows)


def charging_data(plan: Plan, charges: Iterable[ShownCharge], days: tuple[int, ...]) -> TableData:
    """Return the charging table of some days."""
    rows, shown = [], [one for one in charges if one.day in days]
    as_records = [
        RotaCharge(
            day=one.day,
            start_min=one.start_min,
            end_min=one.end_min,
            device=one.device,
            count=one.count,
            first_ticket=one.first_ticket,
            energy_wh=one.energy_wh,
        )
        for one in shown
    ]
    table = charging_rows(plan, as_records)
    for one, row in zip(shown, table.rows, strict=True):
        rows.append((row[2], str(one.day), *row[:2], *row[3:6]))
    header = (table.header[2], translate("RotaPage", "day"), *table.header[:2], *table.header[3:6])
    return TableData(header, tuple(rows))


def _turn_words(plan: Plan, bout: Bout) -> str:
    station = next((one for one in plan.stations if one.id == bout.station), None)
    place = (plain(station.name) or station.id) if station is not None else bout.station
    if station is not None and station.count > 1:
        place += f" {bout.unit}"
    return translate("RotaPage", "day {day} {start}–{end} {place}").format(
        day=bout.day, start=bout.start, end=bout.end, place=place
    )


def change_line(plan: Plan, change: PersonChange) -> str:
    """Return what a re-plan changes for one person."""
    name = next((plain(one.name) or one.id for one in plan.people if one.id == change.person), change.person)
    parts = []
    for before, after, gone, new in (
        (
            change.before,
            change.after,
            translate("RotaPage", "no longer turns {turns}"),
            translate("RotaPage", "now turns {turns}"),
        ),
        (
            change.watched_before,
            change.watched_after,
            translate("RotaPage", "no longer watches {turns}"),
            translate("RotaPage", "now watches {turns}"),
        ),
    ):
        if before:
            parts.append(gone.format(turns=listed([_turn_words(plan, bout) for bout in before])))
        if after:
            parts.append(new.format(turns=listed([_turn_words(plan, bout) for bout in after])))
    return f"{name}: {'; '.join(parts)}."


def replan_lines(replanned: Replanned) -> tuple[str, list[str]]:
    """Return a re-plan's head line and its lines: who changes, what stays unmet, locks that could not be kept."""
    answer = replanned.answer
    turning = [one for one in answer.changes if one.before or one.after]
    if not answer.changes:
        head = translate("RotaPage", "Nobody's turns change.")
    elif len(answer.changes) == 1 and len(turning) == 1:
        name = change_line(answer.plan, turning[0]).partition(":")[0]
        head = translate("RotaPage", "Only {name}'s turns change.").format(name=name)
    else:
        people = counted(len(answer.changes), "person", "people")
        head = translate("RotaPage", "Turns change for {people}; all others stay.").format(people=people)
    lines = [change_line(answer.plan, one) for one in answer.changes]
    for bout in answer.lost_locks:
        text = translate("RotaPage", "A locked turn cannot be kept: {turn}.")
        lines.append(text.format(turn=_turn_words(answer.plan, bout)))
    if answer.unmet_wh > 0.005:
        text = translate("RotaPage", "{wh} of use cannot be met.")
        lines.append(text.format(wh=energy(answer.unmet_wh, "O")))
    lines += [violation_sentence(found) for found in replanned.violations]
    return head, lines or [translate("RotaPage", "Everything stays as it was.")]


def head_words(desk: RotaDesk) -> tuple[str, str]:
    """Return the verdict, and below it what else is to be known of the rota shown."""
    answer = desk.answer
    lines: tuple[str, ...]
    if desk.has_errors:
        lines = (
            translate("RotaPage", "The plan has problems that stop the calculation; they are listed with the plan."),
        )
    elif answer is not None and (desk.is_proposal or desk.is_followed):
        lines = verdict_lines(desk.plan, answer)
    elif desk.plan.rota is not None:
        broken = len(desk.violations)
        said = (
            counted(broken, "rule is broken", "rules are broken")
            if broken
            else translate("RotaPage", "every rule is kept")
        )
        judged = said[0].upper() + said[1:] if desk.is_judged else translate("RotaPage", "The rota is being judged")
        lines = (translate("RotaPage", "{judged}; needs and stores are being worked out.").format(judged=judged),)
    else:
        lines = (translate("RotaPage", "No rota yet. Plan one, look at it, adopt it; nothing changes before."),)
    first = 2 if answer is not None and desk.violations else 1
    more = list(lines[first:])
    if desk.is_proposal:
        more.append(translate("RotaPage", "A proposal: nothing holds until it is adopted."))
        if desk.is_stale:
            more.append(translate("RotaPage", "The plan has changed since; plan the rota anew."))
        if desk.proposal is not None:
            more += [remark_sentence(desk.plan, remark) for remark in desk.proposal.remarks]
    if desk.plan.rota is not None:
        more.append(rota_state(desk.plan, desk.plan.rota))
    if desk.charging_is_older:
        more.append(translate("RotaPage", "The charging table was made for other turns."))
    return " ".join(lines[:first]), " ".join(more)

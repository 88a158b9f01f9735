"""Takes a rota out of the window: CSV, calendars, paper; of the proposal or of the adopted rota, as it is shown."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

from PySide6.QtCore import QCoreApplication
from PySide6.QtWidgets import QFileDialog, QWidget

from kitplanner import __version__
from kitplanner.domain.units import minutes_of_day
from kitplanner.plan.codec import PlanFileError
from kitplanner.plan.files import write_bytes
from kitplanner.plan.records import Plan, Rota
from kitplanner.planners.rota.answer import edition_of, rota_bouts, saved_rota
from kitplanner.planners.rota.result import RotaAnswer, RotaCharge
from kitplanner.report.calendar import CalendarOf, calendar_files
from kitplanner.report.content import Paper
from kitplanner.report.papers.rota import WallRota, printed_now, rota_paper
from kitplanner.report.tables_rota import bouts_csv, charging_csv
from kitplanner.report.wording import counted, plain
from kitplanner.ui.dialogs import ask

translate = QCoreApplication.translate


def wall_of(plan: Plan, proposal: RotaAnswer | None) -> WallRota | None:
    """Return what the wall would show: the proposal, else the adopted rota; None without either."""
    if proposal is not None:
        return WallRota(bouts=proposal.solution.bouts)
    rota = plan.rota
    if rota is None:
        return None
    return WallRota(
        bouts=rota_bouts(plan, rota),
        edition=rota.edition,
        posted=rota.state == "posted",
        valid_until_day=rota.valid_until_day,
    )


def paper_of(plan: Plan, proposal: RotaAnswer | None) -> Paper | None:
    """Return the wall rota as a paper."""
    wall = wall_of(plan, proposal)
    return rota_paper(plan, wall, printed_now(__version__)) if wall is not None else None


def print_rota(parent: QWidget, plan: Plan, proposal: RotaAnswer | None) -> None:
    """Show the wall rota as it will be printed, with its way to the printer."""
    from kitplanner.ui.printing.print_dialogs import PaperPreview  # the printer's libraries are rarely needed

    paper = paper_of(plan, proposal)
    if paper is not None:
        PaperPreview(paper, parent).open()


def rota_of(plan: Plan, proposal: RotaAnswer | None) -> Rota | None:
    """Return the rota as a record: the proposal as it would be adopted, else the adopted one."""
    if proposal is None:
        return plan.rota
    return saved_rota(plan, proposal.solution, proposal.charging, edition=edition_of(plan, proposal))


def csv_texts(plan: Plan, rota: Rota, *, names: bool) -> tuple[str, str]:
    """Return turns and charging table as CSV."""
    turns = bouts_csv(plan, rota_bouts(plan, rota), names=names)
    return turns, charging_csv(plan, charges_of(rota))


def charges_of(rota: Rota) -> tuple[RotaCharge, ...]:
    """Return the charging table of a saved rota as the planners' rows."""
    return tuple(
        RotaCharge(
            day=spell.day,
            start_min=int(minutes_of_day(spell.start)),
            end_min=int(minutes_of_day(spell.end)),
            device=spell.device,
            count=spell.count,
            first_ticket=spell.first_ticket,
            energy_wh=spell.energy_wh,
        )
        for spell in rota.charging
    )


def export_csv(parent: QWidget, plan: Plan, rota: Rota, *, names: bool) -> str:
    """Ask for a file and write turns beside the charging table; return what was done, empty if nothing."""
    title = translate("RotaPage", "Turns and charging as CSV")
    name, _ = QFileDialog.getSaveFileName(parent, title, "rota.csv", translate("RotaPage", "CSV (*.csv)"))
    if not name:
        return ""
    path = Path(name)
    path = path if path.suffix else path.with_suffix(".csv")
    second = path.with_name(f"{path.stem}-charging{path.suffix}")
    turns, charging = csv_texts(plan, rota, names=names)
    return _write(parent, {path: turns.encode(), second: charging.encode()})


def export_calendars(parent: QWidget, plan: Plan, rota: Rota, *, names: bool) -> str:
    """Ask for a folder and write a calendar for each person and station; return what was done, empty if nothing."""
    folder = QFileDialog.getExistingDirectory(parent, translate("RotaPage", "Folder for the calendars"))
    if not folder:
        return ""
    stamp = dt.datetime.now(dt.UTC).replace(microsecond=0)
    files = calendar_files(plan, CalendarOf(rota=rota, before=plan.rota, stamp=stamp, names=names))
    return _write(parent, {Path(folder) / name: data for name, data in files.items()})


def _write(parent: QWidget, files: dict[Path, bytes]) -> str:
    """Write files whole or not at all, each; tell the first that cannot be written."""
    for path, data in files.items():
        try:
            write_bytes(path, data)
        except PlanFileError as error:
            ask.tell(parent, str(error))
            return ""
    first = plain(next(iter(files)).name) if files else ""
    text = translate("RotaPage", "Wrote {files}, the first is {first}.")
    return text.format(files=counted(len(files), "file", "files"), first=first) if files else ""

"""The Balance page: verdict, hours of the day, store over days, devices, stations, strict against shared cut."""

from __future__ import annotations

from PySide6.QtWidgets import QVBoxLayout, QWidget

from kitplanner.plan.records import Plan
from kitplanner.planners.results import BalanceResult
from kitplanner.report.wording_balance import (
    cuts_sentence,
    days_sentence,
    effort_of_day_sentence,
    evening_sentence,
    hours_sentence,
    medical_sentence,
    people_sentence,
    stores_sentence,
    verdict_sentence,
)
from kitplanner.ui.pages import balance_charts
from kitplanner.ui.pages.answer_page import AnswerPage
from kitplanner.ui.pages.chart_frame import ChartFrame, plain_label
from kitplanner.ui.pages.columns import Columns
from kitplanner.ui.pages.plain_table import PlainTable, TableData


class BalancePage(AnswerPage):
    """Energy made and stored against energy used."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(self.tr("Balance"), parent)
        self.evening = plain_label(bold=True)
        self.verdict = plain_label(size="title", bold=True)
        self.medical = plain_label()
        self.effort = plain_label()
        self.hours = ChartFrame(self.tr("An average day, hour by hour"))
        self.days = ChartFrame(self.tr("What is left in stores and devices"))
        self.cuts = ChartFrame(self.tr("If something must be cut: strict against shared"))
        self.cut_table = PlainTable(self.tr("Strict and shared cut"))
        self.devices = PlainTable(self.tr("Devices in the balance"), most_rows=16)
        self.stations = PlainTable(self.tr("Stations in the balance"))
        self.stores = plain_label(size="small")
        self.people = plain_label(size="small")
        self._parts: list[QWidget] = []
        self._shown_plan: Plan | None = None
        self._shown: BalanceResult | None = None
        self._build()

    def _build(self) -> None:
        cuts = self._titled(self.tr("Cut by priority, at the outlet (O)"), self.cut_table, None)
        devices = self._titled(self.tr("Devices, whole plan, at the outlet (O)"), self.devices, self.stores)
        stations = self._titled(self.tr("Stations, a day"), self.stations, self.people)
        self._parts = [
            self.effort,
            Columns([self.hours, self.days], 300),
            Columns([self.cuts, cuts], 430),
            Columns([devices, stations], 600),
        ]
        for label in (self.evening, self.verdict, self.medical):
            self.column.addWidget(label)
        for part in self._parts:
            self.column.addWidget(part)
        self.column.addStretch(1)

    @staticmethod
    def _titled(title: str, table: PlainTable, below: QWidget | None) -> QWidget:
        box = QWidget()
        layout = QVBoxLayout(box)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(4)
        layout.addWidget(plain_label(title, bold=True))
        layout.addWidget(table)
        if below is not None:
            layout.addWidget(below)
        layout.addStretch(1)
        return box

    def refresh(self) -> None:
        """Draw the balance, or say why there is none."""
        plan, results = self.plan, self.results
        assert plan is not None
        balance = results.balance if results is not None else None
        if balance is not None and plan is self._shown_plan and balance is self._shown:
            return
        self._shown_plan, self._shown = plan, balance
        for part in self._parts:
            part.setVisible(balance is not None)
        if balance is None:
            self.verdict.setText(self._why_none())
            self.evening.hide()
            self.medical.hide()
            return
        self.verdict.setText(verdict_sentence(plan, balance))
        for label, words in (
            (self.evening, evening_sentence(plan, balance)),
            (self.medical, medical_sentence(plan)),
        ):
            label.setText(words)
            label.setVisible(bool(words))
        self.effort.setText(effort_of_day_sentence(balance))
        self.stores.setText(stores_sentence(balance))
        self.people.setText(people_sentence(balance))
        self._fill_charts(plan, balance)
        self._fill_tables(plan, balance)

    def _why_none(self) -> str:
        if self.results is not None and self.results.has_errors:
            return self.tr("The plan has problems that stop the calculation; they are listed with the plan.")
        return self.tr("The balance is being worked out.")

    def _fill_charts(self, plan: Plan, balance: BalanceResult) -> None:
        made, used = self.tr("made"), self.tr("used")
        chart = balance_charts.hours_chart(balance, (made, used, self.tr("Wh at the outlet (O)")))
        heads = (self.tr("hour"), self.tr("made, Wh (O)"), self.tr("used, Wh (O)"))
        self.hours.set_content(chart, hours_sentence(balance), balance_charts.hours_table(balance, heads))
        words = (self.tr("Wh at the outlet (O), end of day"), self.tr("empty"), self.tr("day"))
        heads_d = (self.tr("day"), self.tr("used, Wh (O)"), self.tr("made, Wh (O)"), self.tr("left at its end, Wh (O)"))
        chart = balance_charts.days_chart(plan, balance, words)
        self.days.set_content(chart, days_sentence(balance), balance_charts.days_table(balance, heads_d))
        names = (self.tr("strict"), self.tr("shared"), self.tr("share of the need covered"), self.tr("priority"))
        chart = balance_charts.cuts_chart(balance, names)
        self.cuts.set_content(chart, cuts_sentence(balance), balance_charts.cuts_table(balance, self._cut_heads()))

    def _cut_heads(self) -> tuple[str, ...]:
        return (
            self.tr("priority"),
            self.tr("need, Wh"),
            self.tr("strict, Wh"),
            self.tr("strict"),
            self.tr("shared, Wh"),
            self.tr("shared"),
        )

    def _fill_tables(self, plan: Plan, balance: BalanceResult) -> None:
        self.cut_table.set_data(balance_charts.cuts_table(balance, self._cut_heads()))
        heads = (
            self.tr("device"),
            self.tr("number"),
            self.tr("priority"),
            self.tr("use, Wh"),
            self.tr("stored at start, Wh"),
            self.tr("shared cut"),
        )
        self.devices.set_data(balance_charts.devices_table(plan, balance, heads))
        station_heads = (
            self.tr("station"),
            self.tr("room, min"),
            self.tr("offered, min"),
            self.tr("turned, min"),
            self.tr("made, Wh (S)"),
        )
        self.stations.set_data(balance_charts.stations_table(plan, balance, station_heads))
        if not balance.stations:
            self.stations.set_data(TableData(station_heads, ()))

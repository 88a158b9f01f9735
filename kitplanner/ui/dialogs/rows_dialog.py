"""Takes a table into a section: preview first, then one undo step; pasted and imported tables alike."""

from __future__ import annotations

from PySide6.QtCore import Qt, QTimer, Signal, Slot
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QHeaderView,
    QPlainTextEdit,
    QProgressBar,
    QPushButton,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from kitplanner.plan.exchange import ExchangeError, Preview, TableChoices, apply, visible_keys
from kitplanner.plan.exchange_columns import specs_of
from kitplanner.plan.exchange_tables import Table
from kitplanner.plan.quantities import COMMA, POINT
from kitplanner.plan.records import Plan
from kitplanner.session.exchange_run import FEW_CELLS, Looked, Source, look, looking
from kitplanner.session.field_parsing import number_style
from kitplanner.session.field_text import label_of, translate
from kitplanner.session.rota_run import Errand
from kitplanner.ui.dialogs.dialog_size import fair_size
from kitplanner.ui.dialogs.rows_preview import RowsPreviewModel
from kitplanner.ui.widgets.plain import colour_label, plain_label

_MEASURED_ROWS = 60
_MOST_COLUMN_CHARS = 30
_PROGRESS_AFTER_MS = 1000
_SIZE_CHARS, _SIZE_LINES = 118, 30


class RowsDialog(QDialog):
    """Preview of a table with the few choices that change how it is read.

    Signals
    -------
    taken(edit: Edit, count: int, section: str)
        The user takes the rows: one edit, how many rows it takes, and where they go.
    """

    taken = Signal(object, int, str)

    def __init__(self, plan: Plan, section: str, source: Source, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self._plan, self._section, self._source = plan, section, source
        self._onto: tuple[str, ...] = ()
        self._table_read: Table | None = None
        self._seen: Preview | None = None
        self._header_chosen: bool | None = None
        self._errand: Errand | None = None
        self._late = QTimer(self)
        self._late.setSingleShot(True)
        self._late.setInterval(_PROGRESS_AFTER_MS)
        self.model = RowsPreviewModel(self)
        self._build()
        self._connect()
        self._fit()

    @property
    def seen(self) -> Preview | None:
        """What is shown; None while it is being read or where nothing could be."""
        return self._seen

    @property
    def section(self) -> str:
        """Section the rows go into."""
        return self._section

    def look_again(self) -> None:
        """Read the table, if need be, and show what it would do."""
        is_small = self._table_read is not None and self._cells() <= FEW_CELLS
        if is_small or (self._table_read is None and self._source.is_quick):
            self._look_now()
            return
        if self._errand is None:
            self._errand = Errand(self)
            self._errand.answered.connect(self._on_looked)
            self._errand.refused.connect(self._on_refused)
        self._late.start()
        self.take.setEnabled(False)
        self.summary.setText(self.tr("Reading…"))
        self._errand.start(
            looking(self._plan, self._section, self._source, self._choices(), self._table_read)  # type: ignore[arg-type]
        )

    def done(self, result: int) -> None:
        """Let go of the thread, then close."""
        if self._errand is not None:
            self._errand.close()
        super().done(result)

    def _build(self) -> None:
        self.intro = plain_label(wrap=True)
        self.header = QCheckBox(self.tr("The first row &names the columns"), self)
        self.decimal = QComboBox(self)
        self.decimal.addItem(self.tr("point: 1.5"), POINT)
        self.decimal.addItem(self.tr("comma: 1,5"), COMMA)
        self.decimal.setCurrentIndex(1 if number_style().decimal == "," else 0)
        self.first = QComboBox(self)
        self.first.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToContents)
        self.onto = QCheckBox(self)
        self.onto.hide()
        self.summary = plain_label(wrap=True, bold=True)
        self.view = QTableView(self)
        self.view.setModel(self.model)
        self.view.setAccessibleName(self.tr("Preview of the rows"))
        self.view.setTabKeyNavigation(False)
        self.view.setCornerButtonEnabled(False)
        self.view.verticalHeader().hide()
        self.remarks = QPlainTextEdit(self)
        self.remarks.setReadOnly(True)
        self.remarks.setTabChangesFocus(True)
        self.remarks.setAccessibleName(self.tr("Cells that cannot be taken, and remarks"))
        self.leave_out = QCheckBox(self.tr("&Leave out the rows that cannot be taken"), self)
        self.progress = QProgressBar(self)
        self.progress.setRange(0, 0)
        self.progress.setAccessibleName(self.tr("Reading the table"))
        self.progress.hide()
        self.buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel, self)
        self.take = QPushButton(self.tr("&Take the rows"), self)
        self.buttons.addButton(self.take, QDialogButtonBox.ButtonRole.AcceptRole)
        self.take.setDefault(True)
        self._lay_out()

    def _lay_out(self) -> None:
        self.choices = QFormLayout()
        self.choices.setRowWrapPolicy(QFormLayout.RowWrapPolicy.DontWrapRows)
        self.choices.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.FieldsStayAtSizeHint)
        self._build_choices()
        self.choices.addRow(self.tr("&Decimals are written with a"), self.decimal)
        self.choices.addRow(self.header)
        self.choices.addRow(self.tr("The first &column is"), self.first)
        self.choices.addRow(self.onto)
        layout = QVBoxLayout(self)
        layout.setSpacing(6)
        layout.addWidget(self.intro)
        layout.addLayout(self.choices)
        layout.addWidget(self.summary)
        layout.addWidget(self.progress)
        layout.addWidget(self.view, 3)
        layout.addWidget(self.remarks, 1)
        layout.addWidget(self.leave_out)
        layout.addWidget(self.buttons)

    def _build_choices(self) -> None:
        """Add choices of one's own before the common ones."""

    def _connect(self) -> None:
        self.header.clicked.connect(self._on_header_clicked)
        self.decimal.currentIndexChanged.connect(self._on_choice)
        self.first.currentIndexChanged.connect(self._on_choice)
        self.onto.toggled.connect(self._on_choice)
        self.leave_out.toggled.connect(self._show_seen)
        self.buttons.accepted.connect(self._on_take)
        self.buttons.rejected.connect(self.reject)
        self._late.timeout.connect(self.progress.show)

    def _fit(self) -> None:
        metrics = self.fontMetrics()
        row = max(24, metrics.height() + 8)
        head = self.view.horizontalHeader()
        head.setResizeContentsPrecision(_MEASURED_ROWS)
        head.setMaximumSectionSize(_MOST_COLUMN_CHARS * metrics.averageCharWidth())
        head.setSectionResizeMode(QHeaderView.ResizeMode.Interactive)
        head.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        self.view.verticalHeader().setDefaultSectionSize(row)
        self.view.setMinimumHeight(3 * row)
        self.remarks.setMinimumHeight(2 * metrics.height() + 10)
        self.resize(fair_size(self, _SIZE_CHARS, _SIZE_LINES))

    def _cells(self) -> int:
        table = self._table_read
        return 0 if table is None else len(table.rows) * len(table.rows[0])

    def _choices(self) -> TableChoices:
        keys = visible_keys(self._section)
        first = self.first.currentData()
        return TableChoices(
            style=self.decimal.currentData(),
            header=self._header_chosen,
            columns=keys[keys.index(first) :] if first in keys else keys,
            onto=self._onto if self.onto.isChecked() else (),
            say=translate,
        )

    def _look_now(self) -> None:
        try:
            looked = look(self._plan, self._section, self._source, self._choices(), self._table_read)
        except ExchangeError as error:
            self._on_refused(str(error))
        else:
            self._on_looked(looked)

    @Slot(object)
    def _on_looked(self, looked: Looked) -> None:
        self._late.stop()
        self.progress.hide()
        self._table_read, self._seen = looked.table, looked.preview
        self._show_seen()
        self.view.horizontalHeader().resizeSections(QHeaderView.ResizeMode.ResizeToContents)

    @Slot(str)
    def _on_refused(self, sentence: str) -> None:
        self._late.stop()
        self.progress.hide()
        self._seen = None
        self._show_seen()
        self.summary.setText(sentence)

    @Slot()
    def _show_seen(self) -> None:
        seen = self._seen
        bad = 0 if seen is None else len(seen.bad_lines)
        leaves_out = self.leave_out.isChecked()
        self.model.set_preview(seen, leaves_out=leaves_out)
        self.view.setVisible(seen is not None)
        self.leave_out.setVisible(bad > 0)
        lines = () if seen is None else (*seen.problems, *seen.notes, *_ways(seen))
        self.remarks.setPlainText("\n".join(lines))
        self.remarks.setVisible(bool(lines))
        count = 0 if seen is None else seen.count("new") + seen.count("update")
        self.take.setEnabled(count > 0 and (not bad or leaves_out))
        self.take.setText(self.tr("&Take 1 row") if count == 1 else self.tr("&Take {count} rows").format(count=count))
        if seen is None:
            self.take.setText(self.tr("&Take the rows"))
            return
        self.summary.setText(self._summary(seen, bad))
        colour_label(self.summary, "warning" if bad else "ink")
        self._show_choices(seen)

    def _show_choices(self, seen: Preview) -> None:
        self.header.setChecked(seen.header)
        by_place = not seen.header
        self.choices.setRowVisible(self.first, by_place)
        self.choices.setRowVisible(self.onto, by_place and bool(self._onto))
        keys = visible_keys(self._section)
        if [self.first.itemData(row) for row in range(self.first.count())] != list(keys):
            self.first.blockSignals(True)
            self.first.clear()
            for key in keys:
                self.first.addItem(label_of(specs_of(self._section)[key]), key)
            self.first.blockSignals(False)

    def _summary(self, seen: Preview, bad: int) -> str:
        parts = [
            (seen.count("new"), self.tr("{count} new")),
            (seen.count("update"), self.tr("{count} changing a record")),
            (seen.count("same"), self.tr("{count} staying as they are")),
            (bad, self.tr("{count} left out") if self.leave_out.isChecked() else self.tr("{count} cannot be taken")),
        ]
        told = ", ".join(words.format(count=count) for count, words in parts if count)
        rows = self.tr("1 row") if len(seen.rows) == 1 else self.tr("{count} rows").format(count=len(seen.rows))
        return f"{rows}: {told}."

    @Slot(bool)
    def _on_header_clicked(self, checked: bool) -> None:
        self._header_chosen = checked
        self.look_again()

    @Slot()
    def _on_choice(self) -> None:
        self.look_again()

    @Slot()
    def _on_take(self) -> None:
        seen = self._seen
        if seen is None:
            return
        count = seen.count("new") + seen.count("update")
        try:
            edit = apply(seen, seen.bad_lines if self.leave_out.isChecked() else ())
        except ExchangeError as error:
            self.summary.setText(str(error))
            return
        self.taken.emit(edit, count, self._section)
        self.accept()


def _ways(seen: Preview) -> tuple[str, ...]:
    """Say once what follows from the filled cells of the rows."""
    return tuple(dict.fromkeys(note for row in seen.rows for note in row.notes))

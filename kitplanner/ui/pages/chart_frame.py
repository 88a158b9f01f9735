"""A chart with its title, its sentence and its table twin; the plot itself is built late."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt, Slot
from PySide6.QtGui import QFontMetricsF
from PySide6.QtWidgets import QHBoxLayout, QLabel, QSizePolicy, QStackedWidget, QToolButton, QVBoxLayout, QWidget

from kitplanner.ui.charts.chart_data import ChartData
from kitplanner.ui.guard import guarded
from kitplanner.ui.pages.plain_table import PlainTable, TableData
from kitplanner.ui.theme import type_font
from kitplanner.ui.widgets.editors import LEAST_TARGET_PX


def plain_label(text: str = "", *, size: str = "text", bold: bool = False, wrap: bool = True) -> QLabel:
    """Return a label that never reads its text as HTML."""
    label = QLabel(text)
    label.setTextFormat(Qt.TextFormat.PlainText)
    label.setWordWrap(wrap)
    label.setProperty("type_size", size)
    label.setProperty("type_bold", bold)
    label.setFont(type_font(size, bold=bold))  # type: ignore[arg-type]
    return label


def restyle_labels(root: QWidget) -> None:
    """Give every label its type size again after the text-size setting changed."""
    for label in root.findChildren(QLabel):
        size = label.property("type_size")
        if size:
            label.setFont(type_font(str(size), bold=bool(label.property("type_bold"))))  # type: ignore[arg-type]


class PlotStack(QStackedWidget):
    """Plot and table, one shown; as high as the plot wants to be, so the table scrolls inside."""

    def __init__(self, height_lines: float) -> None:
        super().__init__()
        self._height_lines = height_lines
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)

    @guarded(QSize(300, 180))
    def sizeHint(self) -> QSize:
        """Return a size that follows the text."""
        line = QFontMetricsF(type_font("small")).height()
        return QSize(round(20 * line), round(self._height_lines * line))

    @guarded(QSize(200, 150))
    def minimumSizeHint(self) -> QSize:
        """Return the same height: a chart is never squeezed, the page scrolls."""
        return QSize(round(12 * QFontMetricsF(type_font("small")).height()), self.sizeHint().height())


class ChartFrame(QWidget):
    """One chart of a page: title, plot or table, sentence."""

    def __init__(self, title: str, parent: QWidget | None = None, *, height_lines: float = 13.0) -> None:
        super().__init__(parent)
        self._plot: QWidget | None = None
        self._data: ChartData | None = None
        self._cursor: float | None = None
        self.title = plain_label(title, bold=True)
        self.sentence = plain_label(size="small")
        self.sentence.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.toggle = QToolButton()
        self.toggle.setText(self.tr("Table"))
        self.toggle.setCheckable(True)
        self.toggle.setMinimumHeight(LEAST_TARGET_PX)
        self.toggle.setAccessibleName(self.tr("{title}: show as table").format(title=title))
        self.toggle.setToolTip(self.tr("Show the same figures as a table"))
        self.toggle.toggled.connect(self._on_toggled)
        self.table = PlainTable(self.tr("{title}, table").format(title=title))
        self.stack = PlotStack(height_lines)
        self._empty = QWidget()
        self.stack.addWidget(self._empty)
        self.stack.addWidget(self.table)
        self.setAccessibleName(title)
        head = QHBoxLayout()
        head.addWidget(self.title, 1)
        head.addWidget(self.toggle)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(3)
        layout.addLayout(head)
        layout.addWidget(self.stack, 1)
        layout.addWidget(self.sentence)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)

    @property
    def plot(self) -> QWidget | None:
        """The plot, None before it was built."""
        return self._plot

    def load(self) -> None:
        """Build the plot; a second call does nothing."""
        if self._plot is not None:
            return
        from kitplanner.ui.charts.plot import Plot

        plot = Plot()
        plot.setAccessibleName(self.title.text())
        plot.setAccessibleDescription(self.sentence.text())
        self._plot = plot
        self.stack.insertWidget(0, plot)
        self.stack.removeWidget(self._empty)
        plot.set_data(self._data)
        plot.set_cursor(self._cursor)
        self.stack.setCurrentWidget(self.table if self.toggle.isChecked() else plot)

    def set_content(self, data: ChartData | None, sentence: str, table: TableData) -> None:
        """Show other figures, in all three forms."""
        self._data = data
        self.sentence.setText(sentence)
        self.sentence.setVisible(bool(sentence))
        self.setAccessibleDescription(sentence)
        self.table.set_data(table)
        if self._plot is not None:
            self._plot.setAccessibleDescription(sentence)
            self._plot.set_data(data)  # type: ignore[attr-defined]

    def set_cursor(self, at: float | None) -> None:
        """Move the line that follows a slider."""
        self._cursor = at
        if self._plot is not None:
            self._plot.set_cursor(at)  # type: ignore[attr-defined]

    @Slot(bool)
    def _on_toggled(self, as_table: bool) -> None:
        self.toggle.setText(self.tr("Chart") if as_table else self.tr("Table"))
        self.stack.setCurrentWidget(self.table if as_table or self._plot is None else self._plot)

"""Draws chart data with pyqtgraph: own axes, few ticks, words at the curves, colours of the scheme."""

from __future__ import annotations

import pyqtgraph as pg
from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtGui import QFontMetricsF, QPainter, QPen, QResizeEvent
from PySide6.QtWidgets import QApplication, QFrame, QGraphicsItem, QWidget

from kitplanner.ui.charts.chart_data import ChartData
from kitplanner.ui.charts.drawing import ChartDrawing
from kitplanner.ui.guard import guarded
from kitplanner.ui.theme import colours, type_font


class PlainAxis(pg.AxisItem):
    """An axis without boxes or minor ticks: muted figures, one thin rule."""

    def __init__(self, orientation: str) -> None:
        super().__init__(orientation, maxTickLength=0)
        self.setStyle(
            tickTextOffset=6, autoExpandTextSpace=True, autoReduceTextSpace=False, hideOverlappingLabels=False
        )

    @guarded()
    def paint(self, painter: QPainter, option: object, widget: QWidget | None) -> None:
        """Draw the axis; a fault in it is reported and never reaches Qt."""
        super().paint(painter, option, widget)


class Plot(pg.PlotWidget):
    """A chart of one ChartData; its words stand above it, not along its side."""

    ready = False

    def __init__(self, parent: QWidget | None = None) -> None:
        axes = {"left": PlainAxis("left"), "bottom": PlainAxis("bottom")}
        before = set(QApplication.topLevelWidgets())
        super().__init__(parent, axisItems=axes, enableMenu=False)
        # The library makes menu and form all the same; without a parent they would outlive the plot.
        for stray in set(QApplication.topLevelWidgets()) - before - {self}:
            if stray.parent() is None:
                stray.setParent(self)
                stray.hide()
        self._data: ChartData | None = None
        self._cursor: pg.InfiniteLine | None = None
        self._cursor_at: float | None = None
        self._titles: list[QGraphicsItem] = []
        self.setAntialiasing(True)
        item = self.getPlotItem()
        item.hideButtons()
        self.setMouseEnabled(x=False, y=False)
        self.getViewBox().setMouseEnabled(False, False)
        for widget in (self, self.viewport()):
            widget.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.ready = True
        self._style()

    @property
    def data(self) -> ChartData | None:
        """What is drawn now."""
        return self._data

    def set_data(self, data: ChartData | None) -> None:
        """Draw other data; None empties the chart."""
        self._data = data
        self._draw()

    def set_cursor(self, at: float | None) -> None:
        """Put a line at a place on the x axis, to follow a slider."""
        self._cursor_at = at
        if self._cursor is None or at is None:
            self._draw()
            return
        self._cursor.setValue(at)

    @guarded()
    def wheelEvent(self, event: QEvent) -> None:
        """Leave the wheel to the page, so that scrolling never stops at a chart."""
        event.ignore()

    @guarded()
    def changeEvent(self, event: QEvent) -> None:
        """Take the new colours and type size."""
        super().changeEvent(event)
        if self._is_open() and event.type() in (QEvent.Type.PaletteChange, QEvent.Type.FontChange):
            self._style()
            self._draw()
            self.updateGeometry()

    @guarded()
    def resizeEvent(self, event: QResizeEvent) -> None:
        """Choose again which words have room."""
        super().resizeEvent(event)
        if self._is_open() and self._data is not None and any(bars.texts for bars in self._data.bars):
            self._draw()

    @guarded(QSize(320, 200))
    def sizeHint(self) -> QSize:
        """Return a small size: the frame around the plot sets its height."""
        return QSize(320, 120)

    @guarded(QSize(120, 80))
    def minimumSizeHint(self) -> QSize:
        """Return the least size."""
        return QSize(120, 80)

    def _is_open(self) -> bool:
        """Say whether there is a plot to draw in: not while the library builds it, nor after it closed it."""
        return self.ready and self.getPlotItem() is not None

    def _style(self) -> None:
        scheme, font = colours(), type_font("small")
        self.setBackground(scheme.color("field"))
        line = QFontMetricsF(font).height()
        self.getPlotItem().layout.setContentsMargins(2, round(line * 1.5), round(line * 0.9), 2)
        for name in ("left", "bottom"):
            axis = self.getAxis(name)
            axis.setTickFont(font)
            axis.setPen(QPen(scheme.color("rule"), 1))
            axis.setTextPen(QPen(scheme.color("muted")))
            axis.setStyle(tickTextOffset=round(line * 0.35))
        self.getAxis("bottom").setHeight(round(line * 1.55))

    def _draw(self) -> None:
        item, data = self.getPlotItem(), self._data
        item.clear()
        for old in self._titles:
            if old.scene() is not None:
                old.scene().removeItem(old)
        self._cursor, self._titles = None, []
        for name in ("left", "bottom"):
            item.showAxis(name, data is not None)
        if data is None:
            return
        drawing = ChartDrawing(item, data)
        self.setXRange(data.x.low, data.x.high, padding=0)
        self.setYRange(data.y.low, data.y.high + drawing.head_room(), padding=0.02)
        self.getAxis("bottom").setTicks([list(data.x.ticks)])
        self.getAxis("left").setTicks([list(data.y.ticks)])
        drawing.draw()
        self._titles = drawing.titles
        if self._cursor_at is not None:
            pen = QPen(colours().color("ink"), 1.4)
            pen.setCosmetic(True)
            self._cursor = pg.InfiniteLine(pos=self._cursor_at, angle=90, pen=pen)
            item.addItem(self._cursor)

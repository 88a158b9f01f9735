"""Editors for one field each: they show what they are told and report what was typed, as text.

No editor corrects or rounds what the user types, none changes under the mouse wheel unless it has the focus,
and none reports anything before the entry is finished.
"""

from __future__ import annotations

from typing import cast

from PySide6.QtCore import QEvent, Qt, Signal, Slot
from PySide6.QtGui import QAction, QKeyEvent, QKeySequence, QWheelEvent
from PySide6.QtWidgets import QCheckBox, QComboBox, QHBoxLayout, QLineEdit, QMenu, QToolButton, QWidget

from kitplanner.plan.fields import FieldSpec
from kitplanner.session.field_parsing import parse_value
from kitplanner.session.field_text import Names, choice_label, default_text, value_text
from kitplanner.ui.guard import guarded

LEAST_TARGET_PX = 26
# Widest editors in average characters: what follows a field (unit, origin) stays beside it in a wide form.
_NUMBER_CHARS, _TEXT_CHARS, _CHOICE_CHARS = 18, 44, 34
_LEAST_CHOICE_CHARS = 8
_EMPTY = ""


class LineEditor(QLineEdit):
    """One line of text; an empty optional field shows its default in muted italics.

    Signals
    -------
    entered(text: str)
        The user finished an entry that differs from what was shown.
    """

    entered = Signal(str)

    def __init__(self, spec: FieldSpec, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._shown = ""
        self._spec = spec
        self.setMinimumHeight(LEAST_TARGET_PX)
        self.editingFinished.connect(self._on_editing_finished)
        self.textChanged.connect(self._update_font)

    def limit_width(self) -> None:
        """Grow with the form up to the width of a long entry at the present text size."""
        self.setMaximumWidth(self.fontMetrics().averageCharWidth() * self._most_chars())

    def _most_chars(self) -> int:
        return max(_TEXT_CHARS, len(self.placeholderText()) + 4)

    def show_text(self, text: str, default: str = "") -> None:
        """Show a text unless it stands there already; the cursor of a user who is typing stays."""
        self._shown = text
        if self.placeholderText() != default:
            self.setPlaceholderText(default)
            self.limit_width()
        if self.text() != text:
            self.setText(text)
            self.setCursorPosition(0)
        self._update_font(text)

    @Slot()
    def _on_editing_finished(self) -> None:
        if self.text() != self._shown:
            self._shown = self.text()
            self.entered.emit(self.text())

    @Slot(str)
    def _update_font(self, text: str) -> None:
        wanted = not text and bool(self.placeholderText())
        if self.font().italic() != wanted:
            font = self.font()
            font.setItalic(wanted)
            self.setFont(font)

    @guarded(False)
    def event(self, event: QEvent) -> bool:
        """Leave undo and redo to the plan while nothing is being typed here."""
        if event.type() == QEvent.Type.ShortcutOverride and self.text() == self._shown:
            key = cast(QKeyEvent, event)
            if key.matches(QKeySequence.StandardKey.Undo) or key.matches(QKeySequence.StandardKey.Redo):
                event.ignore()
                return True
        return super().event(event)

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Give back what was shown when the user presses Escape during an entry."""
        if event.key() == Qt.Key.Key_Escape and self.text() != self._shown:
            self.setText(self._shown)
            event.accept()
            return
        super().keyPressEvent(event)


class NumberEditor(LineEditor):
    """A number; the up and down keys step it, and so does the wheel while it has the focus."""

    def _most_chars(self) -> int:
        return max(_NUMBER_CHARS, len(self.placeholderText()) + 4)

    @guarded()
    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Step by the last shown digit, ten times that with the page keys."""
        steps = {Qt.Key.Key_Up: 1, Qt.Key.Key_Down: -1, Qt.Key.Key_PageUp: 10, Qt.Key.Key_PageDown: -10}
        if event.key() in steps and self._step(steps[Qt.Key(event.key())]):
            event.accept()
            return
        super().keyPressEvent(event)

    @guarded()
    def wheelEvent(self, event: QWheelEvent) -> None:
        """Leave the wheel to the scroll area unless the field has the focus."""
        delta = event.angleDelta().y()
        if self.hasFocus() and delta and self._step(1 if delta > 0 else -1):
            event.accept()
        else:
            event.ignore()

    def _step(self, count: int) -> bool:
        try:
            value = parse_value(self._spec, self.text() or default_text(self._spec))
        except ValueError:
            return False
        if not isinstance(value, (int, float)):
            return False
        step = 1.0 if self._spec.kind == "integer" else 10.0**-self._spec.decimals
        after = round(value + count * step / self._spec.display_scale, 12)
        if self._spec.low is not None:
            after = max(after, self._spec.low)
        if self._spec.high is not None:
            after = min(after, self._spec.high)
        self.setText(value_text(self._spec, after))
        return True


class ChoiceEditor(QComboBox):
    """One of a few values; an optional field also offers its default.

    Signals
    -------
    entered(text: str)
        Another value was chosen; the value itself as text, empty for the default.
    """

    entered = Signal(str)

    def __init__(self, spec: FieldSpec, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._spec = spec
        self._names: Names = {}
        self.setMinimumHeight(LEAST_TARGET_PX)
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.setMinimumContentsLength(_LEAST_CHOICE_CHARS)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.activated.connect(self._on_activated)
        self._fill({})

    def limit_width(self) -> None:
        """Take the width of the longest item, within what a form has room for."""
        metrics = self.fontMetrics()
        widest = max((metrics.horizontalAdvance(self.itemText(n)) for n in range(self.count())), default=0)
        # Qt counts contents in widths of this letter.
        letters = -(-widest // max(1, metrics.horizontalAdvance("X")))
        self.setMinimumContentsLength(max(_LEAST_CHOICE_CHARS, min(_CHOICE_CHARS, letters)))
        self.setMaximumWidth(max(self.sizeHint().width(), _NUMBER_CHARS * metrics.averageCharWidth()))

    def show_text(self, text: str, default: str = "", names: Names | None = None) -> None:
        """Show the item of a value; a value that is none of them (a dangling reference) gets an item of its own."""
        if self._spec.kind == "ref" and names is not None and dict(names) != dict(self._names):
            self._fill(names)
        if self._spec.optional and self.count() and self.itemData(0) == _EMPTY:
            words = self.tr("default: {text}").format(text=default) if default else self.tr("none")
            if self.itemText(0) != words:
                self.setItemText(0, words)
                self.limit_width()
        index = self.findData(text)
        if index < 0:
            self.addItem(text, text)
            index = self.count() - 1
        self.setCurrentIndex(index)

    def _fill(self, names: Names) -> None:
        self._names = dict(names)
        self.clear()
        if self._spec.optional:
            self.addItem(self.tr("none"), _EMPTY)
        match self._spec.kind:
            case "flag":
                self.addItem(self.tr("yes"), "yes")
                self.addItem(self.tr("no"), "no")
            case "ref":
                for key, name in names.items():
                    self.addItem(name, key)
            case _:
                for value, _ in self._spec.choices:
                    self.addItem(choice_label(self._spec, value), str(value))
        self.limit_width()

    @Slot(int)
    def _on_activated(self, index: int) -> None:
        self.entered.emit(str(self.itemData(index)))

    @guarded()
    def wheelEvent(self, event: QWheelEvent) -> None:
        """Leave the wheel to the scroll area unless the field has the focus."""
        if self.hasFocus():
            super().wheelEvent(event)
        else:
            event.ignore()


class FlagEditor(QCheckBox):
    """Yes or no.

    Signals
    -------
    entered(text: str)
        "yes" or "no".
    """

    entered = Signal(str)

    def __init__(self, spec: FieldSpec, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._spec = spec
        self.setText(self.tr("yes"))
        self.setMinimumHeight(LEAST_TARGET_PX)
        self.clicked.connect(self._on_clicked)

    def limit_width(self) -> None:
        """Stay as wide as the box and its word."""

    def show_text(self, text: str, default: str = "") -> None:
        """Tick or untick."""
        self.setChecked(text == "yes")

    @Slot(bool)
    def _on_clicked(self, checked: bool) -> None:
        self.entered.emit("yes" if checked else "no")


class RefsEditor(QWidget):
    """Several records of the plan by name, typed or picked from a list.

    Signals
    -------
    entered(text: str)
        Names separated by commas.
    """

    entered = Signal(str)

    def __init__(self, spec: FieldSpec, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._spec = spec
        self._names: Names = {}
        self._line = LineEditor(spec, self)
        self._line.entered.connect(self.entered)
        self._button = QToolButton(self)
        self._button.setText("…")
        self._button.setMinimumSize(LEAST_TARGET_PX, LEAST_TARGET_PX)
        self._button.setPopupMode(QToolButton.ToolButtonPopupMode.InstantPopup)
        self._menu = QMenu(self._button)
        self._menu.aboutToShow.connect(self._fill_menu)
        self._menu.triggered.connect(self._on_triggered)
        self._button.setMenu(self._menu)
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2)
        layout.addWidget(self._line, 1)
        layout.addWidget(self._button)
        self.setFocusProxy(self._line)

    def limit_width(self) -> None:
        """Grow with the form up to the width of a long entry."""
        self.setMaximumWidth(self.fontMetrics().averageCharWidth() * _TEXT_CHARS)

    def show_text(self, text: str, default: str = "", names: Names | None = None) -> None:
        """Show the names; an empty list shows what it means."""
        if names is not None:
            self._names = dict(names)
        self._line.show_text(text, default)

    def line(self) -> LineEditor:
        """The text part."""
        return self._line

    @guarded()
    def setAccessibleName(self, name: str) -> None:
        """Name both parts."""
        super().setAccessibleName(name)
        self._line.setAccessibleName(name)
        self._button.setAccessibleName(self.tr("Pick: {field}").format(field=name))
        self._button.setToolTip(self.tr("Pick from the list"))

    def _picked(self) -> list[str]:
        try:
            return list(parse_value(self._spec, self._line.text(), self._names))
        except ValueError:
            return []

    @Slot()
    def _fill_menu(self) -> None:
        self._menu.clear()
        picked = self._picked()
        for key, name in self._names.items():
            action = self._menu.addAction(name.replace("&", "&&"))
            action.setCheckable(True)
            action.setChecked(key in picked)
            action.setData(key)
        if not self._names:
            self._menu.addAction(self.tr("none yet")).setEnabled(False)

    @Slot(QAction)
    def _on_triggered(self, action: QAction) -> None:
        key = str(action.data())
        picked = self._picked()
        picked = [one for one in picked if one != key] if key in picked else [*picked, key]
        self._line.setText(", ".join(self._names.get(one, one) for one in self._names if one in picked))
        self._line.editingFinished.emit()


FieldEditor = LineEditor | NumberEditor | ChoiceEditor | FlagEditor | RefsEditor


def make_editor(spec: FieldSpec, parent: QWidget | None = None) -> FieldEditor:
    """Make the editor that fits a field."""
    match spec.kind:
        case "number" | "integer":
            return NumberEditor(spec, parent)
        case "choice" | "ref":
            return ChoiceEditor(spec, parent)
        case "flag":
            return ChoiceEditor(spec, parent) if spec.optional else FlagEditor(spec, parent)
        case "refs":
            return RefsEditor(spec, parent)
        case _:
            return LineEditor(spec, parent)

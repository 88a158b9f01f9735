"""What the program is, its version and its caution; and the list of keys."""

from __future__ import annotations

from PySide6.QtCore import QCoreApplication, QSize, Qt
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QMenu, QMenuBar, QPlainTextEdit, QVBoxLayout, QWidget

from kitplanner import __version__
from kitplanner.plan.cautions import cautions_for
from kitplanner.plan.records import Plan
from kitplanner.session.field_text import translate


class TextDialog(QDialog):
    """A text to read, select and copy, as plain text."""

    def __init__(self, title: str, text: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(title)
        self._view = QPlainTextEdit(text, self)
        self._view.setReadOnly(True)
        self._view.setTabChangesFocus(True)
        self._view.setAccessibleName(title)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, self)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.addWidget(self._view)
        layout.addWidget(buttons)
        em = self.fontMetrics().averageCharWidth()
        self.resize(QSize(em * 72, self.fontMetrics().height() * 22))

    def text(self) -> str:
        """The text shown."""
        return self._view.toPlainText()


def about_text() -> str:
    """Say what the program is and is not."""
    lines = [
        QCoreApplication.translate("About", "Kitplanner {version}").format(version=__version__),
        QCoreApplication.translate(
            "About",
            "Works out whether muscles can keep phones, radios and lamps alive when the mains fail: minutes of "
            "turning per charge, the balance of each day, and what a station really gives.",
        ),
    ]
    lines += [translate("Cautions", shown.text) for shown in cautions_for(Plan(), "about")]
    lines.append(QCoreApplication.translate("About", "No network is used. The plan stays in its file."))
    return "\n\n".join(lines)


def keys_text(bar: QMenuBar) -> str:
    """List the keys of all menu lines, and those of the tables and forms."""
    lines = []
    for action in bar.actions():
        menu = action.menu()
        if isinstance(menu, QMenu):
            lines += [plain_words(action), *_lines_of(menu, 1), ""]
    lines.append(QCoreApplication.translate("About", "In tables: F2 or typing edits, Delete removes, arrows move."))
    lines.append(QCoreApplication.translate("About", "In tables: Ctrl+C copies rows, Ctrl+V shows copied rows first."))
    lines.append(QCoreApplication.translate("About", "In a filter: Enter goes to the rows, Escape shows all."))
    lines.append(QCoreApplication.translate("About", "In numbers: up and down step, page keys step by ten."))
    lines.append(QCoreApplication.translate("About", "In a field: Escape gives back what was there before."))
    lines.append(
        QCoreApplication.translate("About", "In the energy line: left and right walk, Enter opens what is shown.")
    )
    lines += ["", QCoreApplication.translate("About", "On the rota board:"), *(f"    {line}" for line in board_keys())]
    return "\n".join(lines)


def board_keys() -> tuple[str, ...]:
    """Return the keys of the rota board, one sentence each."""
    translate = QCoreApplication.translate
    return (
        translate("About", "Insert adds a turn. With none chosen, arrows choose one; Home and End the first and last."),
        translate("About", "Ctrl+arrows choose another turn. Left and right move the chosen one in time."),
        translate("About", "Up and down hand it to the next row. Shift+left and Shift+right change its end."),
        translate("About", "Enter opens its form, H hands it over, S swaps two people, L locks it, Delete removes it."),
        translate("About", "Escape lets go of what is dragged or chosen. Plus and minus change the width of a day."),
    )


def plain_words(action: QAction) -> str:
    """Return the text of a menu line without its marks."""
    return action.text().replace("&&", "\0").replace("&", "").replace("\0", "&")


def _lines_of(menu: QMenu, depth: int) -> list[str]:
    lines = []
    for action in menu.actions():
        inner = action.menu()
        if isinstance(inner, QMenu):
            lines += ["    " * depth + plain_words(action), *_lines_of(inner, depth + 1)]
        elif not action.shortcut().isEmpty():
            lines.append("    " * depth + f"{plain_words(action)}: {action.shortcut().toString()}")
    return lines

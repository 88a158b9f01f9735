"""The menu of a turn: the same actions as the keys, which stand beside them."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QCoreApplication, QPoint, Qt
from PySide6.QtGui import QKeySequence
from PySide6.QtWidgets import QMenu, QWidget

from kitplanner.plan.fields import QT_TRANSLATE_NOOP
from kitplanner.ui.board.board_hand import BoardHand


def menu_of(parent: QWidget, hand: BoardHand) -> QMenu:
    """Return the menu of the chosen turn."""
    bout = hand.bout()
    locked = bout is not None and bout.locked
    lines: tuple[tuple[str, str, Callable[[], None]], ...] = (
        (QT_TRANSLATE_NOOP("BoardMenu", "&Edit…"), "Return", hand.open_form),
        (QT_TRANSLATE_NOOP("BoardMenu", "&Hand over…"), "H", hand.hand_over),
        (
            QT_TRANSLATE_NOOP("BoardMenu", "&Swap with the turn marked")
            if hand.swap and hand.swap != hand.chosen
            else QT_TRANSLATE_NOOP("BoardMenu", "&Swap people…"),
            "S",
            hand.swap_people,
        ),
        (
            QT_TRANSLATE_NOOP("BoardMenu", "Un&lock") if locked else QT_TRANSLATE_NOOP("BoardMenu", "&Lock"),
            "L",
            hand.lock,
        ),
        (QT_TRANSLATE_NOOP("BoardMenu", "&Remove"), "Del", hand.remove),
    )
    menu = QMenu(parent)
    menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
    for text, keys, act in lines:
        action = menu.addAction(QCoreApplication.translate("BoardMenu", text))
        action.setShortcut(QKeySequence(keys))
        action.setShortcutVisibleInContextMenu(True)
        action.setEnabled(hand.data.editable)
        action.triggered.connect(act)
    return menu


def open_menu(parent: QWidget, hand: BoardHand, at: QPoint) -> None:
    """Show the menu of the chosen turn."""
    menu_of(parent, hand).popup(at)

"""The menus as a table: text, keys and what happens; the window only hands over its handlers."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from msgspec import Struct
from PySide6.QtCore import QObject, Signal, Slot
from PySide6.QtGui import QAction, QActionGroup, QKeySequence, QUndoStack
from PySide6.QtWidgets import QMainWindow, QMenu

from kitplanner.plan.fields import QT_TRANSLATE_NOOP
from kitplanner.session.field_text import translate
from kitplanner.ui.panels.sections import SECTIONS

Key = QKeySequence.StandardKey
Handler = Callable[[], object]


class Item(Struct, frozen=True):
    """One menu line; an empty name is a rule between lines."""

    name: str = ""
    text: str = ""
    keys: QKeySequence.StandardKey | str | None = None


_RULE = Item()

FILE = (
    Item("start", QT_TRANSLATE_NOOP("Menus", "&New…"), Key.New),
    Item("examples"),
    Item("open", QT_TRANSLATE_NOOP("Menus", "&Open…"), Key.Open),
    Item("recent", QT_TRANSLATE_NOOP("Menus", "Open &recent")),
    _RULE,
    Item("compare", QT_TRANSLATE_NOOP("Menus", "Co&mpare with…")),
    _RULE,
    Item("save", QT_TRANSLATE_NOOP("Menus", "&Save"), Key.Save),
    Item("save_as", QT_TRANSLATE_NOOP("Menus", "Save &as…"), "Ctrl+Shift+S"),
    _RULE,
    Item("import", QT_TRANSLATE_NOOP("Menus", "&Import a table…")),
    Item("export", QT_TRANSLATE_NOOP("Menus", "&Export a table…")),
    _RULE,
    Item("print_effort", QT_TRANSLATE_NOOP("Menus", "&Print effort table…"), Key.Print),
    Item("pdf_effort", QT_TRANSLATE_NOOP("Menus", "Effort table as P&DF…"), "Ctrl+Shift+P"),
    Item("print_rota", QT_TRANSLATE_NOOP("Menus", "Print ro&ta…")),
    _RULE,
    Item("quit", QT_TRANSLATE_NOOP("Menus", "&Quit"), "Ctrl+Q"),
)
EDIT = (
    Item("add", QT_TRANSLATE_NOOP("Menus", "&Add to this section"), "Ctrl+Shift+N"),
    Item("duplicate", QT_TRANSLATE_NOOP("Menus", "&Copy the chosen one"), "Ctrl+D"),
    Item("remove", QT_TRANSLATE_NOOP("Menus", "Re&move the chosen ones"), "Ctrl+Del"),
    _RULE,
    Item("paste", QT_TRANSLATE_NOOP("Menus", "&Paste rows…")),
    Item("copy", QT_TRANSLATE_NOOP("Menus", "C&opy rows")),
    Item("like", QT_TRANSLATE_NOOP("Menus", "Add several &like this…"), "Ctrl+Shift+D"),
    Item("kinds", QT_TRANSLATE_NOOP("Menus", "Add from the list of &kinds…"), "Ctrl+Shift+K"),
    Item("set", QT_TRANSLATE_NOOP("Menus", "Set one &field of the chosen rows…"), "Ctrl+Shift+F"),
    Item("sort_plan", QT_TRANSLATE_NOOP("Menus", "&Sort the plan as shown")),
    Item("filter", QT_TRANSLATE_NOOP("Menus", "F&ilter the rows"), Key.Find),
)
VIEW = (
    Item("next_problem", QT_TRANSLATE_NOOP("Menus", "Go to next &problem"), "F8"),
    Item("to_table", QT_TRANSLATE_NOOP("Menus", "Go to &table"), "F6"),
    Item("to_line", QT_TRANSLATE_NOOP("Menus", "Go to &energy line"), "F7"),
    _RULE,
    Item("problems", QT_TRANSLATE_NOOP("Menus", "All pro&blems…"), "Shift+F8"),
    Item("ready", QT_TRANSLATE_NOOP("Menus", "Be &ready…"), "Ctrl+B"),
    Item("privacy", QT_TRANSLATE_NOOP("Menus", "&What is stored about people…")),
)
HELP = (
    Item("help", QT_TRANSLATE_NOOP("Menus", "&Help"), Key.HelpContents),
    Item("where_from", QT_TRANSLATE_NOOP("Menus", "&Where does this come from?"), "Shift+F1"),
    Item("meaning", QT_TRANSLATE_NOOP("Menus", "What does this &mean?"), "Ctrl+F1"),
    _RULE,
    Item("keys", QT_TRANSLATE_NOOP("Menus", "&Keys")),
    Item("about", QT_TRANSLATE_NOOP("Menus", "&About")),
)
KINDS = (
    ("household", QT_TRANSLATE_NOOP("Menus", "&Household")),
    ("camp", QT_TRANSLATE_NOOP("Menus", "Youth &camp")),
    ("shelter", QT_TRANSLATE_NOOP("Menus", "&Shelter")),
    ("bench", QT_TRANSLATE_NOOP("Menus", "&Bench")),
    ("", QT_TRANSLATE_NOOP("Menus", "&Empty plan")),
)
SCHEMES = (
    ("system", QT_TRANSLATE_NOOP("Menus", "As the s&ystem")),
    ("light", QT_TRANSLATE_NOOP("Menus", "&Light")),
    ("dark", QT_TRANSLATE_NOOP("Menus", "&Dark")),
    ("contrast", QT_TRANSLATE_NOOP("Menus", "&High contrast")),
)
TEXT_PERCENTS = (100, 125, 150, 175, 200)


class Menus(QObject):
    """The menu bar.

    Signals
    -------
    new_requested(kind: str), recent_requested(path: Path), section_requested(key: str)
    scheme_requested(scheme: str), text_percent_requested(percent: int)
        A line with a value was chosen.
    """

    new_requested = Signal(str)
    recent_requested = Signal(object)
    section_requested = Signal(str)
    scheme_requested = Signal(str)
    text_percent_requested = Signal(int)

    def __init__(self, window: QMainWindow, stack: QUndoStack, handlers: dict[str, Handler]) -> None:
        super().__init__(window)
        self._handlers = handlers
        self._actions: dict[str, QAction] = {}
        self._recent = QMenu(window)
        self._recent.setToolTipsVisible(True)
        bar = window.menuBar()
        file_menu = bar.addMenu(translate("Menus", "&File"))
        self._examples = self._make_new_menu(window)
        self._fill(file_menu, FILE)
        edit_menu = bar.addMenu(translate("Menus", "&Edit"))
        self._add_undo(edit_menu, stack)
        self._fill(edit_menu, EDIT)
        view_menu = bar.addMenu(translate("Menus", "&View"))
        self._add_sections(view_menu)
        self._fill(view_menu, VIEW)
        view_menu.addSeparator()
        self._schemes = self._add_choice(view_menu, translate("Menus", "Co&lours"), self._scheme_lines())
        self._percents = self._add_choice(view_menu, translate("Menus", "Text si&ze"), self._percent_lines())
        self._fill(bar.addMenu(translate("Menus", "&Help")), HELP)

    def action(self, name: str) -> QAction:
        """One of the actions by name."""
        return self._actions[name]

    def show_recent(self, paths: tuple[Path, ...]) -> None:
        """List recent files, newest first; those that are missing stay, greyed."""
        self._recent.clear()
        for number, path in enumerate(paths, start=1):
            action = self._recent.addAction(f"&{number % 10} {path.name.replace('&', '&&')}")
            action.setData(path)
            exists = path.exists()
            action.setEnabled(exists)
            action.setToolTip(str(path) if exists else translate("Menus", "{path} is not there").format(path=path))
            action.setStatusTip(action.toolTip())
        self._recent.setEnabled(bool(paths))

    def show_view(self, scheme: str, percent: int) -> None:
        """Tick the colours and the text size in force."""
        for group, value in ((self._schemes, scheme), (self._percents, percent)):
            for action in group.actions():
                action.setChecked(action.data() == value)

    def _fill(self, menu: QMenu, items: tuple[Item, ...]) -> None:
        for item in items:
            if item is _RULE:
                menu.addSeparator()
            elif item.name == "examples":
                menu.addMenu(self._examples)
            elif item.name == "recent":
                self._recent.setTitle(translate("Menus", item.text))
                self._recent.triggered.connect(self._on_recent)
                menu.addMenu(self._recent)
            else:
                action = menu.addAction(translate("Menus", item.text))
                if item.keys is not None:
                    action.setShortcut(QKeySequence(item.keys))
                action.triggered.connect(self._on_triggered)
                action.setObjectName(item.name)
                self._actions[item.name] = action

    def _make_new_menu(self, window: QMainWindow) -> QMenu:
        menu = QMenu(translate("Menus", "New from e&xample"), window)
        for kind, text in KINDS:
            menu.addAction(translate("Menus", text)).setData(kind)
        menu.triggered.connect(self._on_new)
        self._actions["new"] = menu.menuAction()
        return menu

    def _add_undo(self, menu: QMenu, stack: QUndoStack) -> None:
        undo = stack.createUndoAction(menu, translate("Menus", "&Undo"))
        redo = stack.createRedoAction(menu, translate("Menus", "&Redo"))
        undo.setShortcuts(QKeySequence.keyBindings(Key.Undo))
        # Twice the same key would be ambiguous and do nothing.
        usual, second = QKeySequence.keyBindings(Key.Redo), QKeySequence("Ctrl+Y")
        redo.setShortcuts(usual if second in usual else [*usual, second])
        for name, action in (("undo", undo), ("redo", redo)):
            menu.addAction(action)
            self._actions[name] = action
        menu.addSeparator()

    def _add_sections(self, menu: QMenu) -> None:
        submenu = menu.addMenu(translate("Menus", "&Section"))
        for number, section in enumerate(SECTIONS, start=1):
            action = submenu.addAction(translate("Sections", section.title))
            action.setData(section.key)
            action.setShortcut(QKeySequence(f"Ctrl+{number % 10}"))
        submenu.triggered.connect(self._on_section)

    def _scheme_lines(self) -> list[tuple[str, object]]:
        return [(translate("Menus", text), scheme) for scheme, text in SCHEMES]

    def _percent_lines(self) -> list[tuple[str, object]]:
        return [(f"{percent} %", percent) for percent in TEXT_PERCENTS]

    def _add_choice(self, menu: QMenu, title: str, lines: list[tuple[str, object]]) -> QActionGroup:
        submenu = menu.addMenu(title)
        group = QActionGroup(submenu)
        for text, value in lines:
            action = submenu.addAction(text)
            action.setData(value)
            action.setCheckable(True)
            group.addAction(action)
        group.triggered.connect(self._on_choice)
        return group

    @Slot()
    def _on_triggered(self) -> None:
        sender = self.sender()
        if sender is not None:
            self._handlers[sender.objectName()]()

    @Slot(QAction)
    def _on_new(self, action: QAction) -> None:
        self.new_requested.emit(str(action.data()))

    @Slot(QAction)
    def _on_recent(self, action: QAction) -> None:
        self.recent_requested.emit(Path(action.data()))

    @Slot(QAction)
    def _on_section(self, action: QAction) -> None:
        self.section_requested.emit(str(action.data()))

    @Slot(QAction)
    def _on_choice(self, action: QAction) -> None:
        value = action.data()
        if isinstance(value, int):
            self.text_percent_requested.emit(value)
        else:
            self.scheme_requested.emit(str(value))

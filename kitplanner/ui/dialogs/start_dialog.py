"""Where a plan begins: five short questions, a file, or one of the examples."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import Qt, Signal, Slot
from PySide6.QtWidgets import (
    QDialog,
    QFrame,
    QGridLayout,
    QHBoxLayout,
    QPushButton,
    QScrollArea,
    QStackedWidget,
    QVBoxLayout,
    QWidget,
)

from kitplanner.plan.catalogue import PlanKind
from kitplanner.plan.edits import EditError
from kitplanner.plan.edits_start import StartAnswers, start_plan, suggested_answers
from kitplanner.plan.fields import QT_TRANSLATE_NOOP
from kitplanner.session.field_text import translate
from kitplanner.ui.dialogs.dialog_size import fair_size
from kitplanner.ui.dialogs.start_questions import DaysQuestion, HowManyQuestion, people_question, question_of_kinds
from kitplanner.ui.widgets.plain import as_tool_tip, colour_label, plain_label

_KINDS: tuple[tuple[PlanKind, str, str], ...] = (
    (
        "household",
        QT_TRANSLATE_NOOP("Start", "&Household"),
        QT_TRANSLATE_NOOP("Start", "A home with a few phones, a radio and lamps"),
    ),
    (
        "camp",
        QT_TRANSLATE_NOOP("Start", "&Camp"),
        QT_TRANSLATE_NOOP("Start", "A group on the road that shares stations"),
    ),
    (
        "shelter",
        QT_TRANSLATE_NOOP("Start", "&Shelter"),
        QT_TRANSLATE_NOOP("Start", "Many people in one place, with a charging point"),
    ),
    (
        "bench",
        QT_TRANSLATE_NOOP("Start", "&Bench"),
        QT_TRANSLATE_NOOP("Start", "One station and what it really gives"),
    ),
)
_EXAMPLES: tuple[tuple[PlanKind, str], ...] = (
    ("household", QT_TRANSLATE_NOOP("Start", "Household e&xample")),
    ("camp", QT_TRANSLATE_NOOP("Start", "Cam&p example")),
    ("shelter", QT_TRANSLATE_NOOP("Start", "Shel&ter example")),
    ("bench", QT_TRANSLATE_NOOP("Start", "Be&nch example")),
)
_SIZE_CHARS, _SIZE_LINES = 96, 32
_MOST_RECENT = 5


class StartDialog(QDialog):
    """First page: how to begin. Then one page for each question; the answers are filled in already.

    Signals
    -------
    answered(answers: StartAnswers)
        The plan is to be made from these answers.
    example_chosen(kind: str)
        One of the examples is to be opened; an empty kind is an empty plan.
    open_chosen(path: Path | None)
        A file is to be opened; None asks which.
    """

    answered = Signal(object)
    example_chosen = Signal(str)
    open_chosen = Signal(object)

    def __init__(self, today: dt.date, recent: tuple[Path, ...] = (), parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(self.tr("Start"))
        self._today = today
        self._kind: PlanKind = "household"
        self._recent = tuple(path for path in recent if path.exists())[:_MOST_RECENT]
        self._buttons: dict[str, QPushButton] = {}
        self._questions: tuple[DaysQuestion | HowManyQuestion, ...] = ()
        self._pages: tuple[QScrollArea, ...] = ()
        self._stack = QStackedWidget(self)
        self._stack.addWidget(_scrolling(self._build_first()))
        self.step = plain_label()
        self.problem = plain_label(wrap=True)
        colour_label(self.problem, "warning")
        self._build_steps()
        layout = QVBoxLayout(self)
        layout.addWidget(self._stack, 1)
        layout.addWidget(self.problem)
        layout.addWidget(self._bar)
        self._show_page(0)
        self.resize(fair_size(self, _SIZE_CHARS, _SIZE_LINES))

    @property
    def page(self) -> int:
        """Page shown: 0 for how to begin, then the questions from 1 to 5."""
        return self._stack.currentIndex()

    def button(self, name: str) -> QPushButton:
        """One of the buttons: a kind of plan, "example:kind", "empty", "open", "back", "next", "make"."""
        return self._buttons[name]

    def question(self, number: int) -> DaysQuestion | HowManyQuestion:
        """One of the five questions, from 1; there once a kind of plan was chosen."""
        return self._questions[number - 1]

    def begin(self, kind: PlanKind) -> None:
        """Ask the five questions for a kind of plan, with suggested answers filled in."""
        self._kind = kind
        for page in self._pages:
            self._stack.removeWidget(page)
            page.deleteLater()
        suggested = suggested_answers(kind, self._today)
        self._questions = (
            DaysQuestion(self._today, suggested.days),
            people_question(suggested.people),
            question_of_kinds("devices", self.tr("What must be kept alive?"), suggested.devices),
            question_of_kinds("stations", self.tr("What turns muscle into power?"), suggested.stations),
            question_of_kinds("stores", self.tr("What keeps energy until it is needed?"), suggested.stores),
        )
        self._pages = tuple(_scrolling(question) for question in self._questions)
        for page in self._pages:
            self._stack.addWidget(page)
        self._show_page(1)

    def answers(self) -> StartAnswers:
        """Return the answers as they stand."""
        days = self._questions[0]
        assert isinstance(days, DaysQuestion)
        people, devices, stations, stores = (
            question.chosen() for question in self._questions[1:] if isinstance(question, HowManyQuestion)
        )
        return StartAnswers(
            kind=self._kind,
            start=days.start(),
            days=days.days(),
            people=people,
            devices=devices,
            stations=stations,
            stores=stores,
        )

    def _build_first(self) -> QWidget:
        page = QWidget(self)
        layout = QVBoxLayout(page)
        layout.addWidget(plain_label(self.tr("What is the plan for?"), size="title", bold=True))
        layout.addWidget(
            plain_label(
                self.tr("Five short questions, filled in already: change what is different for you."), wrap=True
            )
        )
        grid = QGridLayout()
        for row, (kind, text, help_) in enumerate(_KINDS):
            button = self._add_button(kind, translate("Start", text), self._on_kind)
            button.setAccessibleDescription(translate("Start", help_))
            grid.addWidget(button, row, 0)
            grid.addWidget(plain_label(translate("Start", help_), wrap=True), row, 1)
        grid.setColumnStretch(1, 1)
        layout.addLayout(grid)
        layout.addSpacing(self.fontMetrics().height())
        layout.addWidget(plain_label(self.tr("Or go on with a plan"), bold=True))
        layout.addLayout(self._build_files())
        layout.addSpacing(self.fontMetrics().height())
        layout.addWidget(plain_label(self.tr("Or look at an example first"), bold=True))
        examples = QGridLayout()
        for number, (kind, text) in enumerate(_EXAMPLES):
            button = self._add_button(f"example:{kind}", translate("Start", text), self._on_example)
            examples.addWidget(button, number // 2, number % 2)
        layout.addLayout(examples)
        layout.addStretch(1)
        return page

    def _build_files(self) -> QGridLayout:
        grid = QGridLayout()
        grid.addWidget(self._add_button("open", self.tr("&Open a file…"), self._on_open), 0, 0)
        grid.addWidget(self._add_button("empty", self.tr("&Empty plan"), self._on_example), 0, 1)
        for number, path in enumerate(self._recent):
            text = f"&{number + 1} {path.name.replace('&', '&&')}"
            button = self._add_button(f"recent:{number}", text, self._on_recent)
            button.setToolTip(as_tool_tip(str(path)))
            grid.addWidget(button, 1 + number // 2, number % 2)
        return grid

    def _add_button(self, name: str, text: str, slot: Callable[[], None]) -> QPushButton:
        button = QPushButton(text, self)
        button.setObjectName(name)
        button.setMinimumHeight(max(28, self.fontMetrics().height() + 10))
        button.clicked.connect(slot)
        self._buttons[name] = button
        return button

    def _build_steps(self) -> None:
        self._bar = QWidget(self)
        layout = QHBoxLayout(self._bar)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.step)
        layout.addStretch(1)
        layout.addWidget(self._add_button("back", self.tr("&Back"), self._on_back))
        layout.addWidget(self._add_button("make", self.tr("&Make the plan now"), self._on_make))
        layout.addWidget(self._add_button("next", self.tr("&Next question"), self._on_next))

    def _show_page(self, number: int) -> None:
        self._stack.setCurrentIndex(number)
        self._bar.setVisible(number > 0)
        self.problem.setText("")
        self.problem.hide()
        if number == 0:
            first = self._buttons[self._kind]
            first.setDefault(True)
            first.setFocus()
            return
        is_last = number == len(self._questions)
        self.step.setText(self.tr("Question {number} of {all}").format(number=number, all=len(self._questions)))
        self._buttons["next"].setVisible(not is_last)
        self._buttons["make" if is_last else "next"].setDefault(True)
        self.question(number).begin()

    @Slot()
    def _on_kind(self) -> None:
        self.begin(self._name_of_sender())  # type: ignore[arg-type]

    @Slot()
    def _on_example(self) -> None:
        name = self._name_of_sender()
        self.accept()
        self.example_chosen.emit(name.partition(":")[2])

    @Slot()
    def _on_open(self) -> None:
        self.accept()
        self.open_chosen.emit(None)

    @Slot()
    def _on_recent(self) -> None:
        path = self._recent[int(self._name_of_sender().partition(":")[2])]
        self.accept()
        self.open_chosen.emit(path)

    @Slot()
    def _on_back(self) -> None:
        self._show_page(self.page - 1)

    @Slot()
    def _on_next(self) -> None:
        self._show_page(self.page + 1)

    @Slot()
    def _on_make(self) -> None:
        answers = self.answers()
        try:
            start_plan(answers)
        except EditError as error:
            self.problem.setText(f"⚠ {error}")
            self.problem.show()
            return
        self.accept()
        self.answered.emit(answers)

    def _name_of_sender(self) -> str:
        sender = self.sender()
        return sender.objectName() if sender is not None else ""


def _scrolling(page: QWidget) -> QScrollArea:
    """Let a page scroll where a small screen or large text leaves too little room."""
    area = QScrollArea()
    area.setWidgetResizable(True)
    area.setFrameShape(QFrame.Shape.NoFrame)
    area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
    area.setWidget(page)
    return area

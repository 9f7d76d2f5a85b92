"""Base of the sections whose answer takes a while: it is worked out beside the window, once for each question."""

from __future__ import annotations

from collections.abc import Callable, Hashable
from typing import Any

from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.crystal.section import Section
from mirrorlab.desktop.document import Document


class AnsweredSection(Section):
    """A section that asks and shows.

    Attributes
    ----------
    job : str
        Name of its job, as the status line says it.
    answer : object or None
        The last answer; None while there is none.
    problem : str
        Why there is none.
    """

    job = ""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.answer: Any = None
        self.problem = ""
        self._question: Hashable = None
        document.work.ended.connect(self._ended)

    def ask(self, question: Hashable, work: Callable[[], Any]) -> None:
        """Have a question answered, unless it is the one asked last."""
        if question == self._question:
            return
        self._question = question
        self.answer, self.problem = None, ""
        self.document.work.start(self.job, lambda _: work(), self._answered, self._failed)

    def drop(self, problem: str = "") -> None:
        """Ask nothing, and say why."""
        self._question = None
        self.document.work.cancel(self.job)
        self.answer, self.problem = None, problem

    @property
    def waiting(self) -> bool:
        """Whether the answer is on its way."""
        return self.job in self.document.work.running()

    def show_answer(self) -> None:
        """Bring widgets and rows in step with the answer."""

    def _answered(self, answer: Any) -> None:
        self.answer = answer
        self.show_answer()

    def _failed(self, error: Exception) -> None:
        if not isinstance(error, ValueError):
            raise error
        self.problem = str(error)
        self.show_answer()

    def _ended(self, name: str) -> None:
        """A job that was stopped may be asked for again."""
        if name == self.job and self.answer is None and not self.problem:
            self.problem = ""

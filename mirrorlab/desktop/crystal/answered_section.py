"""Base of the sections whose answer takes a while: it is worked out beside the window, once for each question."""

from __future__ import annotations

from collections.abc import Callable, Hashable
from functools import partial
from typing import Any

from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.crystal.section import Section
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.printed import as_sentence

STOPPED = "Stopped. Open this section again to start anew."


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
        done, failed = partial(self._answered, question), partial(self._failed, question)
        self.document.work.start(self.job, lambda _: work(), done, failed)
        self._question = question
        self.answer, self.problem = None, ""

    def drop(self, problem: str = "") -> None:
        """Ask nothing, and say why."""
        self.document.work.cancel(self.job)
        self._question = None
        self.answer, self.problem = None, problem

    def show_answer(self) -> None:
        """Bring widgets and rows in step with the answer."""

    def _answered(self, question: Hashable, answer: Any) -> None:
        self._question, self.answer, self.problem = question, answer, ""
        self.show_answer()

    def _failed(self, question: Hashable, error: Exception) -> None:
        if not isinstance(error, ValueError):
            raise error
        self._question, self.problem = question, as_sentence(str(error))
        self.show_answer()

    def _ended(self, name: str) -> None:
        """Unless its answer follows at once, the job was stopped, and may be asked for again."""
        if name == self.job:
            self._question, self.problem = None, STOPPED
            if self.isVisible():
                self.show_answer()

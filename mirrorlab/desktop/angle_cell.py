"""One cell of the triangle: the angle of a pair as typed, how it was read, and its mark."""

from __future__ import annotations

from PySide6.QtCore import QEvent, Qt, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QKeySequence
from PySide6.QtWidgets import QFrame, QVBoxLayout, QWidget

from mirrorlab.angles import Angle
from mirrorlab.desktop.angle_text import short_reading
from mirrorlab.desktop.marks import WRONG, ReadingMark
from mirrorlab.desktop.parts import Field
from mirrorlab.desktop.reading_line import ReadingLine
from mirrorlab.desktop.stylesheet import set_kind, set_live, set_wrong


class AngleEdit(Field):
    """The line where an angle is typed.

    Attributes
    ----------
    wrong : bool
        Its text cannot be read; then undo first brings back the last text that could.

    Signals
    -------
    step(int, int)
        The cursor leaves to a neighbouring cell: columns and rows.
    given_up()
        Escape: the last good text is wanted back.
    entered(), left()
        The keyboard came or went.
    """

    step = Signal(int, int)
    given_up = Signal()
    entered = Signal()
    left = Signal()
    wrong = False

    def event(self, event: QEvent) -> bool:
        if self.wrong and event.type() == QEvent.Type.ShortcutOverride and _is_undo(event):
            event.accept()
            return True
        return super().event(event)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        key = event.key()
        if key == Qt.Key.Key_Up:
            self.step.emit(0, -1)
        elif key == Qt.Key.Key_Down:
            self.step.emit(0, 1)
        elif key == Qt.Key.Key_Left and self.cursorPosition() == 0 and not self.hasSelectedText():
            self.step.emit(-1, 0)
        elif key == Qt.Key.Key_Right and self._at_end():
            self.step.emit(1, 0)
        elif key == Qt.Key.Key_Escape or (self.wrong and _is_undo(event)):
            self.given_up.emit()
        else:
            super().keyPressEvent(event)

    def _at_end(self) -> bool:
        return self.cursorPosition() == len(self.text()) and not self.hasSelectedText()

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        if event.reason() != Qt.FocusReason.MouseFocusReason:
            self.selectAll()
        self.entered.emit()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.left.emit()


def _is_undo(event: QEvent) -> bool:
    return isinstance(event, QKeyEvent) and event.matches(QKeySequence.StandardKey.Undo)


class AngleCell(QFrame):
    """One pair's cell.

    Signals
    -------
    typed(int, str)
        The pair and its new text, at each keystroke.
    entered(int), left(int), done(int)
        The keyboard came, went, or Enter was pressed.
    step(int, int, int)
        Pair, columns and rows to go.
    given_up(int)
        The last text that could be read is wanted back.
    """

    typed = Signal(int, str)
    entered = Signal(int)
    left = Signal(int)
    done = Signal(int)
    step = Signal(int, int, int)
    given_up = Signal(int)

    def __init__(self, pair: int, name: str, compact: bool = False, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.pair, self.name = pair, name
        self._good = ""
        self.error = ""
        set_kind(self, "cell")
        self.edit = AngleEdit()
        set_kind(self.edit, "compact" if compact else "cell")
        self.edit.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.edit.setMinimumWidth(30)
        self.edit.setAccessibleName(f"angle between mirrors {name[0]} and {name[1]}")
        self.reading = ReadingLine(8 if compact else 9)
        self._compact = compact
        column = QVBoxLayout(self)
        column.setContentsMargins(2, 1, 2, 3)
        column.setSpacing(0)
        column.addWidget(self.edit)
        column.addWidget(self.reading)
        self.edit.textEdited.connect(lambda text: self.typed.emit(self.pair, text))
        self.edit.entered.connect(lambda: self._live(True))
        self.edit.left.connect(lambda: self._live(False))
        self.edit.returnPressed.connect(lambda: self.done.emit(self.pair))
        self.edit.given_up.connect(lambda: self.given_up.emit(self.pair))
        self.edit.step.connect(lambda dx, dy: self.step.emit(self.pair, dx, dy))

    def _live(self, live: bool) -> None:
        set_live(self, live)
        (self.entered if live else self.left).emit(self.pair)

    @property
    def mark(self) -> ReadingMark:
        """The mark of the angle as it was read."""
        return self.reading.mark

    def show_angle(self, angle: Angle, mark: str) -> None:
        """Show how the angle was read. A text that cannot be read stays until its angle changes elsewhere."""
        if self.error and angle.text == self._good:
            return
        if self.edit.text() != angle.text:
            self.edit.setText(angle.text)
            self.edit.setCursorPosition(0)
        self._good = angle.text
        self._set_error("")
        self.reading.show_reading(mark, short_reading(angle, self._compact))
        self.setToolTip(f"{self.name}: {mark}")
        set_wrong(self, False)

    def show_error(self, message: str) -> None:
        """Say in the cell that its text cannot be read; the text stays."""
        self._set_error(message)
        told = "?" if self._compact else "unreadable" if self.edit.text().strip() else "empty"
        self.reading.show_reading(WRONG, told, "wrong")
        self.setToolTip(message)
        set_wrong(self, True)

    def forget_error(self) -> None:
        """Let the next `show_angle` replace a text that cannot be read."""
        self._set_error("")

    def _set_error(self, message: str) -> None:
        self.error = message
        self.edit.wrong = bool(message)

"""Room that is taken at once and given back late, so that nothing jumps while one types."""

from __future__ import annotations

from PySide6.QtCore import QCoreApplication, QEvent, QObject
from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget
from pytestqt.qtbot import QtBot

from mirrorlab.desktop.parts import Elided
from mirrorlab.desktop.steady import LATER, Room, Steady
from mirrorlab.desktop.window import Window


def test_room_is_taken_at_once_and_given_back_later(qtbot: QtBot) -> None:
    told: list[int] = []
    holder = QObject()
    room = Room(lambda: told.append(room.pixels), holder)
    room.need(100)
    assert told == [100]
    room.need(40)
    assert told == [100]
    room.need(100)  # typed back before the room was given up: nothing moves
    qtbot.wait(LATER + 100)
    assert told == [100]
    room.need(40)
    qtbot.waitUntil(lambda: told == [100, 40])


def test_a_steady_label_is_as_high_as_its_words(qtbot: QtBot) -> None:
    window = QWidget()
    column = QVBoxLayout(window)
    words = QLabel()
    words.setWordWrap(True)
    steady = Steady(words)
    column.addWidget(steady)
    column.addStretch(1)
    window.resize(200, 300)
    qtbot.addWidget(window)
    window.show()
    steady.setText("short")
    qtbot.waitUntil(lambda: steady.height() == words.heightForWidth(steady.width()))
    low = steady.height()
    steady.setText("many words that need more than one line of two hundred pixels " * 3)
    qtbot.waitUntil(lambda: steady.height() == words.heightForWidth(steady.width()) > low)
    steady.setText("short")
    assert steady.height() > low
    qtbot.waitUntil(lambda: steady.height() == low)


class Requests(QObject):
    """Counts what is laid out anew."""

    def __init__(self) -> None:
        super().__init__()
        self.count = 0

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        self.count += event.type() == QEvent.Type.LayoutRequest
        return False


def test_an_elided_label_moves_nothing(qtbot: QtBot) -> None:
    window = QWidget()
    row = QHBoxLayout(window)
    label = Elided("one thing")
    row.addWidget(label)
    qtbot.addWidget(window)
    window.show()
    QCoreApplication.sendPostedEvents()
    requests = Requests()
    window.installEventFilter(requests)
    label.setText("quite another thing, and much longer than the first")
    QCoreApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest.value)
    assert requests.count == 0
    assert label.text() == label.accessibleName() == "quite another thing, and much longer than the first"


def test_typing_does_not_lay_out_the_window(window: Window) -> None:
    """Once there is room for the larger of two findings, going to and fro moves nothing."""
    window.document.set_angle(2, "60")
    window.document.set_angle(2, "45")
    requests = Requests()
    window.centralWidget().installEventFilter(requests)
    window.document.set_angle(2, "60")
    window.document.set_angle(2, "45")
    QCoreApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest.value)
    assert requests.count == 0

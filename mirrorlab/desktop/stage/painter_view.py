"""The view that needs no OpenGL: flat pictures, and pictures in space where OpenGL cannot be had."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QPaintEvent
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.stage.handling import Handling
from mirrorlab.drawing.look import LIGHT_LOOK
from mirrorlab.files.picture_marks import tint
from mirrorlab.files.picture_paint import paint_drawing
from mirrorlab.files.picture_sight import painting


class PainterView(Handling, QWidget):
    """A drawing painted by Qt's painter, turned and zoomed like the other. Signals: see `Handling`."""

    hovered = Signal(object)
    picked = Signal(object, object)
    seed_dragged = Signal(object)
    seed_grabbed = Signal()
    seed_released = Signal()
    camera_changed = Signal(object)

    def __init__(self, look: Any = LIGHT_LOOK, parent: QWidget | None = None) -> None:
        QWidget.__init__(self, parent)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)  # what lies below need not be painted
        self.start_handling(look)

    def refresh_view(self) -> None:
        """Paint anew."""
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        with painting(self) as painter:
            if not self.paint_words(painter):
                painter.fillRect(self.rect(), tint(self._look.ground))
                paint_drawing(painter, self._prepared, self.sight(), self.cut_strokes())
            self.paint_extras(painter)

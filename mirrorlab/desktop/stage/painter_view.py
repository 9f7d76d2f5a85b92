"""The view that needs no OpenGL: flat pictures, and pictures in space where OpenGL cannot be had."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QSize, Signal
from PySide6.QtGui import QColor, QImage
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.stage.kept import KeptPicture
from mirrorlab.drawing.look import LIGHT_LOOK
from mirrorlab.files.picture_paint import paint_under
from mirrorlab.files.picture_sight import painting


class PainterView(KeptPicture, QWidget):
    """A drawing painted by Qt's painter, turned and zoomed like the other. Signals: see `Handling`."""

    hovered = Signal(object)
    picked = Signal(object, object)
    seed_dragged = Signal(object)
    seed_grabbed = Signal()
    seed_released = Signal()
    camera_changed = Signal(object)

    def __init__(self, look: Any = LIGHT_LOOK, parent: QWidget | None = None) -> None:
        QWidget.__init__(self, parent)
        self.start_picture(look)

    def draw_picture(self, size: QSize) -> QImage:
        image = QImage(size, QImage.Format.Format_RGB32)
        image.setDevicePixelRatio(self.devicePixelRatioF())
        image.fill(QColor(self._look.ground))
        with painting(image) as painter:
            paint_under(painter, self._prepared, self.sight(), self.cut_strokes())
        return image

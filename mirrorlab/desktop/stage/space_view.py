"""The OpenGL view of pictures in space: pyqtgraph draws the faces and lines, Qt's painter what lies over them."""

from __future__ import annotations

from typing import Any

import numpy as np
from pyqtgraph.opengl.GLViewWidget import GLViewMixin
from PySide6.QtCore import QSize, Signal
from PySide6.QtGui import QImage, QMatrix4x4, QOpenGLContext
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.stage.gl_canvas import Canvas
from mirrorlab.desktop.stage.gl_item import DrawingItem
from mirrorlab.desktop.stage.gl_setup import card
from mirrorlab.desktop.stage.kept import KeptPicture
from mirrorlab.drawing.look import LIGHT_LOOK


class SpaceView(KeptPicture, GLViewMixin, QWidget):
    """A drawing in space with OpenGL. Signals: see `Handling`."""

    hovered = Signal(object)
    picked = Signal(object, object)
    seed_dragged = Signal(object)
    seed_grabbed = Signal()
    seed_released = Signal()
    camera_changed = Signal(object)

    def __init__(self, look: Any = LIGHT_LOOK, parent: QWidget | None = None) -> None:
        self._ready = False
        self._drawn: QSize | None = None
        GLViewMixin.__init__(self, parent)
        self._canvas = Canvas(card().samples, self)
        self._item = DrawingItem()
        self.start_picture(look)
        self.addItem(self._item)
        self.refresh_view()

    def refresh_view(self) -> None:
        """Fill the item's buffers with the drawing, and begin to draw: it goes on while others answer the change."""
        super().refresh_view()
        self._drawn = None
        self.setBackgroundColor(self._look.ground)
        self._item.set_drawing(self._prepared, self._look, self.cut_strokes())
        self._item.set_camera(self._camera)
        if self.isVisible() and self._canvas.make_current():
            self._draw(self.pixels())
            self._canvas.done_current()

    def camera_moved(self) -> None:
        super().camera_moved()
        self._drawn = None
        self._item.set_camera(self._camera)

    # -- what pyqtgraph's items ask their view for ---------------------------------------------------

    def isValid(self) -> bool:
        """Whether the items have been made ready for the context."""
        return self._ready

    def context(self) -> QOpenGLContext:
        """The context they draw with."""
        return self._canvas.context

    def viewMatrix(self) -> QMatrix4x4:
        return QMatrix4x4(*self._item.matrices[0].ravel().tolist())

    def projectionMatrix(self, region: Any, viewport: Any) -> QMatrix4x4:
        return QMatrix4x4(*self._item.matrices[1].ravel().tolist())

    # -- drawing -------------------------------------------------------------------------------------

    def draw_picture(self, size: QSize) -> QImage:
        if not self._canvas.make_current():
            return QImage()
        if self._drawn != size:
            self._draw(size)
        # Nothing shows through the ground, and a picture without transparency is laid down faster.
        image = self._canvas.image()
        self._canvas.done_current()
        image.reinterpretAsFormat(QImage.Format.Format_RGB32)
        return image

    def _draw(self, size: QSize) -> None:
        """Have OpenGL draw; the context must be current. It need not be done when this returns."""
        if not self._ready:
            self.initializeGL()
            self._ready = True
        self._item.matrices = self._camera.matrices(*self._area())
        self._canvas.lead(size)
        self.paintGL()
        self._drawn = size

    def has_picture(self) -> bool:
        """Whether OpenGL works: a context, and an image that is not empty."""
        image = self.picture()
        return not image.isNull() and _is_painted(image)


def _is_painted(image: QImage) -> bool:
    """Whether anything at all was drawn: an unpainted framebuffer is black."""
    small = image.scaled(8, 8).convertToFormat(QImage.Format.Format_RGB32)
    pixels = np.frombuffer(small.constBits(), dtype=np.uint8).reshape(-1, 4)
    return bool(pixels[:, :3].any())

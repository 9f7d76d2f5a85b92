"""The OpenGL view of pictures in space, on pyqtgraph's OpenGL widget."""

from __future__ import annotations

from typing import Any

import numpy as np
from pyqtgraph.opengl import GLViewWidget
from PySide6.QtCore import QSize, Signal
from PySide6.QtGui import QImage, QMatrix4x4
from PySide6.QtOpenGL import QOpenGLPaintDevice
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.stage.gl_item import DrawingItem
from mirrorlab.desktop.stage.gl_setup import card, surface_format
from mirrorlab.desktop.stage.handling import Handling
from mirrorlab.drawing.look import LIGHT_LOOK
from mirrorlab.files.picture_over import paint_over
from mirrorlab.files.picture_sight import painting


class SpaceView(Handling, GLViewWidget):
    """A drawing in space with OpenGL. Signals: see `Handling`."""

    hovered = Signal(object)
    picked = Signal(object, object)
    seed_dragged = Signal(object)
    seed_grabbed = Signal()
    seed_released = Signal()
    camera_changed = Signal(object)

    def __init__(self, look: Any = LIGHT_LOOK, parent: QWidget | None = None) -> None:
        GLViewWidget.__init__(self, parent)
        self.setFormat(surface_format(card().samples))
        self._item = DrawingItem()
        self._over_image: QImage | None = None
        self.start_handling(look)
        self.addItem(self._item)
        self.refresh_view()

    def refresh_view(self) -> None:
        """Fill the item's buffers with the drawing."""
        self.setBackgroundColor(self._look.ground)
        self._item.set_drawing(self._prepared, self._look, self.cut_strokes())
        self._item.set_camera(self._camera)

    def camera_moved(self) -> None:
        self._item.set_camera(self._camera)

    def initializeGL(self) -> None:
        # The card forgets everything when the widget moves to another window.
        self.context().aboutToBeDestroyed.connect(self._forget)
        super().initializeGL()
        if self._item.forgotten:
            self._item.initialize()

    def _forget(self) -> None:
        self.makeCurrent()
        self._item.forget_context()
        self.doneCurrent()

    def viewMatrix(self) -> QMatrix4x4:
        return QMatrix4x4(*self._camera.matrices(*self._area())[0].ravel().tolist())

    def projectionMatrix(self, region: Any, viewport: Any) -> QMatrix4x4:
        return QMatrix4x4(*self._camera.matrices(*self._area())[1].ravel().tolist())

    def paintGL(self) -> None:
        super().paintGL()
        # Not on the widget itself: while a window is grabbed as a picture, such a painter would be led past the
        # framebuffer, and what it paints lost.
        dots = self.devicePixelRatioF()
        device = QOpenGLPaintDevice(QSize(self.deviceWidth(), self.deviceHeight()))
        device.setDevicePixelRatio(dots)
        over = self._over(dots)
        with painting(device) as painter:
            painter.drawImage(0, 0, over)

    def _over(self, dots: float) -> QImage:
        """What lies over the faces, painted by the processor: OpenGL's own painter has no smooth edges."""
        size = QSize(self.deviceWidth(), self.deviceHeight())
        if self._over_image is None or self._over_image.size() != size:
            self._over_image = QImage(size, QImage.Format.Format_ARGB32_Premultiplied)
        image = self._over_image
        image.setDevicePixelRatio(dots)
        image.fill(0)
        with painting(image) as painter:
            paint_over(painter, self._prepared, self.sight())
            self.paint_extras(painter)
        return image

    def has_picture(self) -> bool:
        """Whether OpenGL works: a context, and a framebuffer that is not empty."""
        if not self.isValid():
            return False
        image = self.grabFramebuffer()
        return not image.isNull() and _is_painted(image)


def _is_painted(image: QImage) -> bool:
    """Whether anything at all was drawn: an unpainted framebuffer is black and fully transparent."""
    small = image.scaled(8, 8).convertToFormat(QImage.Format.Format_RGBA8888)
    return bool(np.frombuffer(small.constBits(), dtype=np.uint8).any())

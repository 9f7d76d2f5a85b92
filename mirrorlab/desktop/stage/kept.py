"""What every view paints: faces and lines as an image that is kept while only what lies over them changes."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QImage, QPaintEvent

from mirrorlab.desktop.stage.handling import Handling
from mirrorlab.drawing.look import LIGHT_LOOK
from mirrorlab.files.picture_over import paint_over
from mirrorlab.files.picture_sight import painting


class KeptPicture(Handling):
    """A view whose `draw_picture` makes the image of faces and lines; marks, letters and choices go over it."""

    def start_picture(self, look: Any = LIGHT_LOOK) -> None:
        """Set up; called once by the view's constructor."""
        self._kept: QImage | None = None
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)  # what lies below need not be painted
        self.start_handling(look)

    def draw_picture(self, size: QSize) -> QImage:
        """Faces and lines as the view draws them, so many pixels of the screen large; null where it cannot."""
        raise NotImplementedError

    def refresh_view(self) -> None:
        """Draw anew."""
        self._kept = None
        self.update()

    def camera_moved(self) -> None:
        self._kept = None

    def picture(self) -> QImage:
        """Faces and lines, drawn anew only when something else is seen."""
        size = self.pixels()
        if self._kept is None or self._kept.size() != size:
            self._kept = self.draw_picture(size)
            self._kept.setDevicePixelRatio(self.devicePixelRatioF())
        return self._kept

    def pixels(self) -> QSize:
        """The view's size in pixels of the screen."""
        dots = self.devicePixelRatioF()
        return QSize(max(1, int(self.width() * dots)), max(1, int(self.height() * dots)))

    def paintEvent(self, event: QPaintEvent) -> None:
        with painting(self) as painter:
            if not self.paint_words(painter):
                painter.drawImage(0, 0, self.picture())
                paint_over(painter, self._prepared, self.sight())
            self.paint_extras(painter)

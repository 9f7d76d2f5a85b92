"""The eye's view on the stage: traced beside the window, coarse while it moves, fine when it stands still."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRect, Qt, QTimer
from PySide6.QtGui import (
    QColor,
    QFont,
    QImage,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QResizeEvent,
    QShowEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QSizePolicy, QWidget

from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.eye_tracing import WARM_JOB, picture_of, traced, warm, warming
from mirrorlab.desktop.glass.glass_section import told, why_no_kind
from mirrorlab.desktop.glass.glass_state import glass_state
from mirrorlab.desktop.glass.workings import assembly_of, kind_of
from mirrorlab.desktop.status import EYE_JOB
from mirrorlab.desktop.theming import theming
from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.lengths import AssemblyError

COARSE = 3
"""The quick view has one pixel for so many along each side."""

FINE = 3
"""Rays a pixel along each side in the view that stands still: nine make edges smooth."""

REST = 160
"""Milliseconds without a change after which the fine view is traced."""

ONE_GESTURE = 700
"""Milliseconds between two turns of the wheel, or two arrow keys, that still are one step to undo."""

WHEEL_STEP = 1.1
"""Times the field of view grows or shrinks at one notch."""

NARROWEST, WIDEST = 2.0, 150.0
"""Degrees of the field of view that the wheel reaches."""

ARROW_STEP = 2.0
"""Degrees that an arrow key turns the eye."""

MOST_LIFT = 85.0
"""Degrees that the eye turns up or down."""


class EyeView(QWidget):
    """A traced view that watches the document. Drag turns the eye, the wheel changes the field of view.

    Attributes
    ----------
    note : str
        What is said over the picture, "" when nothing is.
    image : QImage or None
        The newest picture.
    fine : bool
        Whether it is the fine one of what is typed now.
    """

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.image: QImage | None = None
        self.fine = False
        self.note = ""
        self._pixels: NDArray[np.uint8] | None = None
        self._wanted: tuple[Any, ...] | None = None
        self._samples = 0  # of the view being traced, 0 while none is
        self._again = self._starting = False
        self._held: tuple[QPointF, float, float] | None = None
        self._gesture = ""
        self._rest = QTimer(self)
        self._rest.setSingleShot(True)
        self._rest.setInterval(REST)
        self._rest.timeout.connect(self._trace_fine)
        self._pause = QTimer(self)
        self._pause.setSingleShot(True)
        self._pause.setInterval(ONE_GESTURE)
        self.setMinimumSize(160, 120)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.OpenHandCursor)
        self.setAccessibleName("eye's view")
        self.setToolTip(
            "Drag or press the arrow keys to turn the eye; the wheel, + and − change the field of view"
        )
        for signal in (document.arrangement_changed, document.glass_changed, document.seed_changed):
            signal.connect(self.watch)
        theming().changed.connect(self.update)
        document.work.ended.connect(self._ended)

    # -- tracing -------------------------------------------------------------------------------------

    def watch(self) -> None:
        """The document changed: trace anew while in sight."""
        if self.isVisible():
            self.refresh()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self.refresh()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self.watch()

    def pixels(self) -> tuple[int, int]:
        """Size of the fine view."""
        ratio = self.devicePixelRatioF()
        return max(1, round(self.width() * ratio)), max(1, round(self.height() * ratio))

    def refresh(self) -> None:
        """Trace what is typed now, coarse at first."""
        made, said = self._asked()
        self._say(said)
        if made is None:
            self._wanted = None
            self._rest.stop()
            return
        wanted = (*made, self.pixels())
        if wanted == self._wanted:
            return
        self._wanted, self.fine = wanted, False
        if not warm():
            self._warm_up()
            return
        self._rest.start()
        self._trace(coarse=True)

    def _asked(self) -> tuple[tuple[Assembly, tuple[str, str, int]] | None, str]:
        if not kind_of(self.document.arrangement):
            return None, why_no_kind(self.document.arrangement)
        try:
            return (assembly_of(self.document), picture_of(glass_state(self.document))), ""
        except AssemblyError as error:
            return None, told(error)

    def _warm_up(self) -> None:
        self._say(
            "Warming up: the first view on a computer takes about a quarter of a minute, later ones a moment …"
        )
        if WARM_JOB not in self.document.work.running():
            self.document.work.start(WARM_JOB, warming, lambda _: self._ready(), self._failed)

    def _ready(self) -> None:
        self._wanted = None
        self._say("")
        self.watch()

    def _trace(self, coarse: bool) -> None:
        if self._wanted is None:
            return
        if self._samples == 1:
            # A coarse view is a few milliseconds from its end; a fine one gives way.
            self._again = True
            return
        asked, samples = self._wanted, 1 if coarse else FINE
        assembly, picture, size = asked
        from mirrorlab.optics.tracer import preview_size

        part = preview_size(size, COARSE if coarse else 1)

        def job(progress: Any) -> NDArray[np.uint8]:
            return traced(assembly, picture, part, samples, progress)

        self._again, self._starting = False, True
        self.document.work.start(EYE_JOB, job, lambda found: self._came(found, asked, samples), self._failed)
        self._samples, self._starting = samples, False

    def _trace_fine(self) -> None:
        if self._samples == 1:
            self._rest.start()
        else:
            self._trace(coarse=False)

    def _came(self, pixels: NDArray[np.uint8], asked: tuple[Any, ...], samples: int) -> None:
        self._pixels = np.ascontiguousarray(pixels)  # the image only borrows them
        height, width = pixels.shape[:2]
        self.image = QImage(self._pixels.data, width, height, 3 * width, QImage.Format.Format_RGB888)
        self.fine = samples == FINE and asked == self._wanted
        if self._wanted is not None:
            self._say("")
        self.update()
        if self._again and self.isVisible():
            self._trace(coarse=True)

    def _ended(self, name: str) -> None:
        """The view came, failed, or was stopped."""
        if name == EYE_JOB and not self._starting:
            self._samples = 0

    def _failed(self, error: Exception) -> None:
        if not isinstance(error, ValueError | OSError | ImportError):
            raise error
        self._say(str(error))

    def _say(self, note: str) -> None:
        if note != self.note:
            self.note = note
            self.update()

    # -- painting ------------------------------------------------------------------------------------

    def paintEvent(self, event: QPaintEvent) -> None:
        theme = theming().theme
        painter = QPainter(self)
        painter.fillRect(self.rect(), QColor("#121318") if self.image else QColor(theme.raised))
        if self.image is not None:
            painter.setRenderHint(QPainter.RenderHint.SmoothPixmapTransform)
            painter.drawImage(self.rect(), self.image)
        if self.note:
            self._paint_note(painter)
        painter.end()

    def _paint_note(self, painter: QPainter) -> None:
        theme = theming().theme
        font = QFont(self.font())
        painter.setFont(font)
        room = self.rect().adjusted(40, 24, -40, -24)
        flags = int(Qt.TextFlag.TextWordWrap | Qt.AlignmentFlag.AlignCenter)
        box = painter.boundingRect(room, flags, self.note)
        if self.image is not None:
            ground = QColor(theme.panel)
            ground.setAlphaF(0.92)
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.setPen(QColor(theme.line))
            painter.setBrush(ground)
            painter.drawRoundedRect(
                QRect(box).adjusted(-14, -9, 14, 9), theme.spacing.radius, theme.spacing.radius
            )
        painter.setPen(QColor(theme.text if self.image is not None else theme.muted))
        painter.drawText(room, flags, self.note)

    # -- turning -------------------------------------------------------------------------------------

    def _angles(self) -> tuple[float, float]:
        found = []
        for text in glass_state(self.document).turn:
            try:
                found.append(float(text.replace("−", "-").replace(",", ".") or 0))
            except ValueError:
                found.append(0.0)
        return found[0], found[1]

    def _turn(self, right: float, up: float) -> None:
        right = (right + 180) % 360 - 180
        up = max(-MOST_LIFT, min(MOST_LIFT, up))
        texts = tuple("" if abs(value) < 0.05 else f"{value:.1f}" for value in (right, up))
        state = glass_state(self.document)
        if texts != state.turn:
            self.document.set_glass(replace(state, turn=texts), "turn the eye", self._gesture)

    def _field(self) -> float | None:
        if self._wanted is None:
            return None
        return float(np.degrees(self._wanted[0].field_of_view))

    def _zoom(self, times: float) -> None:
        wide = self._field()
        if wide is None:
            return
        self._begin("field of view")
        state = glass_state(self.document)
        text = f"{max(NARROWEST, min(WIDEST, wide * times)):.1f}"
        if text != state.field:
            self.document.set_glass(replace(state, field=text), "field of view", self._gesture)

    def _begin(self, what: str) -> None:
        """Steps that follow each other quickly are one gesture."""
        if not self._pause.isActive() or not self._gesture.startswith(what):
            self._gesture = self.document.new_gesture(what)
        self._pause.start()

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton and self._wanted is not None:
            self._gesture = self.document.new_gesture("turn the eye")
            self._held = (event.position(), *self._angles())
            self.setCursor(Qt.CursorShape.ClosedHandCursor)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        wide = self._field()
        if self._held is None or wide is None:
            return
        start, right, up = self._held
        moved = event.position() - start
        share = wide / max(1, min(self.width(), self.height()))
        self._turn(right - moved.x() * share, up + moved.y() * share)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        self._held = None
        self.setCursor(Qt.CursorShape.OpenHandCursor)

    def wheelEvent(self, event: QWheelEvent) -> None:
        notches = event.angleDelta().y() / 120
        if notches:
            self._zoom(WHEEL_STEP**-notches)
        event.accept()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        steps = {
            Qt.Key.Key_Left: (-1, 0),
            Qt.Key.Key_Right: (1, 0),
            Qt.Key.Key_Up: (0, 1),
            Qt.Key.Key_Down: (0, -1),
        }
        key = Qt.Key(event.key())
        if key in steps:
            self._begin("turn the eye")
            right, up = self._angles()
            self._turn(right + ARROW_STEP * steps[key][0], up + ARROW_STEP * steps[key][1])
        elif key in (Qt.Key.Key_Plus, Qt.Key.Key_Equal, Qt.Key.Key_Minus):
            self._zoom(WHEEL_STEP if key == Qt.Key.Key_Minus else 1 / WHEEL_STEP)
        else:
            super().keyPressEvent(event)

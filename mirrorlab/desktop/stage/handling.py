"""Mouse, wheel and keyboard in a picture: turning, zooming, picking and dragging the seed, the same in every view."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import replace
from typing import Any

import numpy as np
from PySide6.QtCore import QEvent, QPointF, QSize, Qt
from PySide6.QtGui import QFont, QFontMetricsF, QKeyEvent, QMouseEvent, QPainter, QWheelEvent

from mirrorlab.drawing.camera import Camera, home_camera
from mirrorlab.drawing.look import LIGHT_LOOK, Look, named_look
from mirrorlab.drawing.model import Drawing, Key
from mirrorlab.drawing.picking import near_seed, pick, seed_at
from mirrorlab.drawing.prepared import Prepared
from mirrorlab.drawing.strokes import Strokes, strokes
from mirrorlab.files.picture_marks import tint
from mirrorlab.files.picture_paint import Sight

TURN_PER_HEIGHT = 200.0
"""Degrees that a drag over the whole height turns: the surface follows the pointer about as if held."""

KEY_TURN, KEY_TURN_FINE = 7.5, 1.0
"""Degrees an arrow key turns, and with Shift."""

KEY_PAN = 40.0
"""Pixels an arrow key shifts a flat picture."""

ZOOM_STEP = 1.18
"""Factor of a notch of the wheel or of the + key."""

CLICK_REACH = 4.0
"""Pixels the pointer may move between press and release for it to be a click."""

EMPTY = Drawing(title="")

Mouse = Qt.MouseButton
Shift = Qt.KeyboardModifier.ShiftModifier


class Handling:
    """What every view of a drawing does, mixed into a Qt widget that has the signals and `refresh_view`.

    Attributes
    ----------
    hint_of : callable or None
        Gives the words shown beside the pointer for a key; "" shows none.

    Signals
    -------
    hovered(Key or None)
    picked(Key or None, KeyboardModifiers)
        None when the ground was clicked or Escape pressed.
    seed_dragged(ndarray, shape (3,))
        Where the pointer holds the seed, in the drawing's coordinates: a unit vector on a sphere, a point on a
        plane.
    seed_grabbed(), seed_released()
        A drag begins and ends; what happens between is one step for undo.
    camera_changed(Camera)
    """

    hint_of: Callable[[Key], str] | None = None

    def start_handling(self, look: Any = LIGHT_LOOK) -> None:
        """Set up; called once by the view's constructor."""
        self._look: Look = named_look(look)
        self._prepared = Prepared(EMPTY)
        self._camera: Camera = home_camera(EMPTY)
        self._moved = False
        self._cut: tuple[Drawing, Look, float, Strokes] | None = None
        self._said: tuple[str, ...] = ()
        self._selection: frozenset[Key] = frozenset()
        self._hover: Key | None = None
        self._pointer: QPointF | None = None
        self._press: QPointF | None = None
        self._last = QPointF()
        self._holds_seed = False
        self._dragging = False
        self.setMouseTracking(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMinimumSize(120, 120)
        self.setAccessibleName("picture")

    def sizeHint(self) -> QSize:
        return QSize(560, 520)

    # -- what is shown -----------------------------------------------------------------------------

    @property
    def drawing(self) -> Drawing:
        """The drawing that is shown."""
        return self._prepared.drawing

    @property
    def camera(self) -> Camera:
        """Where it is looked at from."""
        return self._camera

    @property
    def look(self) -> Look:
        """Its tints and sizes."""
        return self._look

    def set_drawing(self, drawing: Drawing) -> None:
        """Show a drawing. Where the user has turned or zoomed the picture before, it stays so."""
        before, said = self._prepared.drawing, self._said
        self._said = ()
        if drawing is before:
            if said:
                self.update()
            return
        self._prepared = Prepared(drawing)
        home = home_camera(drawing)
        if drawing.flat != before.flat or drawing.title != before.title:
            self._moved = False
        if self._moved:
            kept = self._camera
            home = replace(home, azimuth=kept.azimuth, elevation=kept.elevation, zoom=kept.zoom, pan=kept.pan)
        elif before.title == drawing.title and not drawing.flat and before is not EMPTY and self._holds_seed:
            home = replace(home, azimuth=self._camera.azimuth, elevation=self._camera.elevation)
        self.setAccessibleDescription(". ".join((drawing.title, *drawing.notes)))
        self._put_camera(home)
        self.refresh_view()

    def say(self, title: str, reason: str) -> None:
        """Show words instead of the drawing, until another is set; the camera stays."""
        self._said = (title, reason)
        self.setAccessibleDescription(f"{title}. {reason}")
        self.update()

    def set_look(self, look: Any) -> None:
        """Change tints and sizes: a Look, a Theme or "light" or "dark"."""
        self._look = named_look(look)
        self.refresh_view()

    def set_selection(self, keys: Iterable[Key] | Key | None) -> None:
        """Show what is chosen: keys, one key, or None."""
        if keys is None:
            chosen: frozenset[Key] = frozenset()
        elif isinstance(keys, tuple) and len(keys) == 2 and isinstance(keys[0], str):
            chosen = frozenset({keys})  # type: ignore[arg-type]
        else:
            chosen = frozenset(keys)  # type: ignore[arg-type]
        if chosen != self._selection:
            self._selection = chosen
            self.update()

    def set_hover(self, key: Key | None) -> None:
        """Show what the pointer is over elsewhere, e.g. in the table."""
        if key != self._hover:
            self._hover = key
            self.update()

    def set_camera(self, camera: Camera) -> None:
        """Look from elsewhere, as if the user had turned the picture."""
        self._moved = True
        self._put_camera(camera)

    def go_home(self) -> None:
        """Look from the drawing's best side, all of it in sight."""
        self._moved = False
        self._put_camera(home_camera(self._prepared.drawing))

    def _put_camera(self, camera: Camera) -> None:
        if camera != self._camera:
            self._camera = camera
            self.camera_moved()
            self.camera_changed.emit(camera)
            self.update()

    def camera_moved(self) -> None:
        """The view's own answer to another camera."""

    def cut_strokes(self) -> Strokes:
        """The drawing's lines cut into dashes, made once."""
        drawing, radius = self._prepared.drawing, self._camera.radius
        kept = self._cut
        if kept is None or kept[0] is not drawing or kept[1] is not self._look or kept[2] != radius:
            kept = (drawing, self._look, radius, strokes(drawing, self._look, radius))
            self._cut = kept
        return kept[3]

    def sight(self) -> Sight:
        """How the drawing is looked at now."""
        return Sight(
            self._camera,
            float(self.width()),
            float(self.height()),
            self._look,
            1.0,
            self._selection,
            self._hover,
        )

    def paint_words(self, painter: QPainter) -> bool:
        """Paint the words that stand where there is no picture; whether there are any."""
        drawing = self._prepared.drawing
        said = self._said
        if not said and drawing.title and not (drawing.faces or drawing.lines or drawing.points):
            said = (drawing.title, "\n".join(drawing.notes))
        if not said:
            return False
        painter.fillRect(self.rect(), tint(self._look.ground))
        font = QFont(list(self._look.label_fonts))
        font.setPointSizeF(1.5 * self.font().pointSizeF())
        middle = Qt.AlignmentFlag.AlignHCenter | Qt.TextFlag.TextWordWrap
        box = self.rect().adjusted(48, 24, -48, -24)
        title = QFontMetricsF(font).boundingRect(box, int(middle), said[0]).height()
        reason = QFontMetricsF(self.font()).boundingRect(box, int(middle), said[1]).height()
        box.setTop(box.top() + max(0, round((box.height() - title - reason) / 2)))
        painter.setFont(font)
        painter.setPen(tint(self._look.ink))
        painter.drawText(box, int(middle), said[0])
        painter.setFont(self.font())
        painter.setPen(tint(self._look.muted))
        painter.drawText(box.adjusted(0, round(title) + 6, 0, 0), int(middle), said[1])
        return True

    def paint_extras(self, painter: QPainter) -> None:
        """What only a view has: words beside the pointer, the focus."""
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        words = ""
        if self.hint_of is not None and self._hover is not None and self._pointer is not None:
            words = self.hint_of(self._hover)
        if words and not self._dragging:
            self._paint_hint(painter, words)
        if self.hasFocus():
            painter.setPen(tint(self._look.accent, 0.7))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRect(self.rect().adjusted(0, 0, -1, -1))

    def _paint_hint(self, painter: QPainter, words: str) -> None:
        look = self._look
        font = QFont(self.font())
        painter.setFont(font)
        metrics = QFontMetricsF(font)
        lines = words.split("\n")
        wide = max(metrics.horizontalAdvance(line) for line in lines) + 16
        high = metrics.height() * len(lines) + 10
        x = min(self._pointer.x() + 16, self.width() - wide - 4)
        y = self._pointer.y() + 18
        if y + high > self.height() - 4:
            y = self._pointer.y() - high - 10
        painter.setPen(tint(look.hairline))
        painter.setBrush(tint(look.ground, 0.94))
        painter.drawRoundedRect(int(x), int(y), int(wide), int(high), 4, 4)
        painter.setPen(tint(look.ink))
        for k, line in enumerate(lines):
            painter.drawText(QPointF(x + 8, y + 5 + metrics.ascent() + k * metrics.height()), line)

    # -- mouse -------------------------------------------------------------------------------------

    def _area(self) -> tuple[float, float]:
        return float(max(1, self.width())), float(max(1, self.height()))

    def pick_at(self, x: float, y: float) -> Key | None:
        """What is seen at a pixel of the view."""
        if self._said:
            return None
        hit = pick(self._prepared, self._camera, x, y, *self._area())
        return None if hit is None else hit.key

    def mousePressEvent(self, event: QMouseEvent) -> None:
        at = event.position()
        self._press, self._last = at, at
        self._dragging = False
        self._holds_seed = event.button() == Mouse.LeftButton and self._near_seed(at)
        if self._holds_seed:
            self.setCursor(Qt.CursorShape.ClosedHandCursor)
        event.accept()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        at = event.position()
        self._pointer = at
        if self._press is None:
            self._hover_at(at)
            return
        if not self._dragging:
            moved = at - self._press
            if abs(moved.x()) + abs(moved.y()) < CLICK_REACH:
                return
            self._dragging = True
            if self._holds_seed:
                self.seed_grabbed.emit()
        if self._holds_seed:
            self._drag_seed(at)
        else:
            self._drag_view(at - self._last, event)
        self._last = at

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        at = event.position()
        clicked = self._press is not None and not self._dragging and event.button() == Mouse.LeftButton
        held = self._holds_seed and self._dragging
        self._press, self._holds_seed, self._dragging = None, False, False
        self.unsetCursor()
        if held:
            self.seed_released.emit()
        elif clicked:
            self.picked.emit(self.pick_at(at.x(), at.y()), event.modifiers())

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        self._press = None
        if event.button() == Mouse.LeftButton:
            self.go_home()

    def leaveEvent(self, event: QEvent) -> None:
        self._pointer = None
        self._say_hover(None)

    def _hover_at(self, at: QPointF) -> None:
        self.setCursor(Qt.CursorShape.OpenHandCursor if self._near_seed(at) else Qt.CursorShape.ArrowCursor)
        self._say_hover(self.pick_at(at.x(), at.y()))
        if self.hint_of is not None and self._hover is not None:
            self.update()

    def _say_hover(self, key: Key | None) -> None:
        if key != self._hover:
            self._hover = key
            self.hovered.emit(key)
            self.update()

    def _near_seed(self, at: QPointF) -> bool:
        return not self._said and near_seed(self._prepared, self._camera, at.x(), at.y(), *self._area())

    def _drag_seed(self, at: QPointF) -> None:
        place = seed_at(self._prepared, self._camera, at.x(), at.y(), *self._area())
        if place is None:
            return
        if self._prepared.drawing.seed_on == "sphere":
            place = place / np.linalg.norm(place)
        self.seed_dragged.emit(place)

    def _drag_view(self, step: QPointF, event: QMouseEvent) -> None:
        pans = event.buttons() & (Mouse.RightButton | Mouse.MiddleButton) or event.modifiers() & Shift
        if self._prepared.drawing.flat or pans:
            self.set_camera(self._camera.panned(step.x(), step.y(), self._area()))
        else:
            rate = TURN_PER_HEIGHT / (max(1.0, min(self._area())) * max(1.0, self._camera.zoom))
            self.set_camera(self._camera.turned(step.x() * rate, -step.y() * rate))

    # -- wheel and keyboard ------------------------------------------------------------------------

    def wheelEvent(self, event: QWheelEvent) -> None:
        turned = event.angleDelta().y()
        if turned:
            at = event.position()
            place = (at.x(), at.y()) if self._prepared.drawing.flat else None
            self.set_camera(self._camera.zoomed(ZOOM_STEP ** (turned / 120.0), place, self._area()))
        event.accept()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        key, keys = event.key(), Qt.Key
        arrows = {
            keys.Key_Left: (-1, 0),
            keys.Key_Right: (1, 0),
            keys.Key_Up: (0, 1),
            keys.Key_Down: (0, -1),
        }
        if key in arrows:
            x, y = arrows[key]  # type: ignore[index]
            if self._prepared.drawing.flat:
                self.set_camera(self._camera.panned(-KEY_PAN * x, KEY_PAN * y, self._area()))
            else:
                step = KEY_TURN_FINE if event.modifiers() & Shift else KEY_TURN
                self.set_camera(self._camera.turned(step * x, step * y))
        elif key in (keys.Key_Plus, keys.Key_Equal):
            self.set_camera(self._camera.zoomed(ZOOM_STEP))
        elif key == keys.Key_Minus:
            self.set_camera(self._camera.zoomed(1 / ZOOM_STEP))
        elif key in (keys.Key_Home, keys.Key_0):
            self.go_home()
        elif key == keys.Key_Escape:
            self.picked.emit(None, event.modifiers())
        else:
            event.ignore()
            return
        event.accept()

    def keyReleaseEvent(self, event: QKeyEvent) -> None:
        event.ignore()

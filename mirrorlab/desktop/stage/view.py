"""The view that the window uses: it chooses between OpenGL and the painter, and keeps the one that works."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import Any

from PySide6.QtCore import QTimer, Signal
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QStackedLayout, QWidget

from mirrorlab.desktop.stage.gl_setup import why_no_opengl
from mirrorlab.desktop.stage.painter_view import PainterView
from mirrorlab.drawing.camera import Camera
from mirrorlab.drawing.look import LIGHT_LOOK, Look, named_look
from mirrorlab.drawing.model import Drawing, Key


class StageView(QWidget):
    """A picture. Flat drawings are painted; those in space are drawn with OpenGL, or painted where it fails.

    Attributes
    ----------
    without_opengl : str
        Why pictures in space are painted; "" while OpenGL serves.
    hint_of : callable or None
        Gives the words shown beside the pointer for a key.

    Signals
    -------
    hovered(Key or None), picked(Key or None, KeyboardModifiers), seed_dragged(ndarray), seed_grabbed(),
    seed_released(), camera_changed(Camera)
        See `mirrorlab.desktop.stage.handling.Handling`.
    """

    hovered = Signal(object)
    picked = Signal(object, object)
    seed_dragged = Signal(object)
    seed_grabbed = Signal()
    seed_released = Signal()
    camera_changed = Signal(object)

    def __init__(self, look: Any = LIGHT_LOOK, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._look = named_look(look)
        self._layout = QStackedLayout(self)
        self._painter = self._adopt(PainterView(self._look))
        self._space: Any = None
        self._hint_of: Callable[[Key], str] | None = None
        self._selection: Any = None
        self.without_opengl = why_no_opengl()
        self._tested = False
        self.setFocusProxy(self._painter)

    @property
    def current(self) -> Any:
        """The view in sight: a `SpaceView` or a `PainterView`."""
        return self._layout.currentWidget()

    @property
    def drawing(self) -> Drawing:
        """The drawing that is shown."""
        return self.current.drawing

    @property
    def camera(self) -> Camera:
        """Where it is looked at from."""
        return self.current.camera

    @property
    def look(self) -> Look:
        """Its tints and sizes."""
        return self._look

    @property
    def hint_of(self) -> Callable[[Key], str] | None:
        return self._hint_of

    @hint_of.setter
    def hint_of(self, words: Callable[[Key], str] | None) -> None:
        self._hint_of = words
        for view in self._views():
            view.hint_of = words

    def set_drawing(self, drawing: Drawing) -> None:
        """Show a drawing."""
        view = self._painter if drawing.flat else self._space_view()
        view.set_drawing(drawing)
        if view is not self.current:
            self._layout.setCurrentWidget(view)
            self.setFocusProxy(view)
        if view is self._space and self.isVisible() and not self._tested:
            QTimer.singleShot(0, self._test)

    def say(self, title: str, reason: str) -> None:
        """Show words instead of a drawing, until one is set."""
        self.current.say(title, reason)

    def set_look(self, look: Any) -> None:
        """Change tints and sizes: a Look, a Theme or "light" or "dark"."""
        self._look = named_look(look)
        for view in self._views():
            view.set_look(self._look)

    def set_selection(self, keys: Iterable[Key] | Key | None) -> None:
        """Show what is chosen: keys, one key, or None."""
        self._selection = keys
        for view in self._views():
            view.set_selection(keys)

    def set_hover(self, key: Key | None) -> None:
        """Show what the pointer is over elsewhere, e.g. in the table."""
        self.current.set_hover(key)

    def set_camera(self, camera: Camera) -> None:
        """Look from elsewhere."""
        self.current.set_camera(camera)

    def go_home(self) -> None:
        """Look from the drawing's best side, all of it in sight."""
        self.current.go_home()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._space is not None and not self._tested:
            QTimer.singleShot(0, self._test)

    def _views(self) -> list[Any]:
        return [view for view in (self._painter, self._space) if view is not None]

    def _space_view(self) -> Any:
        if self.without_opengl:
            return self._painter
        if self._space is None:
            from mirrorlab.desktop.stage.space_view import SpaceView

            self._space = self._adopt(SpaceView(self._look))
            self._space.hint_of = self._hint_of
            self._space.set_selection(self._selection)
        return self._space

    def _adopt(self, view: Any) -> Any:
        self._layout.addWidget(view)
        view.hovered.connect(self.hovered)
        view.picked.connect(self.picked)
        view.seed_dragged.connect(self.seed_dragged)
        view.seed_grabbed.connect(self.seed_grabbed)
        view.seed_released.connect(self.seed_released)
        view.camera_changed.connect(self.camera_changed)
        return view

    def _test(self) -> None:
        """Once it is in sight, see whether OpenGL has drawn anything; if not, paint from now on."""
        if self._tested or self._space is None or not self.isVisible():
            return
        self._tested = True
        if self._space.has_picture():
            return
        self.without_opengl = "OpenGL draws an empty picture here"
        broken, self._space = self._space, None
        drawing = broken.drawing
        self._layout.removeWidget(broken)
        broken.deleteLater()
        self.set_drawing(drawing)


def make_view(look: Any = LIGHT_LOOK, parent: QWidget | None = None) -> StageView:
    """A view for one picture.

    Parameters
    ----------
    look : Look, Theme or str
        "light" or "dark".
    """
    return StageView(look, parent)

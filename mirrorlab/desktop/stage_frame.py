"""The stage's frame: one picture or two side by side, each chosen from those there are."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from PySide6.QtCore import QSignalBlocker, Qt, Signal
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import (
    QComboBox,
    QFrame,
    QHBoxLayout,
    QSplitter,
    QStackedWidget,
    QVBoxLayout,
    QWidget,
)

from mirrorlab.desktop.bench import NoPicture
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.parts import Elided, button
from mirrorlab.desktop.pictures import Shelf
from mirrorlab.desktop.printed import as_sentence
from mirrorlab.desktop.seeding import drag
from mirrorlab.desktop.stage import StageView, make_view
from mirrorlab.desktop.stylesheet import set_kind
from mirrorlab.desktop.theming import theming
from mirrorlab.desktop.words import describe
from mirrorlab.drawing.model import Drawing, Key

HINTED = frozenset({"image", "seed", "mirror", "listed"})
"""Parts of a picture that are told beside the pointer as well as in the status line."""

WIDEST_NAME = 15
"""Characters of the widest picture's name; the chooser's width does not depend on which pictures there are."""


class Pane(QFrame):
    """One picture with its chooser.

    Signals
    -------
    says(str)
        What is under the pointer, in words; "" when nothing is.
    pointed(Key or None)
        What is under the pointer.
    chosen(str)
        Another picture was chosen by the user.

    Attributes
    ----------
    words : (str, str) or None
        What is said where there is no picture: what it would be, and why there is none.
    """

    says = Signal(str)
    pointed = Signal(object)
    chosen = Signal(str)

    def __init__(self, document: Document, shelf: Shelf, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document, self.shelf = document, shelf
        self.wanted = name
        self.shown = ""
        self.drawing: Drawing | None = None
        self.view: StageView | None = None
        self._widgets: dict[str, QWidget] = {}
        self._stale = True
        self._gesture = ""
        self.chooser = QComboBox()
        set_kind(self.chooser, "quiet")
        self.chooser.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.chooser.setMinimumContentsLength(WIDEST_NAME)
        self.chooser.setAccessibleName("picture")
        self.note = Elided("", "small")
        self.words: tuple[str, str] | None = None
        self.stack = QStackedWidget()
        self.head = QHBoxLayout()
        self.head.setContentsMargins(6, 3, 6, 3)
        self.head.setSpacing(6)
        self.head.addWidget(self.chooser)
        self.head.addWidget(self.note, 1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(self.head)
        column.addWidget(self.stack, 1)
        self.chooser.activated.connect(lambda i: self.choose(self.chooser.itemText(i)))
        for signal in (
            document.arrangement_changed,
            document.seed_changed,
            document.settings_changed,
            document.crystal_changed,
            document.glass_changed,
        ):
            signal.connect(self.watch)
        document.selection_changed.connect(self._show_selection)
        theming().changed.connect(self.wear_theme)

    def choose(self, name: str) -> None:
        """Show another picture."""
        self.wanted = name
        self.refresh()
        self.chosen.emit(name)

    def watch(self) -> None:
        """The document changed: make the picture anew when in sight, else when it comes into sight."""
        self._stale = True
        if self.isVisible():
            self.refresh()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if self._stale:
            self.refresh()

    def refresh(self) -> None:
        """Make the picture anew."""
        self._stale = False
        name = self.wanted if self.shelf.fits(self.wanted) else self.shelf.first()
        self._fill_chooser(name)
        self.shown = name
        try:
            picture = self._widgets.get(name) or self.shelf.take(name)
        except NoPicture as reason:
            self._show_empty(name, as_sentence(str(reason)))
            return
        if isinstance(picture, QWidget):
            self._show_widget(name, picture)
        else:
            self._show_drawing(picture)

    def _fill_chooser(self, name: str) -> None:
        names = self.shelf.names()
        with QSignalBlocker(self.chooser):
            if names != tuple(self.chooser.itemText(i) for i in range(self.chooser.count())):
                self.chooser.clear()
                self.chooser.addItems(names)
            self.chooser.setCurrentText(name)

    def _show_empty(self, title: str, reason: str) -> None:
        self.drawing, self.words = None, (title, reason)
        self.note.setText("")
        self._view().say(title, reason)
        self.stack.setCurrentWidget(self.view)

    def _show_widget(self, name: str, widget: QWidget) -> None:
        self.drawing = self.words = None
        if name not in self._widgets:
            self._widgets[name] = widget
            self.stack.addWidget(widget)
        self.note.setText("")
        self.stack.setCurrentWidget(widget)

    def _show_drawing(self, drawing: Drawing) -> None:
        if not (drawing.faces or drawing.lines or drawing.points):
            self._show_empty(drawing.title, "\n".join(map(as_sentence, drawing.notes)))
            return
        self.drawing, self.words = drawing, None
        self.note.setText(_told(drawing.notes))
        self.note.setToolTip(drawing.frame)
        view = self._view()
        view.set_drawing(drawing)
        view.set_selection(self.document.selection)
        self.stack.setCurrentWidget(view)

    def _view(self) -> StageView:
        """The view of drawings, made when first needed."""
        if self.view is None:
            self.view = make_view(theming().theme)
            self.view.hint_of = self._hint
            self.view.hovered.connect(self._hover)
            self.view.picked.connect(lambda key, _: self.document.select(key))
            self.view.seed_grabbed.connect(self._grab)
            self.view.seed_dragged.connect(self._drag)
            self.stack.addWidget(self.view)
        return self.view

    def _show_selection(self) -> None:
        if self.view is not None and self.drawing is not None:
            self.view.set_selection(self.document.selection)

    def _hover(self, key: Key | None) -> None:
        self.says.emit(describe(self.document, key))
        self.pointed.emit(key)

    def point_at(self, key: Key | None) -> None:
        """Show what the pointer is over in another picture or in the table."""
        if self.view is not None and self.drawing is not None:
            self.view.set_hover(key)

    def _hint(self, key: Key) -> str:
        """Words beside the pointer; none for what lies everywhere, such as chambers."""
        return describe(self.document, key).replace(": ", "\n", 1) if key[0] in HINTED else ""

    def _grab(self) -> None:
        self._gesture = self.document.new_gesture("drag")

    def _drag(self, point: object) -> None:
        place = self.shelf.seed_of(self.shown, np.asarray(point, dtype=np.float64))
        said = drag(self.document, place, self._gesture)
        if said:
            self.says.emit(said)

    def wear_theme(self) -> None:
        """Take the theme's tints."""
        if self.view is not None:
            self.view.set_look(theming().theme)


def _told(notes: Sequence[str]) -> str:
    """Notes of a drawing in one line."""
    return as_sentence("; ".join(notes)).removesuffix(".")


class StageFrame(QFrame):
    """One pane or two side by side.

    Signals
    -------
    says(str)
    doubled(bool)
        Two pictures are shown, or one.
    """

    says = Signal(str)
    doubled = Signal(bool)

    def __init__(self, document: Document, shelf: Shelf, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("stage")
        self.setProperty("kind", "panel")
        self.left = Pane(document, shelf, "Space")
        self.right = Pane(document, shelf, "Stereogram")
        self.right.hide()
        self.double = button("Two pictures", "quiet", "Show two pictures side by side (Ctrl+2)")
        self.double.setCheckable(True)
        self.double.toggled.connect(self._double)
        self.left.head.addWidget(self.double)
        self.split = QSplitter(Qt.Orientation.Horizontal)
        self.split.setChildrenCollapsible(False)
        self.split.setHandleWidth(1)
        for pane in (self.left, self.right):
            pane.says.connect(self.says)
            self.split.addWidget(pane)
            self.split.setStretchFactor(self.split.count() - 1, 1)
        self.left.pointed.connect(self.right.point_at)
        self.right.pointed.connect(self.left.point_at)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.split)

    def point_at(self, key: Key | None) -> None:
        """Show what the pointer is over in the table."""
        for pane in self.panes:
            pane.point_at(key)

    @property
    def panes(self) -> tuple[Pane, ...]:
        """The panes in sight."""
        return tuple(pane for pane in (self.left, self.right) if not pane.isHidden())

    def show_picture(self, name: str) -> None:
        """Show a picture: in the right pane when there are two and the left does not have it already."""
        if self.left.shown == name:
            return
        (self.right if not self.right.isHidden() else self.left).choose(name)

    def _double(self, on: bool) -> None:
        self.right.setVisible(on)
        self.left.head.removeWidget(self.double)
        self.right.head.removeWidget(self.double)
        (self.right if on else self.left).head.addWidget(self.double)
        if on:
            half = max(1, self.split.width() // 2)
            self.split.setSizes([half, half])
        self.doubled.emit(on)

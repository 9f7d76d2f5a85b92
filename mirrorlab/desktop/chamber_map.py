"""A small map of the chamber on the bench, in which the seed is dragged."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from PySide6.QtCore import QTimer, Signal
from PySide6.QtWidgets import QFrame, QVBoxLayout, QWidget

from mirrorlab.desktop.document import Document
from mirrorlab.desktop.pictures import chamber, has_map, seed_on_map
from mirrorlab.desktop.seeding import drag
from mirrorlab.desktop.stage import make_view
from mirrorlab.desktop.stylesheet import set_kind
from mirrorlab.desktop.theming import theming

HEIGHT = 196
SOON = 40
"""Milliseconds after which the small map follows: the picture on the stage comes first."""

ROOM = 0.84
"""Zoom of the small map: leaves room for the letters and angles around the chamber."""


class ChamberMap(QFrame):
    """The map; hidden for arrangements that have none.

    Signals
    -------
    says(str)
        Where the dragged seed stands.
    """

    says = Signal(str)

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self._gesture = ""
        self._later = QTimer(self)
        self._later.setSingleShot(True)
        self._later.setInterval(SOON)
        self._later.timeout.connect(self._draw)
        self.view = make_view(theming().theme)
        self.setFixedHeight(HEIGHT)
        set_kind(self, "card")
        column = QVBoxLayout(self)
        column.setContentsMargins(1, 1, 1, 1)
        column.addWidget(self.view)
        self.view.seed_grabbed.connect(self._grab)
        self.view.seed_dragged.connect(self._drag)
        theming().changed.connect(self._wear)

    def refresh(self) -> None:
        """Show the document's chamber and seed, a moment after finding, picture and table have been shown."""
        shown = has_map(self.document)
        self.setVisible(shown)
        if shown and not self._later.isActive():  # so that it follows a long drag, too
            self._later.start()

    def _draw(self) -> None:
        if not has_map(self.document):
            return
        self._later.stop()
        self.view.set_drawing(chamber(self.document))
        if self.view.camera.zoom == 1.0:
            self.view.set_camera(replace(self.view.camera, zoom=ROOM))

    def _wear(self) -> None:
        self.view.set_look(theming().theme)

    def _grab(self) -> None:
        self._gesture = self.document.new_gesture("drag")

    def _drag(self, place: object) -> None:
        point = seed_on_map(self.document, np.asarray(place, dtype=np.float64))
        said = drag(self.document, point, self._gesture)
        if said:
            self._draw()
            self.says.emit(said)

"""Menus and shortcuts. Everything here is also within reach of the mouse somewhere on the sheet."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Qt
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QHBoxLayout, QMenu, QToolButton, QWidget

from mirrorlab.desktop.help import Help
from mirrorlab.desktop.stylesheet import set_kind
from mirrorlab.desktop.theming import theming
from mirrorlab.desktop.ways_in import fill_samples

if TYPE_CHECKING:
    from mirrorlab.desktop.window import Window

Keys = QKeySequence.StandardKey | str


class Actions(QObject):
    """The window's menus."""

    def __init__(self, window: Window) -> None:
        super().__init__(window)  # as the window's child its links to the theme go with the window
        self._window = window
        self.help = Help(window)
        self.undo = window.document.undo_stack.createUndoAction(window, "Undo")
        self.undo.setShortcuts(QKeySequence.StandardKey.Undo)
        self.redo = window.document.undo_stack.createRedoAction(window, "Redo")
        self.redo.setShortcuts([QKeySequence("Ctrl+Shift+Z"), QKeySequence("Ctrl+Y")])
        self._file_menu()
        self._edit_menu()
        self._view_menu()
        self._help_menu()
        self.corner = self._corner()
        window.menuBar().setCornerWidget(self.corner, Qt.Corner.TopRightCorner)

    def _add(
        self, menu: QMenu, text: str, doing: Callable[[], object], keys: Keys | None = None, hint: str = ""
    ) -> QAction:
        action = menu.addAction(text)
        if keys is not None:
            action.setShortcut(QKeySequence(keys))
        if hint:
            action.setToolTip(hint)
        action.triggered.connect(lambda _=False: doing())
        return action

    def _file_menu(self) -> None:
        filing, standard = self._window.filing, QKeySequence.StandardKey
        menu = self._window.menuBar().addMenu("&Arrangement")
        self._add(menu, "Open…", filing.open, standard.Open)
        self.recent = menu.addMenu("Open recent")
        self.recent.aboutToShow.connect(self._fill_recent)
        fill_samples(menu.addMenu("Samples"), self._window.document)
        menu.addSeparator()
        self.save = self._add(menu, "Save", filing.save, standard.Save)
        self._add(menu, "Save as…", filing.save_as, "Ctrl+Shift+S")
        menu.addSeparator()
        for kind, text in (
            ("csv", "Images as CSV…"),
            ("npy", "Images as NumPy array…"),
            ("picture", "Picture…"),
            ("mesh", "Mesh…"),
        ):
            self._add(menu, text, partial(filing.export, kind))
        self._add(menu, "Rows of the table as CSV…", filing.save_rows)
        menu.addSeparator()
        self._add(menu, "Quit", self._window.close, standard.Quit)

    def _edit_menu(self) -> None:
        document, mirrors = self._window.document, self._window.mirrors
        menu = self._window.menuBar().addMenu("&Edit")
        menu.addAction(self.undo)
        menu.addAction(self.redo)
        menu.addSeparator()
        self._add(menu, "Type angles", lambda: mirrors.triangle.focus_pair(0), "Ctrl+K")
        self._add(menu, "Add mirror", mirrors.add.click, "Ctrl+M")
        self._add(menu, "Remove mirror", mirrors.remove.click, "Ctrl+Shift+M")
        self._add(menu, "Reading of angles", mirrors.settings_button.click)
        menu.addSeparator()
        self._add(menu, "Copy rows", self._window.table.copy_rows, "Ctrl+Shift+C")
        self._add(menu, "Pick nothing", lambda: document.select(None), "Ctrl+D")

    def _view_menu(self) -> None:
        window = self._window
        menu = window.menuBar().addMenu("&View")
        for i, slot in enumerate(window.benches.slots):
            self._add(menu, f"{slot.title} bench", partial(window.benches.show_index, i), f"Alt+{i + 1}")
        menu.addSeparator()
        self._add(menu, "Two pictures", window.stage.double.click, "Ctrl+2")
        self._add(menu, "Evidence", window.band.toggle.click, "Ctrl+E")
        self._add(menu, "Fold the table", window.table.fold.click, "Ctrl+T")
        menu.addSeparator()
        self._add(menu, "Light or dark", self._switch_theme, "Ctrl+L")

    def _help_menu(self) -> None:
        menu = self._window.menuBar().addMenu("&Help")
        self._add(menu, "Keys and marks", self.help.open, QKeySequence.StandardKey.HelpContents)

    def _corner(self) -> QWidget:
        corner = QWidget()
        row = QHBoxLayout(corner)
        row.setContentsMargins(0, 1, 8, 1)
        row.setSpacing(2)
        stack = self._window.document.undo_stack
        for text, doing, can, told in (
            ("Undo", stack.undo, stack.canUndoChanged, stack.undoTextChanged),
            ("Redo", stack.redo, stack.canRedoChanged, stack.redoTextChanged),
        ):
            made = QToolButton()  # not the action's own button: that one would widen with the step's name
            made.setText(text)
            made.setEnabled(False)
            made.setFocusPolicy(Qt.FocusPolicy.NoFocus)
            set_kind(made, "corner")
            made.clicked.connect(doing)
            can.connect(made.setEnabled)
            told.connect(made.setToolTip)
            row.addWidget(made)
        self.lamp = QToolButton()
        self.lamp.setToolTip("Light or dark (Ctrl+L)")
        self.lamp.clicked.connect(self._switch_theme)
        self.lamp.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        set_kind(self.lamp, "corner")
        row.addWidget(self.lamp)
        self._name_lamp()
        theming().changed.connect(self._name_lamp)
        return corner

    def _name_lamp(self) -> None:
        self.lamp.setText("Dark" if theming().theme.name == "light" else "Light")

    def _switch_theme(self) -> None:
        name = "dark" if theming().theme.name == "light" else "light"
        theming().wear(name)
        self._window.settings.setValue("theme", name)

    def _fill_recent(self) -> None:
        self.recent.clear()
        paths = self._window.filing.recent()
        for path in paths:
            self._add(self.recent, str(path), partial(self._window.filing.open_path, path))
        if not paths:
            self.recent.addAction("Nothing yet").setEnabled(False)

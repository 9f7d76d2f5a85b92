"""Which theme the window wears, and the signal that it was changed."""

from __future__ import annotations

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtGui import QColor, QFont, QIcon, QPalette
from PySide6.QtWidgets import QApplication

from mirrorlab.desktop.stylesheet import ICONS, stylesheet
from mirrorlab.desktop.theme import LIGHT, THEMES, Theme


class Theming(QObject):
    """Keeps the application's theme; a child of the application object.

    Attributes
    ----------
    theme : Theme

    Signals
    -------
    changed()
        Another theme: widgets that paint for themselves repaint.
    """

    changed = Signal()

    def __init__(self, app: QApplication) -> None:
        super().__init__(app)
        self.theme: Theme = LIGHT

    def wear(self, name: str) -> None:
        """Put on the theme "light" or "dark": palette, font and stylesheet of the whole application."""
        self.theme = THEMES[name]
        app = QApplication.instance()
        assert isinstance(app, QApplication)
        font = QFont(list(self.theme.fonts.text))
        font.setPointSizeF(self.theme.fonts.text_size)
        app.setFont(font)
        app.setPalette(palette(self.theme))
        app.setStyleSheet(stylesheet(self.theme))
        self.changed.emit()


def theming() -> Theming:
    """The application's theming, made on first use."""
    app = QApplication.instance()
    assert isinstance(app, QApplication)
    kept = getattr(app, "_mirrorlab_theming", None)  # asked at every repaint; searching the children is slow
    if not isinstance(kept, Theming):
        kept = Theming(app)
        app._mirrorlab_theming = kept  # type: ignore[attr-defined]
    return kept


def arrow(way: str) -> QIcon:
    """A small arrow "up", "down" or "right" in the theme's tint."""
    return QIcon(str(ICONS / f"{way}-{theming().theme.name}.svg"))


def system_theme() -> str:
    """The theme that goes with the desktop's own, "light" where it says nothing."""
    app = QApplication.instance()
    assert isinstance(app, QApplication)
    return "dark" if app.styleHints().colorScheme() == Qt.ColorScheme.Dark else "light"


def palette(theme: Theme) -> QPalette:
    """The theme's tints as a palette, for what the stylesheet does not reach."""
    result = QPalette()
    roles = QPalette.ColorRole
    for role, tint in (
        (roles.Window, theme.ground),
        (roles.WindowText, theme.text),
        (roles.Base, theme.raised),
        (roles.AlternateBase, theme.panel),
        (roles.Text, theme.text),
        (roles.Button, theme.raised),
        (roles.ButtonText, theme.text),
        (roles.ToolTipBase, theme.raised),
        (roles.ToolTipText, theme.text),
        (roles.PlaceholderText, theme.muted),
        (roles.Highlight, theme.select),
        (roles.HighlightedText, theme.text),
        (roles.Link, theme.accent),
        (roles.Mid, theme.line),
        (roles.Dark, theme.muted),
        (roles.Light, theme.raised),
    ):
        result.setColor(role, QColor(tint))
    for role in (roles.WindowText, roles.Text, roles.ButtonText):
        result.setColor(QPalette.ColorGroup.Disabled, role, QColor(theme.muted))
    return result

"""Heads of the table's columns, with an arrow where it is sorted."""

from __future__ import annotations

from PySide6.QtCore import QRect, QSize, Qt
from PySide6.QtGui import QColor, QCursor, QFont, QFontMetrics, QPainter
from PySide6.QtWidgets import QHeaderView, QWidget

from mirrorlab.desktop.theming import arrow, theming

INSET, ARROW, GAP = 11, 9, 3
"""Pixels beside a title, of the arrow, and between the two."""

Orders = {Qt.SortOrder.AscendingOrder: "up", Qt.SortOrder.DescendingOrder: "down"}


class Heads(QHeaderView):
    """It paints titles and arrow itself: a style sheet's arrow lies over the end of a title at the right."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(Qt.Orientation.Horizontal, parent)
        self.setSectionsClickable(True)
        self.setHighlightSections(False)
        theming().changed.connect(self.viewport().update)

    def title_font(self) -> QFont:
        """What titles are written in."""
        font = QFont(list(theming().theme.fonts.text))
        font.setPointSizeF(theming().theme.fonts.small_size)
        font.setWeight(QFont.Weight.DemiBold)
        return font

    def places(self, rect: QRect, title: str, side: Qt.AlignmentFlag) -> tuple[QRect, QRect]:
        """Where in a head its title stands, and where its arrow."""
        wide = min(QFontMetrics(self.title_font()).horizontalAdvance(title) + 1, rect.width() - INSET - ARROW)
        right = bool(side & Qt.AlignmentFlag.AlignRight)
        left = rect.right() + 1 - INSET - wide if right else rect.left() + INSET
        text = QRect(left, rect.top(), wide, rect.height())
        beside = min(text.right() + 1 + (0 if right else GAP), rect.right() - ARROW)
        return text, QRect(beside, rect.center().y() - ARROW // 2, ARROW, ARROW)

    def paintSection(self, painter: QPainter, rect: QRect, index: int) -> None:
        theme, model = theming().theme, self.model()
        title = str(model.headerData(index, Qt.Orientation.Horizontal) or "")
        side = model.headerData(index, Qt.Orientation.Horizontal, Qt.ItemDataRole.TextAlignmentRole)
        text, beside = self.places(rect, title, Qt.AlignmentFlag(int(side or 0)))
        over = self.underMouse() and rect.contains(self.viewport().mapFromGlobal(QCursor.pos()))
        painter.fillRect(rect, QColor(theme.panel))
        painter.setFont(self.title_font())
        painter.setPen(QColor(theme.text if over else theme.muted))
        shown = painter.fontMetrics().elidedText(title, Qt.TextElideMode.ElideRight, text.width())
        painter.drawText(text, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter, shown)
        if index == self.sortIndicatorSection():
            arrow(Orders[self.sortIndicatorOrder()]).paint(painter, beside)

    def sectionSizeFromContents(self, index: int) -> QSize:
        size = super().sectionSizeFromContents(index)
        title = str(self.model().headerData(index, Qt.Orientation.Horizontal) or "")
        wide = QFontMetrics(self.title_font()).horizontalAdvance(title) + 2 * INSET + ARROW + GAP
        return QSize(wide, size.height())

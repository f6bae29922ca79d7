"""A sheet as it will be printed, painted page by page."""

from __future__ import annotations

from functools import cache
from typing import TYPE_CHECKING

from PySide6.QtCore import QByteArray, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import (
    QFont,
    QFontDatabase,
    QFontMetricsF,
    QPainter,
    QPainterPath,
    QPen,
    QTransform,
)
from PySide6.QtWidgets import QWidget

from app import theme
from app.mat.paths import MM, add_outline
from core.drawing.sheet import Anchor, Area, Circle, Line, Text, look
from core.formats.glyphs import font_bytes

if TYPE_CHECKING:
    from PySide6.QtGui import QPaintEvent

    from core.drawing.sheet import Group, Item, Sheet

_LETTER = 100  # size in pixels at which letters are outlined, then scaled


class SheetView(QWidget):
    """One page, whole, on the bench."""

    def __init__(self) -> None:
        super().__init__()
        self.setAccessibleName("Preview of the sheet")
        self._sheet: Sheet | None = None

    def show_sheet(self, sheet: Sheet | None) -> None:
        self._sheet = sheet
        words = "nothing to show"
        if sheet is not None:
            width, length = sheet.box.width * MM, sheet.box.length * MM
            words = f"{sheet.title}, {width:.0f} by {length:.0f} mm"
        self.setAccessibleDescription(words)
        self.update()

    def sizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 30, em * 34)

    def minimumSizeHint(self) -> QSize:
        em = self.fontMetrics().height()
        return QSize(em * 16, em * 16)

    def paintEvent(self, _event: QPaintEvent) -> None:
        painter = QPainter(self)
        shades = theme.theme_of(self)
        painter.fillRect(self.rect(), theme.colour(shades.window))
        if self._sheet is None:
            return
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        spare = self.fontMetrics().height()
        box = self._sheet.box
        scale = min(
            (self.width() - 2 * spare) / (box.width * MM),
            (self.height() - 2 * spare) / (box.length * MM),
        )
        left = (self.width() - box.width * MM * scale) / 2
        top = (self.height() - box.length * MM * scale) / 2
        paper = QRectF(left, top, box.width * MM * scale, box.length * MM * scale)
        painter.fillRect(paper.translated(2, 3), theme.colour(shades.shade, 60))
        painter.fillRect(paper, Qt.GlobalColor.white)
        to_page = QTransform(scale, 0, 0, -scale, left - box.left * MM * scale, 0.0)
        to_page *= QTransform.fromTranslate(0.0, paper.bottom() + box.bottom * MM * scale)
        paint_sheet(painter, self._sheet, to_page)


def paint_sheet(painter: QPainter, sheet: Sheet, to_page: QTransform) -> None:
    """Paint all groups of a sheet, millimetres mapped by the transform."""
    for group in sheet.groups:
        painter.save()
        if group.clip is not None:
            clip = QRectF(
                QPointF(group.clip.left * MM, group.clip.bottom * MM),
                QPointF(group.clip.right * MM, group.clip.top * MM),
            )
            painter.setClipRect(to_page.mapRect(clip))
        _paint_group(painter, group, to_page)
        painter.restore()


def _paint_group(painter: QPainter, group: Group, to_page: QTransform) -> None:
    style = look(group.purpose)
    strokes, letters = QPainterPath(), QPainterPath()
    strokes.setFillRule(Qt.FillRule.OddEvenFill)
    letters.setFillRule(Qt.FillRule.WindingFill)
    for item in group.items:
        if isinstance(item, Text):
            letters.addPath(_letters(item))
        else:
            _add_item(strokes, item)
    pen = QPen(Qt.PenStyle.NoPen)
    if style.ink:
        # On a small preview lines thinner than this fade away.
        width = max(style.width * MM * to_page.m11(), 0.6)
        pen = QPen(theme.colour(style.ink), width)
        if style.dash:
            dash = max(style.dash * MM * to_page.m11() / width, 1.0)
            pen.setDashPattern([dash, dash])
    painter.setPen(pen)
    fill = theme.colour(style.fill) if style.fill else Qt.BrushStyle.NoBrush
    painter.setBrush(fill)
    painter.drawPath(to_page.map(strokes))
    if style.ink:
        painter.fillPath(to_page.map(letters), theme.colour(style.ink))


def _add_item(path: QPainterPath, item: Item) -> None:
    if isinstance(item, Area):
        for ring in item.rings:
            add_outline(path, ring)
    elif isinstance(item, Circle):
        radius = item.diameter / 2 * MM
        path.addEllipse(QPointF(item.x * MM, item.y * MM), radius, radius)
    elif isinstance(item, Line):
        path.moveTo(item.points[0][0] * MM, item.points[0][1] * MM)
        for x, y in item.points[1:]:
            path.lineTo(x * MM, y * MM)


def _letters(item: Text) -> QPainterPath:
    """Outlines of a text at its place, millimetres, y up."""
    font = _font()
    path = QPainterPath()
    path.addText(QPointF(0.0, 0.0), font, item.text)
    width = QFontMetricsF(font).horizontalAdvance(item.text)
    shift = {Anchor.START: 0.0, Anchor.MIDDLE: width / 2, Anchor.END: width}[item.anchor]
    scale = item.height * MM / _LETTER
    place = QTransform.fromTranslate(item.x * MM, item.y * MM)
    if not item.upright:
        place.rotate(90)
    place.scale(scale, -scale)
    place.translate(-shift, 0.0)
    return place.map(path)


@cache
def _font() -> QFont:
    number = QFontDatabase.addApplicationFontFromData(QByteArray(font_bytes()))
    font = QFont(QFontDatabase.applicationFontFamilies(number)[0])
    font.setPixelSize(_LETTER)
    font.setHintingPreference(QFont.HintingPreference.PreferNoHinting)
    return font

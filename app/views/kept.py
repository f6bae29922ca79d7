"""A picture that is painted once and kept until what it shows has changed."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtGui import QPainter, QPixmap

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtWidgets import QWidget


class KeptPicture:
    """Picture as large as its widget, sharp at its scale."""

    def __init__(self) -> None:
        self._key: object = None
        self._asked: object = None
        self._picture = QPixmap()

    def has(self, key: object) -> bool:
        return self._key == key

    def shown(self, widget: QWidget, key: object, paint: Callable[[QPainter], None]) -> QPixmap:
        """Return the picture of this key, painted anew where it is another's."""
        if self._key != key:
            ratio = widget.devicePixelRatioF()
            self._picture = QPixmap(widget.size() * ratio)
            self._picture.setDevicePixelRatio(ratio)
            painter = QPainter(self._picture)
            painter.setFont(widget.font())
            paint(painter)
            painter.end()
            self._key = key
        return self._picture

    def paint(
        self, painter: QPainter, widget: QWidget, key: object, paint: Callable[[QPainter], None]
    ) -> None:
        """Paint what a key stands for; it is kept as a picture from the second time on.

        What changes at every paint, as in a drag, is not worth a picture.
        """
        if self._asked == key:
            painter.drawPixmap(0, 0, self.shown(widget, key, paint))
        else:
            self._asked = key
            painter.save()
            paint(painter)
            painter.restore()

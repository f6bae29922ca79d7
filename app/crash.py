"""What happens when Kerfwave itself is wrong: the work is saved first, then it is told."""

from __future__ import annotations

import sys
import traceback
from datetime import datetime
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pathlib import Path
    from types import TracebackType

    from app.recovery import Recovery
    from app.views.notice_bar import NoticeBar


class CrashGuard:
    """Takes errors that nobody caught."""

    def __init__(self, recovery: Recovery, notices: NoticeBar, log: Path) -> None:
        self._recovery, self._notices, self._log = recovery, notices, log
        self._is_busy = False

    def install(self) -> None:
        sys.excepthook = self.take

    def take(
        self, kind: type[BaseException], error: BaseException, trace: TracebackType | None
    ) -> None:
        """Save, write down, tell; once at a time, so that an error in here ends the chain."""
        if self._is_busy or not issubclass(kind, Exception):
            sys.__excepthook__(kind, error, trace)
            return
        self._is_busy = True
        try:
            self._recovery.save()
            lines = "".join(traceback.format_exception(kind, error, trace))
            sys.stderr.write(lines)
            with self._log.open("a", encoding="utf-8") as log:
                log.write(f"{datetime.now().astimezone().isoformat()}\n{lines}\n")
            self._notices.tell("crashed", copy=str(self._recovery.path), log=str(self._log))
        except Exception:
            sys.__excepthook__(kind, error, trace)
        finally:
            self._is_busy = False

"""Long work off the window's thread: a request in, an answer or a refusal back in the window."""

from __future__ import annotations

from dataclasses import dataclass
from threading import Event
from typing import TYPE_CHECKING, Any, Protocol

from PySide6.QtCore import QObject, QRunnable, Qt, QThreadPool, Signal

from core.errors import Cancelled, CoreError

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.progress import Progress


@dataclass(frozen=True)
class Request:
    """One piece of work and who is told how it went.

    Attributes
    ----------
    kind : str
        A newer request of a kind makes older ones stale: they are stopped and not answered.
    work : callable
        Pure; takes a listener that it reports to and that may stop it.
    done : callable
        Takes the answer, in the window's thread.
    failed : callable
        Takes the error that the work raised on purpose.
    stepped : callable
        Takes done and total.
    """

    kind: str
    work: Callable[[Progress], Any]
    done: Callable[[Any], None]
    failed: Callable[[CoreError], None]
    stepped: Callable[[int, int], None] = lambda _done, _total: None


class Runner(Protocol):
    """What runs requests."""

    def start(self, request: Request) -> None: ...
    def stop(self, kind: str) -> None: ...
    def close(self) -> None: ...


class _Listener(QObject):
    """Hears the worker in its thread and tells the window in its own."""

    stepped = Signal(int, int, int)
    answered = Signal(int, object, object)

    def __init__(self, serial: int) -> None:
        super().__init__()
        self.serial = serial
        self.cancelled = Event()

    def step(self, done: int, total: int) -> None:
        if self.cancelled.is_set():
            raise Cancelled
        self.stepped.emit(self.serial, done, total)


class _Worker(QRunnable):
    def __init__(self, listener: _Listener, work: Callable[[Progress], Any]) -> None:
        super().__init__()
        self._listener, self._work = listener, work

    def run(self) -> None:
        answer: Any = None
        problem: BaseException | None = None
        try:
            answer = self._work(self._listener)
        except Exception as error:  # carried to the window's thread, not lost
            problem = error
        self._listener.answered.emit(self._listener.serial, answer, problem)


class JobRunner(QObject):
    """Runs requests in a pool of threads; answers come back by queued signals."""

    def __init__(self) -> None:
        super().__init__()
        self._pool = QThreadPool()
        self._pool.setMaxThreadCount(3)  # field check and settling keep nothing else waiting
        self._serial = 0
        self._running: dict[int, tuple[Request, _Listener]] = {}

    def start(self, request: Request) -> None:
        self.stop(request.kind)
        self._serial += 1
        listener = _Listener(self._serial)
        listener.stepped.connect(self._on_stepped, Qt.ConnectionType.QueuedConnection)
        listener.answered.connect(self._on_answered, Qt.ConnectionType.QueuedConnection)
        self._running[self._serial] = (request, listener)
        self._pool.start(_Worker(listener, request.work))

    def stop(self, kind: str) -> None:
        """Stop the work of a kind; it is not answered."""
        for serial, (request, listener) in list(self._running.items()):
            if request.kind == kind:
                listener.cancelled.set()
                self._running[serial] = (_silenced(request), listener)

    def close(self) -> None:
        """Stop everything and wait until it has."""
        for request, _ in list(self._running.values()):
            self.stop(request.kind)
        for _, listener in self._running.values():
            listener.cancelled.set()
        self._pool.waitForDone()

    def _on_stepped(self, serial: int, done: int, total: int) -> None:
        if serial in self._running:
            self._running[serial][0].stepped(done, total)

    def _on_answered(self, serial: int, answer: object, problem: object) -> None:
        request, _ = self._running.pop(serial)
        if isinstance(problem, Cancelled):
            return
        if isinstance(problem, CoreError):
            request.failed(problem)
        elif isinstance(problem, BaseException):
            raise problem
        else:
            request.done(answer)


class InlineRunner:
    """Runs each request at once, where it is asked for."""

    def start(self, request: Request) -> None:
        class _Here:
            def step(self, done: int, total: int) -> None:
                request.stepped(done, total)

        try:
            answer = request.work(_Here())
        except CoreError as error:
            request.failed(error)
        else:
            request.done(answer)

    def stop(self, kind: str) -> None: ...

    def close(self) -> None: ...


def _silenced(request: Request) -> Request:
    """Request that tells nobody: its answer is stale."""
    return Request(f"{request.kind} (stale)", request.work, lambda _: None, lambda _: None)

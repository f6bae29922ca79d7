"""The field solver in a process of its own: its work never holds up the window.

In a thread of the window it would take turns with the window's own Python, and compiling it
would take all of them. The two talk through a pipe, one question at a time.
"""

from __future__ import annotations

import contextlib
import multiprocessing
import os
import signal
import traceback
from threading import Lock
from typing import TYPE_CHECKING, Any, Final

from core.errors import Cancelled, CoreError, ModelError

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator
    from multiprocessing.connection import Connection
    from multiprocessing.context import SpawnProcess

    from numpy.typing import ArrayLike

    from core.layout.model import Layout
    from core.progress import Progress
    from core.response.model import Response

_DROPPED: Final = "dropped"
_NICENESS: Final = 5  # the window goes first where both want a processor

_THREADS: Final = "OPENBLAS_NUM_THREADS"


_GONE: Final = "field solver: its process has ended; it starts again with the next edit"


class SolverProcess:
    """Answers from any thread; the process starts with the first question."""

    def __init__(self) -> None:
        self._turn, self._speaking = Lock(), Lock()
        self._pipe: Connection | None = None
        self._process: SpawnProcess | None = None
        self._is_closed = False

    def solve(
        self, layout: Layout, frequencies: ArrayLike, progress: Progress, level: str
    ) -> Response:
        """Solve a layout at some frequencies (Hz, rising) on a mesh of some level.

        Raises
        ------
        ModelError
            If the solver refuses, or its process ends.
        Cancelled
            If the progress asks for it, or the window closes.
        """
        with self._turn:
            try:
                pipe = self._open()
                self._say((layout, frequencies, level))
                return _heard(pipe, progress, self.drop)
            except (EOFError, OSError) as error:
                self._end()
                if self._is_closed:
                    raise Cancelled from error
                raise ModelError(_GONE) from error

    def drop(self) -> None:
        """Have the question that is being answered left; it ends at its next step."""
        # A pipe that has just broken is found out by who listens to it.
        with contextlib.suppress(OSError):
            self._say(_DROPPED)

    def close(self) -> None:
        """End the process, whatever it is at."""
        self._is_closed = True
        process = self._process
        if process is not None:
            process.terminate()
        if self._turn.acquire(blocking=False):  # else who listens to the process ends it
            try:
                self._end()
            finally:
                self._turn.release()

    def _say(self, what: object) -> None:
        with self._speaking:
            if self._pipe is not None:
                self._pipe.send(what)

    def _open(self) -> Connection:
        if self._is_closed:
            raise EOFError
        if self._pipe is None:
            context = multiprocessing.get_context("spawn")
            near_end, far_end = context.Pipe()
            process = context.Process(target=_serve, args=(far_end,), daemon=True)
            with _one_thread():
                process.start()
            far_end.close()
            self._pipe, self._process = near_end, process
        return self._pipe

    def _end(self) -> None:
        with self._speaking:
            if self._pipe is not None:
                self._pipe.close()
            self._pipe = None
        if self._process is not None:
            self._process.terminate()
            self._process.join()
            self._process.close()
        self._process = None


class _Telling:
    """Tells the window of each step, and does not wait for it; stops if it has been told to."""

    def __init__(self, pipe: Connection) -> None:
        self._pipe = pipe

    def step(self, done: int, total: int) -> None:
        self._pipe.send(("stepped", (done, total)))
        if self._pipe.poll():
            self._pipe.recv()  # while a question is open there is only one thing to be told
            raise Cancelled


@contextlib.contextmanager
def _one_thread() -> Iterator[None]:
    """Have a new process solve its equations in one thread.

    Two that wait for each other take several times as long where the window or another
    program holds one of two processors, and they wait by turning round and round.
    """
    before = os.environ.get(_THREADS)
    os.environ[_THREADS] = "1"
    try:
        yield
    finally:
        if before is None:
            del os.environ[_THREADS]
        else:
            os.environ[_THREADS] = before


def _heard(pipe: Connection, progress: Progress, drop: Callable[[], None]) -> Response:
    """Listen until the answer comes."""
    is_wanted = True
    while True:
        what, told = pipe.recv()
        if what == "stepped":
            try:
                if is_wanted:
                    progress.step(*told)
            except Cancelled:
                is_wanted = False
                drop()
        elif what == "cancelled" or not is_wanted:
            raise Cancelled
        elif what == "refused":
            raise ModelError(told)
        elif what == "broken":
            raise RuntimeError(told)
        else:
            response: Response = told
            return response


def _serve(pipe: Connection) -> None:
    """Answer questions until the other end is closed."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)  # the window ends this process
    if hasattr(os, "nice"):
        os.nice(_NICENESS)
    with contextlib.suppress(EOFError, OSError):
        while True:
            question = pipe.recv()
            if question != _DROPPED:  # which comes too late where all has been answered
                pipe.send(_answer(question, _Telling(pipe)))


def _answer(question: tuple[Layout, ArrayLike, str], progress: Progress) -> tuple[str, Any]:
    # Loaded here: only this process needs it, and it takes half a second.
    from core.fullwave.mesh import Level  # noqa: PLC0415
    from core.fullwave.respond import respond  # noqa: PLC0415

    layout, frequencies, level = question
    try:
        return "answered", respond(layout, frequencies, progress, Level(level))
    except Cancelled:
        return "cancelled", None
    except CoreError as error:
        return "refused", str(error)
    except (EOFError, OSError):
        raise
    except Exception:  # carried to the window's process, not lost
        return "broken", traceback.format_exc()

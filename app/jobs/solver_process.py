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

from app.jobs.settling import settled
from core.engines import respond_on_mesh
from core.errors import Cancelled, CoreError, ModelError

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator
    from multiprocessing.connection import Connection
    from multiprocessing.context import SpawnProcess

    from numpy.typing import ArrayLike

    from app.jobs.settling import Best, Settled
    from core.design.model import Design
    from core.layout.model import Layout
    from core.layout.tail import Tail
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
        self,
        layout: Layout,
        frequencies: ArrayLike,
        progress: Progress,
        level: str,
        tail: Tail | None = None,
    ) -> Response:
        """Solve a layout at some frequencies (Hz, rising) on a mesh of some level.

        With a cable behind its plate, if one is given.

        Raises
        ------
        ModelError
            If the solver refuses, or its process ends.
        Cancelled
            If the progress asks for it, or the window closes.
        """
        response: Response = self._asked(("solve", layout, frequencies, level, tail), progress)
        return response

    def settle(self, design: Design, progress: Progress, tell: Callable[[Best], None]) -> Settled:
        """Settle a design by field check; tells of each better one on the way.

        Raises
        ------
        ModelError
            If nothing can be settled, or the process ends.
        Cancelled
            If the progress asks for it, or the window closes.
        """
        # It is seldom asked for: the process ends with it and gives its memory back.
        answer: Settled = self._asked(("settle", design), progress, tell, ends=True)
        return answer

    def _asked(
        self,
        question: tuple[Any, ...],
        progress: Progress,
        tell: Callable[[Any], None] = lambda _news: None,
        *,
        ends: bool = False,
    ) -> Any:  # noqa: ANN401 - what comes through the pipe has any type
        with self._turn:
            try:
                pipe = self._open()
                self._say(question)
                return _heard(pipe, progress, tell, self.drop)
            except (EOFError, OSError) as error:
                self._end()
                if self._is_closed:
                    raise Cancelled from error
                raise ModelError(_GONE) from error
            finally:
                if ends:
                    self._end()

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

    def tell(self, best: Best) -> None:
        self._pipe.send(("told", best))


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


def _heard(
    pipe: Connection,
    progress: Progress,
    tell: Callable[[Any], None],
    drop: Callable[[], None],
) -> Any:  # noqa: ANN401 - as above
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
        elif what == "told":
            tell(told)
        elif what == "cancelled" or not is_wanted:
            raise Cancelled
        elif what == "refused":
            raise ModelError(told)
        elif what == "broken":
            raise RuntimeError(told)
        else:
            return told


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


def _solved(
    layout: Layout, frequencies: ArrayLike, level: str, tail: Tail | None, progress: Progress
) -> Response:
    return respond_on_mesh(layout, frequencies, progress, level, tail)


def _settled(design: Design, telling: _Telling) -> Settled:
    return settled(design, telling, telling.tell)


_WORK: Final[dict[str, Callable[..., Any]]] = {"solve": _solved, "settle": _settled}


def _answer(question: tuple[Any, ...], telling: _Telling) -> tuple[str, Any]:
    kind, *arguments = question
    try:
        return "answered", _WORK[kind](*arguments, telling)
    except Cancelled:
        return "cancelled", None
    except CoreError as error:
        return "refused", str(error)
    except (EOFError, OSError):
        raise
    except Exception:  # carried to the window's process, not lost
        return "broken", traceback.format_exc()

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
from core.errors import Cancelled, CoreError, ModelError

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator
    from multiprocessing.connection import Connection
    from multiprocessing.context import SpawnProcess

    from numpy.typing import ArrayLike

    from app.jobs.settling import Best, Settled
    from core.design.model import Design
    from core.layout.model import Layout
    from core.progress import Progress
    from core.response.model import Response

_NICENESS: Final = 5  # the window goes first where both want a processor

_THREADS: Final = "OPENBLAS_NUM_THREADS"


class SolverProcess:
    """Answers from any thread; the process starts with the first question."""

    def __init__(self) -> None:
        self._turn = Lock()
        self._pipe: Connection | None = None
        self._process: SpawnProcess | None = None
        self._is_closed = False

    def solve(
        self, layout: Layout, frequencies: ArrayLike, progress: Progress, level: str
    ) -> Response:
        """Solve a layout at some frequencies (Hz, rising) on a coarse, normal or fine mesh.

        Raises
        ------
        ModelError
            If the solver refuses, or its process ends.
        Cancelled
            If the progress asks for it, or the window closes.
        """
        response: Response = self._asked(("solve", layout, frequencies, level), progress)
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
    ) -> Any:  # noqa: ANN401 - what is sent through the pipe has any type
        with self._turn:
            try:
                pipe = self._open()
                pipe.send(question)
                return _heard(pipe, progress, tell)
            except (EOFError, OSError) as error:
                self._end()
                if self._is_closed:
                    raise Cancelled from error
                raise ModelError("field solver: its process has ended by itself") from error
            finally:
                if ends:
                    self._end()

    def close(self) -> None:
        """End the process, whatever it is at."""
        self._is_closed = True
        process = self._process
        if process is not None:
            process.terminate()

    def _open(self) -> Connection:
        if self._is_closed:
            raise EOFError
        if self._pipe is None:
            context = multiprocessing.get_context("spawn")
            self._pipe, far_end = context.Pipe()
            self._process = context.Process(target=_serve, args=(far_end,), daemon=True)
            with _one_thread():
                self._process.start()
            far_end.close()
        return self._pipe

    def _end(self) -> None:
        if self._pipe is not None:
            self._pipe.close()
        if self._process is not None:
            self._process.join()
        self._pipe = self._process = None


class _Asking:
    """Tells the window of each step and asks whether to go on."""

    def __init__(self, pipe: Connection) -> None:
        self._pipe = pipe

    def step(self, done: int, total: int) -> None:
        self._pipe.send(("stepped", (done, total)))
        if not self._pipe.recv():
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


def _heard(pipe: Connection, progress: Progress, tell: Callable[[Any], None]) -> Any:  # noqa: ANN401 - as above
    """Listen until the answer comes."""
    is_wanted = True
    while True:
        what, told = pipe.recv()
        if what == "told":
            tell(told)
            continue
        if what == "stepped" and is_wanted:
            try:
                progress.step(*told)
            except Cancelled:
                is_wanted = False
        if what == "stepped":
            pipe.send(is_wanted)
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
            pipe.send(_answer(question, _Asking(pipe)))


def _solved(layout: Layout, frequencies: ArrayLike, level: str, progress: Progress) -> Response:
    # Loaded here: only this process needs it, and it takes half a second.
    from core.fullwave.mesh import Level  # noqa: PLC0415
    from core.fullwave.respond import respond  # noqa: PLC0415

    return respond(layout, frequencies, progress, Level(level))


def _settled(design: Design, asking: _Asking) -> Settled:
    return settled(design, asking, asking.tell)


_WORK: Final[dict[str, Callable[..., Any]]] = {"solve": _solved, "settle": _settled}


def _answer(question: tuple[Any, ...], asking: _Asking) -> tuple[str, Any]:
    kind, *arguments = question
    try:
        return "answered", _WORK[kind](*arguments, asking)
    except Cancelled:
        return "cancelled", None
    except CoreError as error:
        return "refused", str(error)
    except (EOFError, OSError):
        raise
    except Exception:  # carried to the window's process, not lost
        return "broken", traceback.format_exc()

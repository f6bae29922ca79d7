"""Work beside the window: answers, refusals, progress, and stopping."""

from threading import Event, current_thread, main_thread

import pytest

from app.crash import CrashGuard
from app.jobs.runner import InlineRunner, JobRunner, Request
from core.errors import CoreError, ModelError


@pytest.fixture
def runner(qapp):
    found = JobRunner()
    yield found
    found.close()


class Told:
    """Who is told."""

    def __init__(self):
        self.answers, self.errors, self.steps, self.threads = [], [], [], []

    def request(self, work, kind="work"):
        return Request(kind, work, self.done, self.errors.append, self.step)

    def done(self, answer):
        self.threads.append(current_thread())
        self.answers.append(answer)

    def step(self, done, total):
        self.steps.append((done, total))


def test_an_answer_comes_back_in_the_windows_thread(runner, qtbot):
    told = Told()
    runner.start(told.request(lambda _progress: current_thread()))
    qtbot.waitUntil(lambda: bool(told.answers))
    assert told.answers[0] is not main_thread()
    assert told.threads == [main_thread()]


def test_a_refusal_is_told_and_not_raised(runner, qtbot):
    told = Told()

    def work(_progress):
        raise ModelError("no answer at 3 GHz")

    runner.start(told.request(work))
    qtbot.waitUntil(lambda: bool(told.errors))
    assert str(told.errors[0]) == "no answer at 3 GHz"


def test_progress_is_told(runner, qtbot):
    told = Told()

    def work(progress):
        for i in range(3):
            progress.step(i, 3)

    runner.start(told.request(work))
    qtbot.waitUntil(lambda: bool(told.answers))
    assert told.steps == [(0, 3), (1, 3), (2, 3)]


def test_a_newer_request_makes_the_older_stale(runner, qtbot):
    told, go = Told(), Event()

    def slow(progress):
        go.wait(5)
        progress.step(0, 1)
        return "old"

    runner.start(told.request(slow))
    runner.start(told.request(lambda _progress: "new"))
    go.set()
    qtbot.waitUntil(lambda: bool(told.answers))
    assert told.answers == ["new"]


def test_a_stopped_request_answers_nobody(runner, qtbot):
    told, begun = Told(), Event()

    def endless(progress):
        begun.set()
        while True:
            progress.step(0, 1)

    runner.start(told.request(endless))
    begun.wait(5)
    runner.stop("work")
    runner.start(told.request(lambda _progress: "after", kind="other"))
    qtbot.waitUntil(lambda: told.answers == ["after"])


def test_closing_waits_for_the_work_to_stop(qapp):
    runner, ended, begun = JobRunner(), Event(), Event()

    def work(progress):
        try:
            begun.set()
            while True:
                progress.step(0, 1)
        finally:
            ended.set()

    runner.start(Told().request(work))
    begun.wait(5)
    runner.close()
    assert ended.is_set()


def test_the_inline_runner_answers_at_once():
    told = Told()
    InlineRunner().start(told.request(lambda progress: progress.step(1, 2) or 5))
    assert (told.answers, told.steps) == ([5], [(1, 2)])


def test_a_bug_in_the_work_is_not_swallowed(runner, qtbot):
    def work(_progress):
        raise ZeroDivisionError

    with qtbot.captureExceptions() as caught:
        runner.start(Told().request(work))
        qtbot.waitUntil(lambda: bool(caught))
    assert caught[0][0] is ZeroDivisionError


class TestCrash:
    def test_a_bug_saves_the_work_writes_a_log_and_is_told(self, window, tmp_path, capsys):
        window.cards.edited.emit("element.width", "50 mm")
        log = tmp_path / "errors.log"
        guard = CrashGuard(window.recovery, window.notices, log)
        error = RuntimeError("a strip with three ends")
        guard.take(RuntimeError, error, None)
        assert window.recovery.path.exists()
        assert "three ends" in log.read_text(encoding="utf-8")
        assert str(window.recovery.path) in window.notices.words
        assert "three ends" in capsys.readouterr().err

    def test_an_error_while_telling_ends_there(self, window, tmp_path, capsys):
        guard = CrashGuard(window.recovery, window.notices, tmp_path / "no" / "folder.log")
        guard.take(CoreError, CoreError("first"), None)
        assert "first" in capsys.readouterr().err

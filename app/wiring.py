"""Which signal of the window goes where."""

from __future__ import annotations

from typing import TYPE_CHECKING, Protocol

from app.mat.bounds import copper_bounds
from app.presenters.check_words import CANCEL, TRY_CABLE

if TYPE_CHECKING:
    from PySide6.QtGui import QAction, QScreen

    from app.curves.panel import CurvesPanel
    from app.document import Document
    from app.field_check import FieldCheck
    from app.mat.mat import Mat
    from app.presenters.cards_presenter import CardsPresenter
    from app.presenters.files import FilesPresenter
    from app.presenters.mat_presenter import MatPresenter
    from app.presenters.readings_presenter import ReadingsPresenter
    from app.presenters.sizing import SizingPresenter
    from app.recovery import Recovery
    from app.settings import Settings
    from app.tail_check import TailCheck
    from app.views.card_column import CardColumn
    from app.views.notice_bar import NoticeBar
    from app.views.readings_view import ReadingsView

_KEYS = """<p><b>On the Mat</b></p>
<p>Drag a white handle, or go to it with Tab and move it with the arrow keys: 0.1 mm a press,
1 mm with Shift, 0.01 mm with Ctrl. Esc puts a drag back. The element and the ground plate stay
about their middle: the side across moves as far the other way.</p>
<p>Wheel: zoom at the pointer. Middle button, Space or the bare mat: pan. Ctrl+0: the whole
plate. Ctrl+2: the copper. Ctrl+1: true size.</p>
<p>F5 shows the copper, F6 the mesh, F7 the solved current, F8 that of the ground plate; F9 lets
it move or holds it.</p>
<p><b>In a field</b></p>
<p>Type a length as you write it: 41.5, 41.5 mm, 4.15 cm, 1 5/8 in, 62 mil. Enter takes it, Esc
takes it back, the up and down keys step it.</p>"""
_ABOUT = """<p><b>Kerfwave</b></p><p>A workbench for laying out, exporting and correcting hand-built
and etched patch antennas. Free software under the MIT licence.</p>"""


class Teller(Protocol):
    """Shows a text."""

    def tell(self, title: str, text: str) -> None: ...


class Window(Protocol):
    """What there is to connect."""

    settings: Settings
    document: Document
    field: FieldCheck
    tail: TailCheck
    window_actions: dict[str, QAction]
    cards: CardColumn
    mat: Mat
    readings: ReadingsView
    curves: CurvesPanel
    notices: NoticeBar
    cards_presenter: CardsPresenter
    mat_presenter: MatPresenter
    readings_presenter: ReadingsPresenter
    sizing: SizingPresenter
    files: FilesPresenter
    recovery: Recovery

    @property
    def asker(self) -> Teller: ...
    def show_place(self, point: object) -> None: ...
    def show_name(self) -> None: ...
    def show_export(self) -> None: ...
    def show_preferences(self) -> None: ...
    def toggle_full_screen(self) -> None: ...
    def screen(self) -> QScreen: ...
    def close(self) -> bool: ...


def connect_views(window: Window) -> None:
    """What the user asks in a panel, to its presenter."""
    cards, mat, hand = window.cards, window.mat, window.mat_presenter
    cards.edited.connect(window.cards_presenter.edit)
    cards.stepped.connect(window.cards_presenter.step)
    cards.acted.connect(window.cards_presenter.act)
    cards.opened.connect(lambda name: window.settings.set("open_card", name))
    for view in (mat.plan, mat.edge):
        view.pull_started.connect(hand.start_pull)
        view.pulled.connect(hand.pull)
        view.pull_ended.connect(hand.end_pull)
        view.pull_cancelled.connect(hand.cancel_pull)
        view.nudged.connect(hand.nudge)
        view.pull_started.connect(lambda _name: window.field.hold(True))
        view.pull_ended.connect(lambda: window.field.hold(False))
        view.pull_cancelled.connect(lambda: window.field.hold(False))
    mat.plan.pointed.connect(window.show_place)
    mat.spacing_taken.connect(hand.take_slider)
    mat.spacing_taken.connect(lambda: window.field.hold(True))
    mat.spacing_left.connect(lambda: window.field.hold(False))
    mat.spacing_set.connect(hand.set_spacing)
    readings = window.readings
    readings.field_asked.connect(cards.focus_field)
    readings.size_asked.connect(window.sizing.start)
    readings.settle_asked.connect(window.sizing.settle)
    readings.accepted.connect(window.sizing.accept)
    readings.discarded.connect(window.sizing.discard)
    readings.stopped.connect(window.sizing.discard)
    readings.check_asked.connect(lambda what: _on_check_asked(window, what))
    window.field.changed.connect(lambda: _on_checked(window))
    window.curves.chosen.connect(lambda name: window.settings.set("curve", name))
    window.curves.match_as_chosen.connect(lambda name: window.settings.set("match_as", name))
    window.notices.closed.connect(
        lambda name: window.settings.set("hints_seen", True) if name == "hints" else None
    )
    window.notices.pressed.connect(lambda name, button: _on_notice(window, name, button))
    window.settings.changed.connect(lambda key, _: _on_setting(window, key))
    # Bound to the window itself, so that they end with it: the stack outlives it by a moment.
    document = window.document
    document.started.connect(window.field.forget)
    for signal in (document.stack.cleanChanged, document.design_changed, document.path_changed):
        signal.connect(window.show_name)


def connect_actions(window: Window) -> None:
    """Commands of the table, to what does them."""
    plan, settings = window.mat.plan, window.settings
    deeds = {
        "new": window.files.new,
        "open": window.files.ask_open,
        "save": window.files.save,
        "save-as": window.files.save_as,
        "template": window.show_export,
        "quit": window.close,
        "size": window.sizing.start,
        "settle": window.sizing.settle,
        "preferences": window.show_preferences,
        "zoom-in": lambda: plan.zoom(1.25),
        "zoom-out": lambda: plan.zoom(0.8),
        "fit": plan.fit,
        "fit-copper": lambda: plan.fit_to(copper_bounds(plan.state.layout)),
        "true-size": lambda: plan.zoom(
            window.screen().physicalDotsPerInch() / 0.0254 / plan.camera.scale
        ),
        "dimensions": lambda: _keep_tick(window, "dimensions", "dimensions"),
        "field-check": lambda: _keep_tick(window, "field-check", "field_check"),
        "full-screen": window.toggle_full_screen,
        "keys": lambda: window.asker.tell("Keys and gestures", _KEYS),
        "about": lambda: window.asker.tell("About Kerfwave", _ABOUT),
    }
    for name, deed in deeds.items():
        window.window_actions[name].triggered.connect(lambda _=False, do=deed: do())
    window.window_actions["dimensions"].setChecked(settings.value("dimensions"))
    window.window_actions["field-check"].setChecked(settings.value("field_check"))


def place_words(point: object) -> str:
    """Where the pointer is, in millimetres and inches."""
    if not isinstance(point, tuple):
        return ""
    x, y = point
    metric = ", ".join(f"{value * 1e3:.2f}".replace("-", "−") for value in (x, y))
    inches = ", ".join(f"{value / 0.0254:.3f}".replace("-", "−") for value in (x, y))
    return f"{metric} mm     {inches} in"


def _on_check_asked(window: Window, what: str) -> None:
    """The one button beside the line about the field check."""
    if what == TRY_CABLE:
        window.tail.start()
    elif what == CANCEL and window.tail.is_busy:
        window.tail.stop()
    elif what == CANCEL:
        window.field.stop()
    else:
        window.field.start()


def _on_notice(window: Window, name: str, button: str) -> None:
    """Buttons of the notices."""
    deeds = {
        ("save-failed", "Save as…"): window.files.save_as,
        ("recovered", "Restore"): window.recovery.restore,
        ("recovered", "Delete"): window.recovery.forget,
    }
    deeds[(name, button)]()


def _on_checked(window: Window) -> None:
    """What an edit has stopped is told until the field check has answered to the edit."""
    if window.field.current is not None:
        window.sizing.forget_stopped()


def _keep_tick(window: Window, action: str, key: str) -> None:
    window.settings.set(key, window.window_actions[action].isChecked())


def _on_setting(window: Window, key: str) -> None:
    if key == "match_as":
        window.curves.show_match_as(window.settings.value(key))
        window.readings_presenter.show()
    elif key == "dimensions":
        shown = window.settings.value(key)
        window.window_actions[key].setChecked(shown)
        window.mat.plan.shows_dimensions = shown
        window.mat.plan.update()
    elif key == "field_check":
        window.window_actions["field-check"].setChecked(window.settings.value(key))

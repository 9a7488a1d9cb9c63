"""The thread behind the screen: entries in order, stale answers dropped, the screen never waits."""

import threading
from collections.abc import Callable
from queue import SimpleQueue

from triage.app.back_room import Answer, BackRoom


class Screen:
    """Stands for the event loop: calls what the thread delivers when told to."""

    def __init__(self) -> None:
        self.inbox: SimpleQueue[Callable[[], None]] = SimpleQueue()
        self.shown: list[object] = []

    def show(self, answer: Answer[object]) -> None:
        self.shown.append(answer.error or answer.value)

    def drain(self) -> None:
        while not self.inbox.empty():
            self.inbox.get()()


def test_a_late_answer_never_overwrites_a_newer_one():
    room, screen, gate = BackRoom(), Screen(), threading.Event()
    room.ask("look", lambda: gate.wait(5) and "old", screen.show, screen.inbox.put)
    room.ask("look", lambda: "new", screen.show, screen.inbox.put)
    gate.set()
    assert room.wait(5)
    screen.drain()
    assert screen.shown == ["new"]
    assert room.dropped == 1


def test_a_waiting_look_is_not_begun_when_a_newer_one_waits():
    room, screen, gate, ran = BackRoom(), Screen(), threading.Event(), []
    room.ask("block", lambda: gate.wait(5), screen.show, screen.inbox.put)
    for letter in "abc":
        room.ask("marking", lambda letter=letter: ran.append(letter), screen.show, screen.inbox.put)
    gate.set()
    assert room.wait(5)
    assert ran == ["c"]


def test_every_entry_is_carried_out_in_order_and_only_the_last_is_shown():
    room, screen, gate, ran = BackRoom(), Screen(), threading.Event(), []
    room.ask("block", lambda: gate.wait(5), lambda _: None, screen.inbox.put)
    for number in range(3):
        room.ask(
            "entry",
            lambda number=number: ran.append(number) or number,
            screen.show,
            screen.inbox.put,
            must_run=True,
        )
    gate.set()
    assert room.wait(5)
    screen.drain()
    assert ran == [0, 1, 2]
    assert screen.shown == [2]


def test_a_refused_entry_is_reported_even_when_a_newer_one_came():
    room, screen = BackRoom(), Screen()

    def refuse() -> object:
        raise ValueError("no")

    room.ask("entry", refuse, screen.show, screen.inbox.put, must_run=True)
    room.ask("entry", lambda: "fine", screen.show, screen.inbox.put, must_run=True)
    assert room.wait(5)
    screen.drain()
    assert isinstance(screen.shown[0], ValueError) and screen.shown[1] == "fine"


def test_forgotten_answers_are_dropped():
    room, screen = BackRoom(), Screen()
    room.ask("open", lambda: "a job", screen.show, screen.inbox.put)
    assert room.wait(5)
    room.forget()
    screen.drain()
    assert screen.shown == []


def test_waiting_for_the_thread_gives_up_in_time():
    room, screen, gate = BackRoom(), Screen(), threading.Event()
    room.ask("slow", lambda: gate.wait(5), screen.show, screen.inbox.put)
    assert not room.wait(0.05)
    assert room.busy
    gate.set()
    assert room.wait(5) and not room.busy

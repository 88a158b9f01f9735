"""Values cross from a worker in order, also where the box is deleted while the worker still sends."""

from __future__ import annotations

import threading

from PySide6.QtCore import QCoreApplication, QEvent, QObject, QThread

from kitplanner.session.mailbox import Mailbox


def test_values_arrive_in_order_in_the_windows_thread(qtbot, qapp):
    box, seen, threads = Mailbox(), [], []
    box.arrived.connect(seen.append)
    box.arrived.connect(lambda _value: threads.append(QThread.currentThread()))
    post = box.open()
    worker = threading.Thread(target=lambda: [post(number) for number in range(100)])
    worker.start()
    qtbot.waitUntil(lambda: len(seen) == 100)
    worker.join()
    assert seen == list(range(100))
    assert set(threads) == {qapp.thread()}
    box.done()


def test_a_box_that_goes_while_the_worker_sends_does_no_harm(qapp):
    for _ in range(50):
        parent = QObject()
        box = Mailbox(parent)
        post, stop = box.open(), threading.Event()

        def send(post=post, stop=stop):
            while not stop.is_set():
                post(object())

        worker = threading.Thread(target=send)
        worker.start()
        parent.deleteLater()
        del parent, box
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
        stop.set()
        worker.join()


def test_a_receiver_may_delete_the_box(qtbot, qapp):
    parent = QObject()
    box, seen = Mailbox(parent), []

    def take(value):
        seen.append(value)
        parent.deleteLater()
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)

    box.arrived.connect(take)
    post = box.open()
    post(1)
    post(2)
    qtbot.waitUntil(lambda: seen == [1])
    qtbot.wait(30)
    assert seen == [1]

"""The collector runs in the window's thread only."""

from __future__ import annotations

import gc
import weakref

from kitplanner.app.collector import WindowCollector


class Knot:
    """An object that only the cyclic collector can free."""

    def __init__(self) -> None:
        self.me = self


def test_start_and_stop_take_and_give_back(qapp) -> None:
    collector = WindowCollector()
    gc.enable()
    collector.start()
    assert not gc.isenabled()
    collector.stop()
    assert gc.isenabled()


def test_collect_frees_cycles_past_the_threshold(qapp) -> None:
    collector = WindowCollector()
    gc.disable()
    gc.collect()
    knot = Knot()
    seen = weakref.ref(knot)
    del knot
    collector.collect()
    assert seen() is not None, "far below the threshold nothing is collected"
    more = [Knot() for _ in range(gc.get_threshold()[0] + 10)]
    collector.collect()
    del more
    assert seen() is None

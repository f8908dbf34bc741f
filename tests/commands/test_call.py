"""Stops: signals become a flag and an exception."""

from __future__ import annotations

import ctypes
import signal
import sys
import threading

import pytest

from routing.commands.call import Call, Stop, listening_for_stops


def test_words_begin_with_the_program():
    assert Call(("plan", "my site.toml")).words == ("overcrest", "plan", "my site.toml")


def test_asks_looks_before_two_dashes_only():
    call = Call(("plan", "--json", "--", "--verbose"))
    assert call.asks("--json")
    assert not call.asks("-v", "--verbose")


def _send_to_oneself(stop, signum):
    with listening_for_stops(stop):
        signal.raise_signal(signum)


@pytest.mark.parametrize("signum", [signal.SIGINT, signal.SIGTERM])
def test_a_signal_sets_the_flag_and_raises(signum):
    stop = Stop()
    before = signal.getsignal(signum)
    with pytest.raises(KeyboardInterrupt):
        _send_to_oneself(stop, signum)
    assert stop.asked
    assert signal.getsignal(signum) is before


def test_more_signals_at_once_do_not_break_off_the_cleaning_up():
    cleaned = []

    def run():
        with listening_for_stops(Stop()):
            try:
                signal.raise_signal(signal.SIGINT)
            finally:
                signal.raise_signal(signal.SIGINT)
                cleaned.append(True)

    with pytest.raises(KeyboardInterrupt):
        run()
    assert cleaned == [True]


def test_a_later_signal_is_heard_again():
    stop = Stop()
    heard = 0

    def run():
        with listening_for_stops(stop):
            signal.raise_signal(signal.SIGINT)

    for _ in range(2):
        try:
            run()
        except KeyboardInterrupt:
            heard += 1
        stop.raised_s -= 5.0
    assert heard == 2


def test_a_swallowed_stop_is_raised_again_at_the_next_report():
    stop = Stop(asked=True)
    with pytest.raises(KeyboardInterrupt):
        stop.check()


def test_an_ignored_signal_stays_ignored():
    before = signal.signal(signal.SIGINT, signal.SIG_IGN)
    try:
        with listening_for_stops(Stop()):
            assert signal.getsignal(signal.SIGINT) is signal.SIG_IGN
    finally:
        signal.signal(signal.SIGINT, before)


def test_another_thread_leaves_signals_alone():
    seen = []

    def run():
        with listening_for_stops(Stop()):
            seen.append(signal.getsignal(signal.SIGINT))

    before = signal.getsignal(signal.SIGINT)
    thread = threading.Thread(target=run)
    thread.start()
    thread.join()
    assert seen == [before]


def test_a_stop_that_python_drops_inside_a_callback_makes_no_noise(capsys):
    seen = []
    usual, sys.unraisablehook = sys.unraisablehook, seen.append
    stop = Stop()
    try:
        with listening_for_stops(stop):
            call_back(lambda: signal.raise_signal(signal.SIGINT))
            assert stop.asked
            call_back(lambda: 1 / 0)
    finally:
        sys.unraisablehook = usual
    assert [unraisable.exc_type for unraisable in seen] == [ZeroDivisionError]


def call_back(function):
    """Call a function from C, where what it raises is dropped."""
    ctypes.CFUNCTYPE(None)(function)()

"""A tap is stamped with the moment at which it happened, also while the loop is busy with something else."""

import sys
import time
from pathlib import Path
from types import SimpleNamespace

import pytest

sys.path.insert(0, str(Path(__file__).parent))
from stamps import centile, measure

from mobileapp.device.stamps import EventWatchStamp, LoopStamp


@pytest.mark.screen
def test_a_busy_loop_does_not_shift_the_stamps():
    """60 taps and keys at up to 10 a second while callbacks hog the loop for 50 ms at a time."""
    found = measure(60, hog=True)
    assert found["told"] == found["sent"]
    assert found["sources"] == ["window server time"]
    assert centile(found["errors_s"], 0.5) < 0.002
    assert centile(found["errors_s"], 0.9) < 0.5 * centile(found["dispatch_s"], 0.9)


def test_a_stamp_that_cannot_be_is_replaced_by_the_loops():
    """A stamp in the future, or half a second old, belongs to another event; the tap itself is kept."""
    source = EventWatchStamp()
    touch = SimpleNamespace(id="mouse1", time_start=time.time())
    source._heard.buttons.extend([time.monotonic() - 3.0, time.monotonic() + 5.0])
    stamp = source.touch(touch)
    assert stamp.source == LoopStamp.name
    assert abs(stamp.time_s - time.monotonic()) < 0.1


def test_each_event_takes_its_own_stamp():
    source = EventWatchStamp()
    now = time.monotonic()
    source._heard.buttons.extend([now - 0.2, now - 0.1])
    source._heard.keys.append(now - 0.05)
    touch = SimpleNamespace(id="mouse1", time_start=time.time())
    assert source.touch(touch).time_s == now - 0.2
    assert source.key().time_s == now - 0.05
    assert source.touch(touch).time_s == now - 0.1


def test_fingers_are_told_apart():
    source = EventWatchStamp()
    now = time.monotonic()
    source._heard.fingers.update({3: now - 0.03, 1: now - 0.01})
    assert source.touch(SimpleNamespace(id=1, time_start=time.time())).time_s == now - 0.01
    assert source.touch(SimpleNamespace(id=3, time_start=time.time())).time_s == now - 0.03


def test_the_servers_count_of_milliseconds_may_turn_over():
    """The window server counts in 32 bits; the stamp comes out right across the turn, and None from elsewhere."""
    now_ms = int(time.monotonic() * 1000)
    assert abs(EventWatchStamp._from_server((now_ms - 40) & 0xFFFFFFFF) - (time.monotonic() - 0.04)) < 0.02
    assert EventWatchStamp._from_server((now_ms - 3_600_000) & 0xFFFFFFFF) is None
    assert EventWatchStamp._from_server((now_ms + 60_000) & 0xFFFFFFFF) is None

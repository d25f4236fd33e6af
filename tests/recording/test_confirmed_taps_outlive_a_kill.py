"""A process killed while it taps as fast as it can: every tap that was confirmed is in the journal afterwards."""

import pytest

from tests.recording.killing import kill_once


@pytest.mark.parametrize("seed", range(12))
def test_no_confirmed_tap_is_lost_by_a_kill(tmp_path, seed):
    """Kill −9 at a random moment; at most the one tap in flight is there without a word."""
    confirmed, lost, unconfirmed = kill_once(tmp_path, seed)
    assert confirmed >= 1
    assert lost == 0
    assert unconfirmed <= 1

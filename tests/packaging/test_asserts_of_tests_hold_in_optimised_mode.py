"""The core's tests can be run in the tablet's mode: the code's asserts are gone there, those of the tests are not."""

import os
import subprocess
import sys

CODE = 'def half(x):\n    """Half of x."""\n    assert x > 0, "an assert that carries behaviour"\n    return x / 2\n'
TESTS = """
import sys
import bisected as code

def test_the_assert_of_the_code_is_gone():
    assert code.half(-1) == -0.5
    assert code.half.__doc__ is None
    assert sys.flags.optimize == 2

def test_a_false_claim():
    assert code.half(2) == 3
"""


def test_a_false_claim_fails_and_the_codes_own_assert_is_gone(tmp_path):
    (tmp_path / "bisected.py").write_text(CODE)
    (tmp_path / "test_claims.py").write_text(TESTS)
    surroundings = {**os.environ, "PYTHONOPTIMIZE": "2", "PYTHONPATH": str(tmp_path)}
    words = [sys.executable, "-m", "pytest", "-q", "--rootdir", str(tmp_path), str(tmp_path)]
    done = subprocess.run(words, cwd=tmp_path, env=surroundings, check=False, capture_output=True, text=True)
    assert done.returncode == 1, done.stderr
    assert "1 failed, 1 passed" in done.stdout
    assert "test_a_false_claim" in done.stdout

"""The packaging tools' own view of the project, made once for all tests of this folder."""

import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
sys.path[:0] = [str(ROOT / "buildspec"), str(Path(__file__).parent)]
import android_staging  # noqa: E402  a script beside the build spec, not a package


@pytest.fixture(scope="session")
def tools(tmp_path_factory):
    """The module that speaks to the packaging tools, with a home folder of its own around it."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("HOME", str(tmp_path_factory.mktemp("home")))
        yield android_staging


@pytest.fixture(scope="session")
def packed(tools, tmp_path_factory):
    """The packing tool after it has packed the lean profile, and the folder with what it packed."""
    return tools.stage("lean", tmp_path_factory.mktemp("lean"))

"""README.md and DEVELOPERS.md name what is there, and what is there is named."""

import re
import subprocess
import sys
from dataclasses import fields
from pathlib import Path

import pytest

from core.bench.setup import SECTIONS

ROOT = Path(__file__).resolve().parents[2]
README = (ROOT / "README.md").read_text("utf-8")
DEVELOPERS = (ROOT / "DEVELOPERS.md").read_text("utf-8")


def test_every_file_that_the_documents_name_is_there():
    named = re.findall(r"`((?:core|mobileapp|tests|buildspec)/[\w/.-]+)`|\]\(([\w/.-]+\.\w+)", README + DEVELOPERS)
    paths = {one for pair in named for one in pair if one}
    assert len(paths) > 20
    assert [path for path in sorted(paths) if not (ROOT / path).exists()] == []


@pytest.mark.parametrize("command", ["fit", "expect", "air", "series", "report", "import"])
def test_every_command_is_in_the_documents_and_answers(command):
    assert f"python -m core {command}" in README + DEVELOPERS
    words = [sys.executable, "-m", "core", command, "--help"]
    told = subprocess.run(words, cwd=ROOT, check=False, capture_output=True, text=True)
    assert told.returncode == 0


def test_the_two_commands_of_the_readme_are_those_of_dev_py():
    script = (ROOT / "buildspec" / "dev.py").read_text("utf-8")
    for word in re.findall(r"buildspec/dev\.py (\w+)", README + DEVELOPERS):
        assert f'"{word}":' in script


def test_the_continuous_run_is_the_readmes_test_command():
    assert (ROOT / ".ci" / "run").read_text("utf-8").rstrip().endswith('buildspec/dev.py" tests')


def test_every_key_of_the_example_is_known():
    example = DEVELOPERS.partition("```toml")[2].partition("```")[0]
    known = {one.name for section in SECTIONS.values() for one in fields(section)}
    keys = set(re.findall(r"^(\w+) =", example, re.MULTILINE))
    assert len(keys) > 20
    assert keys <= known


def test_the_top_level_is_the_fixed_one():
    tracked = subprocess.run(["git", "ls-files"], cwd=ROOT, check=True, capture_output=True, text=True).stdout.split()
    top = {path.split("/")[0] for path in tracked if not path.startswith(".")}
    assert top <= {"README.md", "DEVELOPERS.md", "pyproject.toml", "mobileapp", "core", "tests", "buildspec"}

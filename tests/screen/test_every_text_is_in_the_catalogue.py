"""Both languages are complete, in step with the sources, and drawn by the shipped fonts."""

import ast
import gettext
import importlib.util
import io
import re
from pathlib import Path

import pytest
from fontTools.ttLib import TTFont

from core.bench.setup_check import descriptions, value_fault
from mobileapp import words

ROOT = Path(__file__).resolve().parents[2]
FONTS = ROOT / "mobileapp" / "fonts"


@pytest.fixture(scope="module")
def catalogue():
    spec = importlib.util.spec_from_file_location("catalogue", ROOT / "buildspec" / "catalogue.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.fixture(scope="module")
def german(catalogue):
    return catalogue.read_po(catalogue.LOCALE / "de" / "LC_MESSAGES" / "cooltally.po")


@pytest.fixture(autouse=True)
def _english_again():
    yield
    words.use("en")


def test_every_text_of_the_sources_is_translated(catalogue, german):
    missing = [text for text in catalogue.gather() if not german.get(text)]
    assert not missing, f"run buildspec/catalogue.py and translate: {missing[:5]} and {len(missing)} in all"


def test_no_translation_is_left_over(catalogue, german):
    assert set(german) <= set(catalogue.gather())


def test_the_compiled_catalogue_is_the_written_one(catalogue, german):
    compiled = (catalogue.LOCALE / "de" / "LC_MESSAGES" / "cooltally.mo").read_bytes()
    assert compiled == catalogue.compiled(german, "de")
    read = gettext.GNUTranslations(io.BytesIO(compiled))
    for source, target in german.items():
        assert read.gettext(source) == target


def test_slots_and_markup_are_the_same_in_both_languages(german):
    for source, target in german.items():
        for pattern in (r"\{\w*\}", r"\[/?\w+\]"):
            assert sorted(re.findall(pattern, source)) == sorted(re.findall(pattern, target)), source


def test_a_finished_sentence_of_the_core_is_translated_with_its_numbers(german):
    source = next(text for text in german if text.startswith("The air changed by {0} K"))
    words.use("de")
    spoken = words.say(source.replace("{0}", "+1.7"))
    assert spoken == german[source].replace("{0}", "+1,7")
    assert spoken != source


def test_what_the_checks_of_a_set_up_say_is_translated_to_the_last_part():
    description = descriptions("body")["diameter_m"]
    words.use("de")
    assert words.say(value_fault(description, 16.0)).startswith("ist 16, gebraucht wird eine Zahl von 0,")
    assert words.say(value_fault(description, "x")).startswith("ist der Text 'x', gebraucht wird eine Zahl")


def test_the_sources_of_limits_are_translated():
    words.use("de")
    assert words.say("common practice: at most one reading in ten") == "üblich: höchstens eine von zehn Ablesungen"


def test_an_unknown_sentence_is_shown_as_it_stands():
    words.use("de")
    assert words.say("Nobody has translated this 17 times.") == "Nobody has translated this 17 times."


def _shown_characters(catalogue, german) -> set[str]:
    texts = [*german, *german.values()]
    for path in [*(ROOT / "mobileapp").rglob("*.py")]:
        nodes = ast.walk(ast.parse(path.read_text(encoding="utf-8")))
        texts += [node.value for node in nodes if isinstance(node, ast.Constant) and isinstance(node.value, str)]
    texts += [path.read_text(encoding="utf-8") for path in (ROOT / "mobileapp").rglob("*.kv")]
    return {character for text in texts for character in text if ord(character) > 126}


@pytest.mark.parametrize("face", ["DejaVuSans.ttf", "DejaVuSans-Bold.ttf"])
def test_the_fonts_have_every_sign(catalogue, german, face):
    known = set(TTFont(FONTS / face).getBestCmap())
    assert not {c for c in _shown_characters(catalogue, german) if ord(c) not in known}

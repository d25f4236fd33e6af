"""Every text that a person reads, in the language that was chosen: one catalogue, English the source.

`_` looks a text up as it stands. `say` also takes a finished sentence of the core, with its numbers in it, and
finds the catalogue's sentence that it was made from."""

from __future__ import annotations

import gettext
import re
from functools import lru_cache
from pathlib import Path

LOCALE = Path(__file__).parent / "locale"
LANGUAGES = {"en": "English", "de": "Deutsch"}
_SLOT = re.compile(r"\{(\w*)\}")
_MINUS = re.compile(r"(?<![\w.,/-])-(?=\d)")
_NUMBER = re.compile(r"[+−-]?\d+\.\d+( %)?")


class _Catalogue:
    """The catalogue in use."""

    def __init__(self) -> None:
        self.language = "en"
        self.translations: gettext.NullTranslations = gettext.NullTranslations()

    def sentences(self) -> dict[str, str]:
        """Source to translation, of those with slots for numbers."""
        known = getattr(self.translations, "_catalog", {})
        return {source: target for source, target in known.items() if isinstance(source, str) and "{" in source}


_catalogue = _Catalogue()


def use(language: str) -> None:
    """Speak `language`; English where there is no catalogue for it."""
    path = LOCALE / language / "LC_MESSAGES" / "cooltally.mo"
    if language != "en" and path.is_file():
        with path.open("rb") as file:
            _catalogue.translations = gettext.GNUTranslations(file)
        _catalogue.language = language
    else:
        _catalogue.translations = gettext.NullTranslations()
        _catalogue.language = "en"
    _patterns.cache_clear()


def language() -> str:
    """The language in use."""
    return _catalogue.language


def _(text: str) -> str:
    """The text in the language in use."""
    return _catalogue.translations.gettext(text) if text else ""


def later(text: str) -> str:
    """Marks a text for the catalogue that is kept in English and looked up when it is shown."""
    return text


@lru_cache(maxsize=1)
def _patterns() -> tuple[tuple[re.Pattern[str], tuple[str, ...], str], ...]:
    """Each sentence with slots as a pattern, the longest fixed text first."""

    def pattern(source: str) -> re.Pattern[str]:
        parts = _SLOT.split(source)
        fixed = [re.escape(part) for part in parts[::2]]
        return re.compile("(.*?)".join(fixed) + r"\Z", re.DOTALL)

    ordered = sorted(_catalogue.sentences().items(), key=lambda pair: -len(_SLOT.sub("", pair[0])))
    return tuple((pattern(source), tuple(_SLOT.findall(source)), target) for source, target in ordered)


def say(sentence: str) -> str:
    """A finished sentence of the core in the language in use; as it stands where the catalogue has none."""
    return _MINUS.sub("−", _said(sentence))


def _said(sentence: str) -> str:
    direct = _(sentence)
    if direct != sentence or _catalogue.language == "en":
        return direct
    for pattern, names, target in _patterns():
        found = pattern.match(sentence)
        if found:
            filled = target
            for name, value in zip(names, found.groups(), strict=True):
                filled = filled.replace(f"{{{name}}}", _slot(value))
            return filled
    return sentence


def _slot(value: str) -> str:
    """What stands in a slot: a number with the decimal mark of the language, else a part of a sentence."""
    return value.replace(".", ",") if _NUMBER.fullmatch(value) else say(value)

"""The one page that the local hand-over shows in the laptop's browser."""

from __future__ import annotations

from dataclasses import dataclass
from html import escape

_STYLE = (
    "body{font:1.1rem/1.5 system-ui,sans-serif;max-width:34rem;margin:4rem auto;padding:0 1.5rem;"
    "background:#F3EEE3;color:#16262E}"
    "input,button{font:inherit;font-size:1.4rem;padding:.6rem 1rem;border:2px solid #0F5666;border-radius:.5rem}"
    "input{width:9ch;letter-spacing:.15em;background:#FFFCF6;color:#16262E}"
    "button{background:#0F5666;color:#fff}"
    ".told{color:#9C1F1A;font-weight:bold}small{color:#47565C}"
)


@dataclass(frozen=True, slots=True)
class PageTexts:
    """The sentences of the page, in the language of the tablet."""

    language: str = "en"
    title: str = "A session from the tablet"
    ask: str = "Type the code that the tablet shows."
    button: str = "Fetch the zip file"
    plain: str = (
        "This page comes over plain HTTP: on this local network the file travels unencrypted. It is there only as "
        "long as the tablet shows its hand-over screen."
    )
    wrong: str = "That was not the code. Tries left: {left}."
    locked: str = "Too many wrong codes. On the tablet, ask for a new code."
    busy: str = "Too many requests at once. Try again in a moment."
    other: str = "There is nothing here."


def page(texts: PageTexts, told: str = "", form: bool = True) -> bytes:
    """The page as bytes: the form for the code, or only what is told."""
    entry = (
        f'<form method="post" action="/session.zip"><p><label for="code">{escape(texts.ask)}</label></p>'
        '<p><input id="code" name="code" inputmode="numeric" autocomplete="off" maxlength="8" autofocus required> '
        f"<button>{escape(texts.button)}</button></p></form>"
    )
    said = f'<p class="told">{escape(told)}</p>' if told else ""
    return (
        f'<!doctype html><html lang="{escape(texts.language)}"><head><meta charset="utf-8">'
        f'<meta name="viewport" content="width=device-width"><title>{escape(texts.title)}</title>'
        f"<style>{_STYLE}</style></head><body><h1>{escape(texts.title)}</h1>{said}{entry if form else ''}"
        f"<p><small>{escape(texts.plain)}</small></p></body></html>"
    ).encode()

"""The catalogue of texts: `python buildspec/catalogue.py` gathers every text from the sources into the .pot file,
brings each .po up to date without losing a translation, and compiles it.

Texts are the arguments of `_` and `later` in the app, and what a person reads of the core: its sentences, the parts
that the checks of a set-up make sentences of, and the sources of the limits. A formatted one becomes one with slots:
`f"{n} readings"` is kept as `{0} readings`."""

from __future__ import annotations

import ast
import re
import struct
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
LOCALE = ROOT / "mobileapp" / "locale"
LANGUAGES = ("de",)
CORE_SENTENCES = (
    "core/bench/setup.py",
    "core/bench/fields.py",
    "core/judgement",
    "core/recording",
    "core/cooling",
    "core/convection",
    "core/bench/solids.py",
    "core/bench/units.py",
    "core/handover/export.py",
    "core/handover/session_files.py",
    "core/handover/share_server.py",
    "core/handover/sync.py",
)
CORE_PARTS = ("core/bench/setup_check.py", "core/cooling/diagnosis.py", "core/judgement/expect.py")
CORE_WORDS = (
    "above", "below", "a tap at each change", "readings on a beat", "short-cylinder", "wall", "cylinder", "block",
    "sphere", "before the start that you set", "before the curve has settled",
)  # fmt: skip
_IN_KV = re.compile(r"""\b_\(\s*("(?:[^"\\]|\\.)*"|'(?:[^'\\]|\\.)*')\s*\)""")
_SENTENCE = re.compile(r"(?=.*[a-z]{2}.*[a-z]{2})([A-Z{0-9']|h\s).*\s.*[.?!]\Z", re.DOTALL)
_TEXT_ARGUMENT = {"Rule": 2, "Solid": 0}  # which argument is a text, in calls that make a rule or a solid
_PART = re.compile(r"(a|above|and|does|from|holds|is|one of|Row|the|true|where|with) .*", re.DOTALL)


def gather(root: Path = ROOT) -> dict[str, str]:
    """Every text with the file where it was met first, in a settled order."""
    found: dict[str, str] = {}
    for path in sorted((root / "mobileapp").rglob("*.py")):
        for text in _called_texts(ast.parse(path.read_text(encoding="utf-8"))):
            found.setdefault(text, str(path.relative_to(root)))
    for path in sorted((root / "mobileapp").rglob("*.kv")):
        for match in _IN_KV.finditer(path.read_text(encoding="utf-8")):
            found.setdefault(ast.literal_eval(match[1]), str(path.relative_to(root)))
    for part in CORE_SENTENCES:
        place = root / part
        for path in sorted(place.rglob("*.py")) if place.is_dir() else [place]:
            if path.is_file():
                tree = ast.parse(path.read_text(encoding="utf-8"))
                for text in [*_texts(tree, _SENTENCE), *_sources(tree)]:
                    found.setdefault(text, str(path.relative_to(root)))
    for part in CORE_PARTS:
        for text in _texts(ast.parse((root / part).read_text(encoding="utf-8")), _PART):
            found.setdefault(text, part)
    return found | {word: "core" for word in CORE_WORDS if word not in found}


def _called_texts(tree: ast.AST) -> list[str]:
    return [
        node.args[0].value
        for node in ast.walk(tree)
        if isinstance(node, ast.Call)
        and isinstance(node.func, ast.Name)
        and node.func.id in ("_", "later")
        and node.args
        and isinstance(node.args[0], ast.Constant)
        and isinstance(node.args[0].value, str)
    ]


def _docstrings(tree: ast.AST) -> set[int]:
    """Every text that stands by itself: of modules, classes, functions and constants."""
    return {id(node.value) for node in ast.walk(tree) if isinstance(node, ast.Expr)}


def _sources(tree: ast.AST) -> list[str]:
    """Where the limits of the checks come from, with the words it may begin with; and the names of the solids."""
    texts = []
    for node in ast.walk(tree):
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id in _TEXT_ARGUMENT:
            source = node.args[_TEXT_ARGUMENT[node.func.id]]
            texts.append(_with_slots(source) if isinstance(source, ast.JoinedStr) else ast.literal_eval(source))
        named = isinstance(node, ast.Assign) and isinstance(node.targets[0], ast.Name)
        if named and node.targets[0].id == "COMMON_PRACTICE":
            texts.append(ast.literal_eval(node.value))
    return texts


def _texts(tree: ast.AST, wanted: re.Pattern[str]) -> list[str]:
    """The texts of this kind in a module of the core, its docstrings left out."""
    skipped = _docstrings(tree)
    inside = {id(part) for node in ast.walk(tree) if isinstance(node, ast.JoinedStr) for part in node.values}
    texts = []
    for node in ast.walk(tree):
        if id(node) in skipped or id(node) in inside:
            continue
        if isinstance(node, ast.Constant) and isinstance(node.value, str):
            texts.append(node.value)
        elif isinstance(node, ast.JoinedStr):
            texts.append(_with_slots(node))
    return [text for text in texts if wanted.match(text)]


def _with_slots(node: ast.JoinedStr) -> str:
    parts, slot = [], 0
    for part in node.values:
        if isinstance(part, ast.Constant):
            parts.append(str(part.value))
        else:
            parts.append(f"{{{slot}}}")
            slot += 1
    return "".join(parts)


def read_po(path: Path) -> dict[str, str]:
    """Source to translation; an empty translation is one that is still wanted."""
    entries: dict[str, str] = {}
    if not path.is_file():
        return entries
    fields: dict[str, str] = {}
    field = ""

    def close() -> None:
        if "msgid" in fields:
            entries[fields["msgid"]] = fields.get("msgstr", "")
        fields.clear()

    for line in path.read_text(encoding="utf-8").splitlines():
        if line.startswith("#") or not line.strip():
            continue
        if line.startswith("msgid "):
            close()
        if line.startswith(("msgid ", "msgstr ")):
            field = line.split(" ", 1)[0]
            fields[field] = ""
        fields[field] += ast.literal_eval(line.removeprefix(field + " "))
    close()
    entries.pop("", None)
    return entries


def _quoted(text: str) -> str:
    return '"' + text.replace("\\", "\\\\").replace('"', '\\"').replace("\n", "\\n") + '"'


def _header(language: str) -> str:
    return (
        f"Project-Id-Version: cooltally\nLanguage: {language}\nMIME-Version: 1.0\n"
        "Content-Type: text/plain; charset=UTF-8\nContent-Transfer-Encoding: 8bit\n"
    )


def write_po(path: Path, entries: dict[str, str], places: dict[str, str], language: str) -> None:
    path.parent.mkdir(parents=True, exist_ok=True)
    lines = ['msgid ""', f"msgstr {_quoted(_header(language))}"]
    for source, target in entries.items():
        lines += ["", f"#: {places[source]}", f"msgid {_quoted(source)}", f"msgstr {_quoted(target)}"]
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")


def compiled(entries: dict[str, str], language: str) -> bytes:
    """The entries in the binary layout that gettext reads; untranslated ones are left out."""
    pairs = sorted({"": _header(language), **{s: t for s, t in entries.items() if t}}.items())
    ids, texts, offsets = b"", b"", []
    for source, target in pairs:
        encoded_id, encoded_text = source.encode(), target.encode()
        offsets.append((len(ids), len(encoded_id), len(texts), len(encoded_text)))
        ids += encoded_id + b"\0"
        texts += encoded_text + b"\0"
    count, tables = len(pairs), 28
    ids_at = tables + 16 * count
    texts_at = ids_at + len(ids)
    keys = b"".join(struct.pack("<II", length, ids_at + at) for at, length, _, _ in offsets)
    values = b"".join(struct.pack("<II", length, texts_at + at) for _, _, at, length in offsets)
    head = struct.pack("<IIIIIII", 0x950412DE, 0, count, tables, tables + 8 * count, 0, 0)
    return head + keys + values + ids + texts


def main() -> int:
    places = gather()
    write_po(LOCALE / "cooltally.pot", dict.fromkeys(places, ""), places, "")
    wanting = 0
    for language in LANGUAGES:
        folder = LOCALE / language / "LC_MESSAGES"
        known = read_po(folder / "cooltally.po")
        entries = {source: known.get(source, "") for source in places}
        write_po(folder / "cooltally.po", entries, places, language)
        (folder / "cooltally.mo").write_bytes(compiled(entries, language))
        missing = [source for source, target in entries.items() if not target]
        wanting += len(missing)
        print(f"{language}: {len(entries)} texts, {len(missing)} to be translated")
        for source in missing:
            print(f"  {places[source]}: {source}")
    return 1 if wanting else 0


if __name__ == "__main__":
    sys.exit(main())

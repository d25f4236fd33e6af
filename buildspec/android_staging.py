"""What the packaging tools would make of this project, by their own code and short of the compiler.

python buildspec/android_staging.py OUT [--profile lean|full]   packs the app's files into OUT and lists them

Needs the packages of buildspec/locks/test.txt; neither SDK nor NDK, and no network."""

from __future__ import annotations

import argparse
import contextlib
import os
import re
import shutil
import sys
import tempfile
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

SPEC_FOLDER = Path(__file__).resolve().parent
PROFILES = ("lean", "full")
LARGE_BYTES = 100_000


def spec_text(profile: str) -> str:
    """The build spec of a profile; the full one is the lean one with SciPy, which nothing needs today."""
    text = (SPEC_FOLDER / "buildozer.spec").read_text("utf-8")
    if profile == "lean":
        return text
    full, found = re.subn(r"^(requirements\s*=.*?,\s*numpy)\b", r"\1,scipy", text, flags=re.MULTILINE)
    if found != 1:
        raise ValueError("buildozer.spec: no NumPy in its line 'requirements' beside which SciPy could stand.")
    return full


@contextlib.contextmanager
def _within(folder: Path) -> Iterator[None]:
    before = Path.cwd()
    os.chdir(folder)
    try:
        yield
    finally:
        os.chdir(before)


def configured(profile: str, work: Path) -> Any:
    """The packaging tool with the spec of a profile read and checked; what it makes goes below `work`."""
    from buildozer import Buildozer

    spec = work / f"{profile}.spec"
    work.mkdir(parents=True, exist_ok=True)
    spec.write_text(spec_text(profile), encoding="utf-8")
    with _within(SPEC_FOLDER):
        tool = Buildozer(str(spec))  # ends the process where the spec is wrong
    tool.specfilename = str(SPEC_FOLDER / "buildozer.spec")  # icons lie beside the real one
    tool.config.set("buildozer", "build_dir", str(work / "build"))
    tool.targetname = "android"  # set_target() would write to the home folder
    return tool


def stage(profile: str, work: Path) -> tuple[Any, Path]:
    """The tool, and the folder with exactly the files that it packs."""
    tool = configured(profile, work)
    Path(tool.applibs_dir).mkdir(parents=True, exist_ok=True)
    with _within(SPEC_FOLDER):
        tool.build_application()
    return tool, Path(tool.app_dir)


def staged_files(folder: Path) -> list[str]:
    """All files below a folder, by their path in it."""
    return sorted(path.relative_to(folder).as_posix() for path in folder.rglob("*") if path.is_file())


@dataclass(frozen=True, slots=True)
class Graph:
    """What the tool chain would build: recipes in their order with their versions, and pure Python packages."""

    bootstrap: str
    recipes: dict[str, str]
    least_ndk_api: int
    pure: tuple[str, ...]


def graph(profile: str, work: Path) -> Graph:
    """Resolve the requirements of a profile with the tool chain's own recipes."""
    from pythonforandroid.bootstrap import Bootstrap
    from pythonforandroid.build import Context
    from pythonforandroid.graph import get_recipe_order_and_bootstrap
    from pythonforandroid.recipe import Recipe

    config = configured(profile, work).config
    context = Context()
    context.ndk_api = config.getint("app", "android.ndk_api")
    names = [name.split("==")[0].lower() for name in config.getlist("app", "requirements")]
    chosen = Bootstrap.get_bootstrap(config.get("app", "p4a.bootstrap"), context)
    order, pure, bootstrap = get_recipe_order_and_bootstrap(context, names, chosen)
    recipes = {name: Recipe.get_recipe(name, context) for name in order}
    return Graph(
        bootstrap=bootstrap.name,
        recipes={name: str(recipe.version) for name, recipe in recipes.items()},
        least_ndk_api=max(getattr(recipe, "min_ndk_api_support", 0) for recipe in recipes.values()),
        pure=tuple(sorted(pure)),
    )


def tool_chain_words(tool: Any) -> tuple[Any, list[str], list[str]]:
    """The target and the two command lines that the packaging tool would hand to the tool chain."""
    from buildozer.targets.android import TargetAndroid

    target = TargetAndroid(tool)
    target.build_mode = "debug"
    calls: list[list[str]] = []

    def record(words: list[str], **_options: Any) -> None:
        calls.append([*words, *target.extra_p4a_args])

    target._p4a = record
    target._update_libraries_references = target._generate_whitelist = lambda _folder: None
    with _within(SPEC_FOLDER):
        target.compile_platform()
        with contextlib.suppress(FileNotFoundError):  # after the call it looks for the SDK's build tools
            target.build_package()
    return target, calls[0], calls[1]


def manifest(tool: Any) -> str:
    """AndroidManifest.xml as the tool chain would render it."""
    os.environ["P4A_BUILD_IS_RUNNING_UNITTESTS"] = "1"  # its own switch for use without a distribution
    import jinja2
    import pythonforandroid
    from pythonforandroid.util import load_source

    target, _create, words = tool_chain_words(tool)
    base = Path(pythonforandroid.__file__).parent / "bootstraps"
    build = load_source("buildpy", str(base / "common/build/build.py"))
    build.get_bootstrap_name = lambda: "sdl2"
    build.get_dist_ndk_min_api_level = lambda: int(target.android_minapi)
    arguments, _for_others = build.create_argument_parser().parse_known_args(words[1:])
    arguments.permissions = build.parse_permissions(arguments.permissions)
    arguments.manifest_orientation = build.get_manifest_orientation(
        arguments.orientation, arguments.manifest_orientation
    )
    arguments.add_activity = arguments.add_activity or []
    numbers = "".join(f"{int(part):02d}" for part in arguments.version.split("."))
    arguments.numeric_version = arguments.numeric_version or f"10{arguments.min_sdk_version}{numbers}"
    folders = [str(base / folder / "build/templates") for folder in ("_sdl_common", "common")]
    templates = jinja2.Environment(loader=jinja2.FileSystemLoader(folders))
    return templates.get_template("AndroidManifest.tmpl.xml").render(
        args=arguments,
        service=False,
        service_data=[],
        native_services=[],
        android_api=int(target.android_api),
        debug=True,
        url_scheme="kivy",
    )


def main() -> int:
    """Pack, list, and name what is large."""
    parser = argparse.ArgumentParser(prog="dev.py stage", description="The files that would be packed.")
    parser.add_argument("out", type=Path, help="folder for the packed tree; replaced")
    parser.add_argument("--profile", choices=PROFILES, default="lean")
    chosen = parser.parse_args()
    with tempfile.TemporaryDirectory() as work, contextlib.redirect_stdout(sys.stderr):
        tool, folder = stage(chosen.profile, Path(work))
        shutil.rmtree(chosen.out, ignore_errors=True)
        shutil.copytree(folder, chosen.out)
        (chosen.out.parent / f"{chosen.out.name}.spec").write_text(spec_text(chosen.profile), encoding="utf-8")
        with _within(SPEC_FOLDER):
            name = f"{tool.package_full_name} {tool.get_version()}"
    files = staged_files(chosen.out)
    sizes = {file: (chosen.out / file).stat().st_size for file in files}
    print(*files, sep="\n")
    print(f"{name}, {chosen.profile}: {len(files)} files, {sum(sizes.values()) / 1e6:.2f} MB; over 100 KB:")
    for file, size in sorted(sizes.items(), key=lambda pair: -pair[1]):
        if size > LARGE_BYTES:
            print(f"{size / 1e3:8.0f} KB  {file}")
    return 0


if __name__ == "__main__":
    sys.exit(main())

"""Recipes, manifest and permissions, as the tool chain itself resolves and renders them."""

import re
import shutil
import subprocess
from pathlib import Path
from xml.etree import ElementTree

import pytest

import core

ROOT = Path(__file__).resolve().parents[2]
FRAMEWORK = Path("/usr/share/android-framework-res/framework-res.apk")
NAMESPACE = "{http://schemas.android.com/apk/res/android}"


@pytest.fixture(scope="module")
def manifest(tools, packed):
    tool, _folder = packed
    return tools.manifest(tool)


@pytest.mark.parametrize("profile", ["full", "lean"])
def test_the_recipes_resolve(tools, tmp_path, profile):
    found = tools.graph(profile, tmp_path)
    assert found.bootstrap == "sdl2"
    assert found.least_ndk_api <= 24
    assert found.recipes["python3"] == found.recipes["hostpython3"] == "3.14.2"
    assert found.recipes["numpy"] == "v2.3.0"
    assert found.recipes["kivy"] == "2.3.1"
    assert found.recipes["pyjnius"] == "1.7.0"
    assert "plyer" in found.pure


def test_only_the_full_profile_needs_a_fortran_compiler(tools, tmp_path):
    full, lean = (tools.graph(profile, tmp_path / profile).recipes for profile in ("full", "lean"))
    assert full["scipy"] == "v1.16.2"
    assert set(full) - set(lean) == {"scipy", "fortran", "libopenblas"}


def test_the_permissions_are_those_with_a_reason(manifest):
    """What the manifest asks for is what DEVELOPERS.md gives a reason for, and nothing else."""
    asked = {one.get(f"{NAMESPACE}name") for one in ElementTree.fromstring(manifest).iter("uses-permission")}
    table = (ROOT / "DEVELOPERS.md").read_text("utf-8")
    reasons = dict(re.findall(r"^\| `(android\.permission\.\w+)` \| (.+) \|$", table, re.MULTILINE))
    assert asked == set(reasons)
    assert all(len(reason) > 20 for reason in reasons.values())


def test_data_stay_on_the_tablet_and_the_screen_turns(manifest):
    root = ElementTree.fromstring(manifest)
    application, activity = root.find("application"), root.find("application/activity")
    assert application.get(f"{NAMESPACE}allowBackup") == "false"
    assert activity.get(f"{NAMESPACE}screenOrientation") == "fullUser"
    assert application.find("meta-data").get(f"{NAMESPACE}value") == "0"  # no wake lock: on during a run only


@pytest.fixture
def link(tmp_path):
    """Link a manifest against the platform's own resources."""
    if not (shutil.which("aapt") and FRAMEWORK.exists()):
        pytest.skip("aapt and android-framework-res are not installed; dev.py tests installs them as root on Debian")

    def linked(text):
        (tmp_path / "res/values").mkdir(parents=True, exist_ok=True)
        (tmp_path / "res/mipmap").mkdir(exist_ok=True)
        (tmp_path / "res/values/strings.xml").write_text(
            '<resources><string name="app_name">Cooltally</string><style name="KivySupportCutout"/></resources>'
        )
        shutil.copy(ROOT / "buildspec/artwork/icon.png", tmp_path / "res/mipmap/icon.png")
        named = text.replace("<manifest ", '<manifest package="org.example.cooltally" ', 1)
        (tmp_path / "AndroidManifest.xml").write_text(named)
        words = ["aapt", "package", "-f", "-M", "AndroidManifest.xml", "-S", "res", "-I", str(FRAMEWORK)]
        return subprocess.run([*words, "-F", "app.apk"], cwd=tmp_path, check=False, capture_output=True, text=True)

    return linked


def test_the_manifest_links_against_the_platform(link, manifest, tmp_path):
    done = link(manifest)
    assert done.returncode == 0, done.stderr
    words = ["aapt", "dump", "badging", "app.apk"]
    told = subprocess.run(words, cwd=tmp_path, check=True, capture_output=True, text=True).stdout
    assert "package: name='org.example.cooltally'" in told
    assert f"versionName='{core.__version__}'" in told
    assert "sdkVersion:'29'" in told
    assert "targetSdkVersion:'34'" in told
    assert "launchable-activity: name='org.kivy.android.PythonActivity'" in told


@pytest.mark.parametrize(("right", "wrong"), [("android:exported", "android:exportd"), ("fullUser", "fullUserr")])
def test_a_misspelt_manifest_would_not_link(link, manifest, right, wrong):
    assert right in manifest
    assert link(manifest.replace(right, wrong)).returncode != 0

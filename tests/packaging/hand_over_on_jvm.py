"""The demo session handed over as on Android, on a real JVM.

The words after the script are CLASSES STORE FAILS_AT DOWNLOADS OWN. DOWNLOADS stands for the public download folder,
OWN for the app's own one ("" where there is none). Prints as JSON what came back or was raised, and the store's log."""

import json
import sys
from pathlib import Path

import jnius_config

classes, store, fails_at, downloads, own = sys.argv[1:]
jnius_config.add_options("--add-opens=java.base/java.io=ALL-UNNAMED", f"-Dstore={store}")
if own:
    jnius_config.add_options(f"-Down={own}")
jnius_config.set_classpath(classes)

from jnius import autoclass  # noqa: E402  the JVM starts with its first class

import core.demo  # noqa: E402
from core.handover.export import read_session  # noqa: E402
from mobileapp.device import places  # noqa: E402
from mobileapp.writing import write_session  # noqa: E402

resolver = autoclass("android.content.ContentResolver")
resolver.failsAt = fails_at
places.ANDROID_DOWNLOADS = Path(downloads)
place = places.find_places(on_android=True)[0].path
session = read_session(Path(core.demo.__file__).parent / "session")
told = raised = ""
try:
    done = write_session(session, place, android=True)
    told = done if isinstance(done, str) else " ".join(map(str, done.sentences()))
except Exception as refusal:
    raised = f"{type(refusal).__name__}: {refusal}"
print(json.dumps({"told": told, "raised": raised, "log": list(resolver.log.toArray())}))

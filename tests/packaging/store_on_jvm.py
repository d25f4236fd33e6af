"""One save into the download store of the stub classes, on a real JVM: `store_on_jvm.py CLASSES STORE FAILS_AT`.

Prints as JSON what came back or was raised, the store's log, and its entry. A process can start one JVM only."""

import json
import sys

import jnius_config

classes, store, fails_at = sys.argv[1:]
jnius_config.add_options("--add-opens=java.base/java.io=ALL-UNNAMED", f"-Dstore={store}")
jnius_config.set_classpath(classes)

from jnius import autoclass  # noqa: E402  the JVM starts with its first class

from mobileapp.device.android_downloads import save_to_downloads  # noqa: E402

resolver = autoclass("android.content.ContentResolver")
resolver.failsAt = fails_at
told = raised = ""
try:
    told = save_to_downloads("day one.zip", bytes(range(256)) * 512)
except Exception as refusal:
    raised = f"{type(refusal).__name__}: {refusal}"
entry = resolver.entry
columns = ("_display_name", "mime_type", "relative_path", "is_pending")
kept = {name: str(entry.get(name)) for name in columns} if entry else None
print(json.dumps({"told": told, "raised": raised, "log": list(resolver.log.toArray()), "entry": kept}))

"""One file and one .kv a screen."""

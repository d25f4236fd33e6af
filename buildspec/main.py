"""Where the packed app starts: the packaging tool wants a main.py at the root of what it packs."""

import sys

from mobileapp.__main__ import main

if __name__ == "__main__":
    sys.exit(main())

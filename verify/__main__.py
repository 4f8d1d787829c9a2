"""``python -m verify`` is the command ``sidecheck``."""

import sys

from verify.cli.main import main

if __name__ == "__main__":
    sys.exit(main())

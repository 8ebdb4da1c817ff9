"""`python -m bitweight`."""

import sys

from bitweight.command.cli import main

if __name__ == "__main__":
    sys.exit(main())

"""`python -m bitweight`."""

import sys

from bitweight.command.cli import main

sys.exit(main())

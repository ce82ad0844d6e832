"""`python -m slip` is the command `slip`."""

import sys

from slip.cli import main

if __name__ == "__main__":
    sys.exit(main())

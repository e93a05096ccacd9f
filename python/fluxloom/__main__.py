"""The command ``fluxloom``, also ``python -m fluxloom``."""

import sys

from fluxloom.commands import main

__all__ = ["run"]


def run() -> None:
    """Run the command line and end the process with its exit code."""
    sys.exit(main(sys.argv[1:]))


if __name__ == "__main__":
    run()

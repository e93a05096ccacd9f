"""The command ``fluxloom``, also ``python -m fluxloom``."""

import sys

__all__ = ["run"]


def run() -> None:
    """Run the command line and end the process with its exit code."""
    try:
        # Importing takes long enough to be interrupted.
        from fluxloom.commands import main
    except KeyboardInterrupt:
        sys.exit(130)
    sys.exit(main(sys.argv[1:]))


if __name__ == "__main__":
    run()

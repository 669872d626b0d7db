"""The command line: arguments, progress, exit codes. Everything heavy is imported inside its command.

Exit codes: 0 fine; 1 a design that cannot be made or misses a figure its recipe states; 2 wrong input;
3 the machine let us down.
"""

from __future__ import annotations

import contextlib
import io
import sys
from importlib import import_module

from wavejig.commands.arguments import parser
from wavejig.commands.completing import complete
from wavejig.commands.telling import MACHINE, OK


def main(argv: list[str] | None = None) -> int:
    """Run the command line; returns the exit code."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(
            stream, io.TextIOWrapper
        ):  # a sign the terminal's code has not is written out, no fault
            stream.reconfigure(errors="backslashreplace")
    try:
        known = parser()
        complete(known)
        args = known.parse_args(argv)
        return int(import_module(f"wavejig.commands.{args.module}").run(args))
    except KeyboardInterrupt as err:
        # by name where it was a signal other than ctrl-C; a closed terminal takes no message
        with contextlib.suppress(OSError):
            print(f"{str(err) or 'interrupted'}; packs already on disk are as they were", file=sys.stderr)  # noqa: T201
        return MACHINE
    except ImportError as err:
        from wavejig.commands.missing import missing

        message = missing(err)
        if message is None:
            raise
        print(f"wavejig: {message}", file=sys.stderr)  # noqa: T201
        return MACHINE
    except BrokenPipeError:  # the reader of our output went away, as `| head` does
        sys.stderr.close()
        return OK


if __name__ == "__main__":
    sys.exit(main())

"""The command ``trivector``: parse, run one verb, turn errors into lines and exit codes."""

import argparse
import os
import sys
from collections.abc import Sequence
from typing import NoReturn

from trivector import __version__
from trivector.cli import count, examine, planes
from trivector.errors import TrivectorError, UsageError

__all__ = ["build_parser", "main"]

_EPILOG = """\
Exit codes: 0 yes or done; 1 no; 2 bad input or usage; 3 undecided within the limits.
"""


class _Parser(argparse.ArgumentParser):
    """An argument parser whose errors are one line and go the way of all others."""

    def error(self, message: str) -> NoReturn:
        raise UsageError(f"{message}; see {self.prog} --help")


def build_parser() -> argparse.ArgumentParser:
    """The whole grammar of the command line. Loads nothing heavy."""
    parser = _Parser(
        prog="trivector",
        description="Exact answers about planes in P^5 and the planes inside Lagrangian subspaces.",
        epilog=_EPILOG,
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"trivector {__version__}")
    verbs = parser.add_subparsers(title="verbs", metavar="VERB", dest="verb", required=True)
    for verb in (examine, planes, count):
        verb.add_parser(verbs)
    return parser


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command; the return value is the exit code."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="backslashreplace")
    try:
        arguments = build_parser().parse_args(argv)
        code: int = arguments.run(arguments)
        sys.stdout.flush()
    except TrivectorError as error:
        for line in str(error).splitlines():
            print(f"trivector: {line}", file=sys.stderr)
        return error.exit_code
    except KeyboardInterrupt:
        print("trivector: interrupted; nothing was written", file=sys.stderr)
        return 130
    except BrokenPipeError:
        # The reader has gone, as in `trivector … | head`; nothing is left to say.
        # A closed pipe would be flushed again at exit, so standard output goes nowhere.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    return code

"""What tests of the command line share."""

from collections.abc import Callable

Run = Callable[..., tuple[int, str, list[str]]]
"""Runs the command in this process: exit code, standard output, lines of standard error."""

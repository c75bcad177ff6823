"""``trivector examine FILE``: one configuration, every question."""

import argparse
import sys
from typing import Any

from trivector.cli.options import (
    add_certificate,
    add_common,
    add_limits,
    limits_from,
    progress,
    write_answer,
    write_certificate,
)
from trivector.errors import UsageError

__all__ = ["add_parser", "run"]


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    parser = verbs.add_parser(
        "examine",
        help="one configuration of planes: incidence, span, section, completeness",
        description="Do the planes meet two by two? What do they span? Which planes meet all of "
        "them, and are those all in the list, over the field and over its closure?",
        allow_abbrev=False,
    )
    parser.add_argument("file", metavar="FILE", help="planes, as JSON or plain text; - for stdin")
    add_common(parser)
    add_certificate(parser)
    add_limits(parser)
    parser.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0: complete over the closure; 1: not, or not incident; 3: undecided."""
    from trivector.configurations import Configuration
    from trivector.documents import read

    # Exact integers have as many digits as they have.
    sys.set_int_max_str_digits(0)
    configuration = read(arguments.file, field=arguments.field)
    if not isinstance(configuration, Configuration):
        raise UsageError(f'{arguments.file}: examine needs a document of kind "planes"')
    examination = configuration.examine(
        limits=limits_from(arguments), seed=arguments.seed, on_progress=progress(arguments)
    )

    def report() -> Any:
        from trivector.reports import examination_report

        return examination_report(examination)

    def certificate() -> dict[str, Any]:
        from trivector.certificates import certify_examination

        return certify_examination(examination, limits=limits_from(arguments))

    write_answer(arguments, examination.to_json(), report)
    write_certificate(arguments, certificate)
    return examination.exit_code

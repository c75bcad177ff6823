"""``trivector recheck FILE``: check a certificate again, without the engine that found it."""

import argparse
from typing import Any

from trivector.cli.options import add_common, positive, write_answer
from trivector.errors import DocumentError

__all__ = ["add_parser", "run"]


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    parser = verbs.add_parser(
        "recheck",
        help="check a certificate again, claim by claim",
        description="Check each claim of a certificate from its evidence. Nothing of the engine "
        "is used: certificates/checker.py needs the Python standard library only and may be "
        "copied out alone.",
        allow_abbrev=False,
    )
    parser.add_argument("file", metavar="FILE", help="a certificate; - for stdin")
    parser.add_argument(
        "--work",
        type=positive,
        default=1,
        metavar="N",
        help="allow N times the usual work, about a minute (default 1)",
    )
    add_common(parser)
    parser.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0: every claim holds; 1: one fails; 2: not a certificate."""
    from trivector.certificates import checker
    from trivector.documents import read_text

    text, usual = read_text(arguments.file), checker.MOST_WORK
    checker.MOST_WORK = usual * arguments.work
    try:
        document = checker.load(text)
        field, digest = document["field"], document["sha256"]
        notes = document.get("uncertified", [])
        checker.shape(isinstance(field, dict), "field: an object")
        checker.shape(isinstance(digest, str), "sha256: a text")
        texts = isinstance(notes, list) and all(isinstance(note, str) for note in notes)
        checker.shape(texts, "uncertified: a list of texts")
        try:
            found = [
                {"claim": name, "holds": verdict, "words": words}
                for name, verdict, words in checker.Check(document).run()
            ]
        except checker.ClaimError as error:
            found = [{"claim": "certificate", "holds": False, "words": str(error)}]
    except checker.MALFORMED as error:
        reason = f"key {error} is missing" if isinstance(error, KeyError) else str(error)
        advice = "ask for another certificate"
        if "more work" in reason:
            advice = "give --work N"
        raise DocumentError([f"{arguments.file}: cannot be checked: {reason}; {advice}"]) from None
    finally:
        checker.MOST_WORK = usual
    holds = all(claim["holds"] for claim in found)
    data = {
        "kind": "recheck",
        "field": field,
        "sha256": digest,
        "holds": holds,
        "claims": found,
        "uncertified": notes,
    }

    def report() -> Any:
        from trivector.reports import recheck_report

        return recheck_report(data)

    write_answer(arguments, data, report)
    return 0 if holds else 1

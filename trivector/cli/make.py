"""``trivector make KIND``: a family, an example, or a random object, as a document."""

import argparse
import sys
from collections.abc import Callable
from dataclasses import dataclass
from random import Random
from shlex import quote
from typing import Any

from trivector import __version__
from trivector.cli.options import add_common, open_output, positive
from trivector.errors import UsageError

__all__ = ["KINDS", "Kind", "Request", "add_parser", "run"]


@dataclass(frozen=True)
class Request:
    """What was asked for: the parsed options, the field, and a seeded generator."""

    options: argparse.Namespace
    field: Any
    rng: Random

    @property
    def height(self) -> dict[str, int]:
        """``--height`` as a keyword, if it was given."""
        value = self.options.height
        return {} if value is None else {"height": value}

    def required(self, option: str) -> Any:
        """The value of an option that this kind cannot do without."""
        value = getattr(self.options, option)
        if value is None:
            raise UsageError(f"make {self.options.kind} needs --{option}; give it")
        return value

    def moved(self, space: Any) -> Any:
        """A space in the coordinates of ``--change``."""
        from trivector.families import image, random_change

        if self.options.change is None:
            return space
        return image(random_change(self.field, self.rng, n=space.n), space)

    def configuration(self, planes: Any, labels: tuple[str, ...] = ()) -> Any:
        """Planes in the coordinates of ``--change``."""
        from trivector.configurations import Configuration
        from trivector.families import image, random_change

        if self.options.change is not None:
            g = random_change(self.field, self.rng, n=planes[0].n)
            planes = tuple(image(g, plane) for plane in planes)
        return Configuration(planes, labels)

    def planes_of(self, path: str) -> Any:
        """The planes of a document, over ``--field`` if it was given."""
        from trivector.configurations import Configuration
        from trivector.documents import read

        document = read(path, field=self.options.field)
        if not isinstance(document, Configuration):
            raise UsageError(f'{path}: make {self.options.kind} needs a document of kind "planes"')
        return document.planes


def _family(request: Request) -> Any:
    from trivector.configurations import Configuration
    from trivector.families import CLASSICAL_FAMILIES, random_change

    family = CLASSICAL_FAMILIES[request.options.kind]
    field, rng, members = request.field, request.rng, request.options.members
    # Drawn first, so that the Lagrangian and the members of one seed belong together.
    change = None if request.options.change is None else random_change(field, rng)
    if members is None:
        if request.height:
            raise UsageError("--height is for the parameters of --members; give both or none")
        return family.lagrangian(field, change=change)
    planes = family.random_planes(field, members, rng, change=change, **request.height)
    return Configuration(planes)


def _twenty(request: Request) -> Any:
    from trivector.families import TWENTY_LABELS, twenty_planes

    return request.configuration(twenty_planes(request.field), TWENTY_LABELS)


def _seven(request: Request) -> Any:
    from trivector.families import seven_planes

    return request.configuration(seven_planes(request.field))


def _twenty_two(request: Request) -> Any:
    from trivector.families import twenty_two_planes

    return request.configuration(twenty_two_planes(request.field))


def _cyclic(request: Request) -> Any:
    from trivector.families import cyclic_lagrangian

    return request.moved(cyclic_lagrangian(request.field))


def _random_lagrangian(request: Request) -> Any:
    from trivector.configurations import random_incident_planes
    from trivector.families import random_lagrangian, random_lagrangian_through

    through, count, rng = request.options.through, request.options.planes, request.rng
    if through is not None and count is not None:
        raise UsageError("--through and --planes do not go together; give one of them")
    if through is not None:
        planes = request.planes_of(through)
    elif count is not None:
        planes = random_incident_planes(request.field, count, rng, **request.height).planes
    else:
        return random_lagrangian(request.field, rng, **request.height)
    return random_lagrangian_through(planes, rng, **request.height)


def _random_planes(request: Request) -> Any:
    from trivector.configurations import random_incident_planes

    count = request.required("planes")
    return random_incident_planes(request.field, count, request.rng, **request.height)


def _random_plane(request: Request) -> Any:
    from trivector.families import random_plane, random_plane_meeting

    if request.options.meeting is None:
        return random_plane(request.field, request.rng, **request.height)
    planes = request.planes_of(request.options.meeting)
    return random_plane_meeting(planes, request.rng, **request.height)


def _random_subspace(request: Request) -> Any:
    from trivector.families import random_subspace

    dimension = request.required("dimension")
    return random_subspace(request.field, dimension, request.rng, **request.height)


def _random_trivectors(request: Request) -> Any:
    from trivector.families import random_trivector

    orbit, field, rng = request.required("orbit"), request.field, request.rng
    return tuple(
        random_trivector(field, orbit, rng, **request.height)
        for _ in range(request.options.members or 1)
    )


@dataclass(frozen=True)
class Kind:
    """One thing that can be made.

    Attributes
    ----------
    name : str
    text : str
        What it is, for people: in the help, and as the title of the document.
    options : tuple of str
        The options that it takes, beside those of every verb.
    make : callable
        From the `Request` to what `to_document` writes; imports what it needs.
    field : str
        The field unless ``--field`` names one.
    random : bool
        Whether ``--seed`` matters even without ``--members`` and ``--change``.
    """

    name: str
    text: str
    options: tuple[str, ...]
    make: Callable[[Request], Any]
    field: str = "Q"
    random: bool = False


_FAMILY = ("members", "change", "height")

KINDS: dict[str, Kind] = {
    kind.name: kind
    for kind in (
        Kind("point", "planes through a point", _FAMILY, _family),
        Kind("hyperplane", "planes in a hyperplane", _FAMILY, _family),
        Kind("lines", "planes meeting a fixed plane in a line", _FAMILY, _family),
        Kind("ruling", "planes of one ruling of a smooth quadric", _FAMILY, _family),
        Kind("conics", "planes of the conics of a Veronese surface", _FAMILY, _family),
        Kind("tangents", "tangent planes of a Veronese surface", _FAMILY, _family),
        Kind("twenty", "twenty planes of P^5, five matchings with signs", ("change",), _twenty),
        Kind("seven", "seven planes of P^6, the lines of the Fano plane", ("change",), _seven),
        Kind(
            "twenty-two", "twenty-two planes in characteristic 2", ("change",), _twenty_two, "F_4"
        ),
        Kind("cyclic", "cyclic Lagrangian", ("change",), _cyclic),
        Kind(
            "lagrangian",
            "random Lagrangian",
            ("planes", "through", "height"),
            _random_lagrangian,
            random=True,
        ),
        Kind(
            "planes",
            "random pairwise incident planes in general position",
            ("planes", "height"),
            _random_planes,
            random=True,
        ),
        Kind("plane", "random plane", ("meeting", "height"), _random_plane, random=True),
        Kind(
            "subspace",
            "random subspace of ∧³V",
            ("dimension", "height"),
            _random_subspace,
            random=True,
        ),
        Kind(
            "trivectors",
            "random trivectors of one orbit",
            ("orbit", "members", "height"),
            _random_trivectors,
            random=True,
        ),
    )
}
"""In the order of the help. A new kind is a new row here; a new option one in `_OPTIONS` too."""

_OPTIONS: dict[str, dict[str, Any]] = {
    "members": {
        "type": positive,
        "metavar": "N",
        "help": "N members of a family in place of its Lagrangian; how many trivectors",
    },
    "planes": {"type": positive, "metavar": "K", "help": "how many planes"},
    "through": {"metavar": "FILE", "help": "planes that the Lagrangian is to contain"},
    "meeting": {"metavar": "FILE", "help": "up to six planes that the plane is to meet"},
    "dimension": {"type": positive, "metavar": "M", "help": "of the subspace"},
    "orbit": {
        "metavar": "NAME",
        "help": "zero, decomposable, divisible, tangent, split or nonsplit",
    },
    "change": {"choices": ["random"], "help": "of the coordinates"},
    "height": {
        "type": positive,
        "metavar": "H",
        "help": "over Q and number fields: the size of the numbers that are drawn",
    },
}


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    widest = max(map(len, KINDS))
    lines = [
        f"  {kind.name:{widest}}  {kind.text}  [{' '.join(f'--{x}' for x in kind.options)}]"
        for kind in KINDS.values()
    ]
    parser = verbs.add_parser(
        "make",
        help="a family, an example, or a random object, as a document",
        description="Write a document that the other verbs read. For a family that is its "
        "Lagrangian, or with --members some of its planes. Random Lagrangians, also those\nthrough "
        "given planes, random planes, subspaces and trivectors of an orbit are uniform over a\n"
        "finite field; nothing is claimed of a random plane that meets given ones.",
        epilog="\n".join(["kinds, with the options that they take:", *lines]),
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    parser.add_argument("kind", metavar="KIND", help="one of those below")
    for option, keywords in _OPTIONS.items():
        parser.add_argument(f"--{option}", **keywords)
    add_common(parser)
    parser.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0: made; whatever cannot be made is refused with a reason."""
    kind = KINDS.get(arguments.kind)
    if kind is None:
        raise UsageError(
            f"kind {arguments.kind[:40]!r} is unknown; it is one of {', '.join(KINDS)}"
        )
    given = [option for option in _OPTIONS if getattr(arguments, option) is not None]
    for option in given:
        if option not in kind.options:
            known = ", ".join(f"--{x}" for x in kind.options)
            raise UsageError(f"make {kind.name} has no option --{option}; it takes {known}")

    from trivector.documents import document_text, to_document, wanted_field

    # Exact integers have as many digits as they have.
    sys.set_int_max_str_digits(0)
    field = wanted_field(kind.field if arguments.field is None else arguments.field)
    if arguments.height is not None and field.order is not None:
        raise UsageError(f"--height is for infinite fields, not for {field.name}; leave it out")
    made = kind.make(Request(arguments, field, Random(arguments.seed)))
    document = to_document(made, title=_title(kind, arguments), source=_source(kind, arguments))
    with open_output(arguments) as file:
        file.write(document_text(document))
    return 0


def _title(kind: Kind, arguments: argparse.Namespace) -> str:
    text = kind.text[0].upper() + kind.text[1:]
    return text if arguments.members is None else f"{arguments.members} {kind.text}"


def _source(kind: Kind, arguments: argparse.Namespace) -> str:
    """The command that makes the document again."""
    words = ["trivector make", kind.name]
    options = ["field", *_OPTIONS]
    if kind.random or arguments.members is not None or arguments.change is not None:
        options.append("seed")
    for option in options:
        value = getattr(arguments, option)
        if value is not None:
            words.append(f"--{option} {quote(str(value))}")
    return f"{' '.join(words)} (version {__version__})"

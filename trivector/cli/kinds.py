"""What ``trivector make`` can make: the table of kinds, and the functions behind it."""

import argparse
from collections.abc import Callable
from dataclasses import dataclass
from random import Random
from typing import Any

from trivector.errors import UsageError

__all__ = ["KINDS", "Kind", "Made", "Request"]


@dataclass(frozen=True)
class Made:
    """Something with a title of its own, in place of the text of its kind."""

    thing: Any
    title: str


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


def _del_pezzo(request: Request) -> Made:
    from trivector.families.del_pezzo import del_pezzo_configuration
    from trivector.families.equations import components_to_text
    from trivector.families.random_del_pezzo import random_del_pezzo

    options, field = request.options, request.field
    if (options.curve is None) == (options.length is None):
        raise UsageError("make del-pezzo needs one of --curve and --length; give one")
    if options.curve is not None:
        if options.rational:
            raise UsageError("--rational goes with --length; a curve has the nodes that it has")
        found, curve = del_pezzo_configuration(field, options.curve), ""
    else:
        rational = bool(options.rational)
        found = random_del_pezzo(field, options.length, request.rng, rational=rational)
        curve = f"; curve {components_to_text(field, found.curve.components)}"
    what = f"del Pezzo configuration of {found.length} planes"
    if field.characteristic == 2:
        curve = f"; in characteristic 2 a finite section has length 22, not {found.length}{curve}"
    if found.closed or options.lagrangian:
        degrees = sorted([1] * len(found.planes) + [plane.degree for plane in found.closed])
        points = f", closed points of degrees {', '.join(map(str, degrees))}"
        thing = request.moved(found.short_span())
        return Made(thing, f"Lagrangian of a {what}{points if found.closed else ''}{curve}")
    planes = found.planes if options.change else found.short_planes()
    return Made(request.configuration(planes, found.labels), what[0].upper() + what[1:] + curve)


def _symmetric(request: Request) -> Any:
    from trivector.families.symmetric import symmetric_planes

    return request.configuration(symmetric_planes(request.field, request.required("length")))


def _ten(request: Request) -> Any:
    from trivector.configurations.ten_planes import random_ten_planes

    if request.field.order is None:
        raise UsageError(
            f"make ten needs a finite field, not {request.field.name}; give --field F_q"
        )
    return request.configuration(random_ten_planes(request.field, request.rng))


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
            "del-pezzo",
            "planes of a nodal curve in |-2K| of the quintic del Pezzo surface",
            ("curve", "length", "rational", "lagrangian", "change"),
            _del_pezzo,
        ),
        Kind(
            "symmetric",
            "complete planes that a signed permutation keeps, 10 to 15",
            ("length", "change"),
            _symmetric,
        ),
        Kind(
            "ten",
            "ten random planes in general position over a large finite field",
            ("change",),
            _ten,
            "F_1009",
            random=True,
        ),
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

"""The recipes of the atlas: one small example for each length.

A recipe is a curve in |−2K| of the quintic del Pezzo surface by its
components. How they were searched for is not part of the package: what counts
is that every entry can be made and checked again.
"""

from dataclasses import dataclass
from random import Random

from trivector.families.del_pezzo import DelPezzoConfiguration, del_pezzo_configuration
from trivector.families.small_frames import find_small_frame, in_frame
from trivector.fields.names import field_from_spec
from trivector.fields.protocol import Field
from trivector.subspaces import Plane, Subspace

__all__ = ["RECIPES", "AtlasExample", "Recipe", "atlas_example"]


@dataclass(frozen=True)
class Recipe:
    """A curve by its components, over a field named as in documents."""

    field_name: str
    length: int
    curve: str

    @property
    def file_name(self) -> str:
        """``"length-17-over-q.json"``."""
        return f"length-{self.length}-over-{self.field_name.lower().replace('_', '')}.json"


@dataclass(frozen=True)
class AtlasExample:
    """What stands in a document of the atlas.

    Attributes
    ----------
    planes : tuple of Plane
        All planes, when all are rational; else empty, and ``lagrangian`` is
        the document.
    """

    field: Field
    title: str
    source: str
    labels: tuple[str, ...]
    planes: tuple[Plane, ...]
    lagrangian: Subspace


RECIPES: tuple[Recipe, ...] = (
    Recipe("Q", 20, "E1; E2; E3; E4; L12; L13; L14; L23; L24; L34"),
    Recipe("Q", 19, "E1; E2; E4; L12; L14; L23; L24; L34; y-2*z"),
    Recipe("Q", 18, "E2; E3; E4; L12; L23; L24; L34; 2*x*y-x*z+y^2-2*y*z"),
    Recipe("Q", 17, "E1; L12; L13; L23; a: y+z; b: x+y-2*z; c: x-2*y+z"),
    Recipe("Q", 16, "L12; L34; a: y+z; b: x-2*z; c: x+y; d: x+2*y-3*z"),
    Recipe("Q", 15, "a: y+z; b: x-2*z; c: x+y; d: x+2*y-3*z; x*y+x*z-2*y*z"),
    Recipe("Q", 14, "2*y-z; 3*x-z; x^2-2*x*z+2*y^2-y*z; 3*x*y-2*x*z-y*z"),
    Recipe(
        "Q",
        13,
        "2*x^2-3*x*y+3*x*z-2*y*z; 3*x*y+2*x*z-2*y^2-3*y*z; 2*x*y+3*x*z+3*y*z+2*z^2",
    ),
    Recipe(
        "Q",
        12,
        "E2; 21*x^4*y^2+28*x^4*z^2+4*x^3*y^3-116*x^3*y*z^2+42*x^2*y^2*z^2+36*x^2*z^4-"
        "4*x*y^3*z^2-12*x*y*z^4+y^2*z^4",
    ),
    Recipe(
        "Q",
        11,
        "20*x^4*y^2+4*x^4*y*z+x^4*z^2-20*x^3*y^3-14*x^3*y^2*z-14*x^3*y*z^2-2*x^3*z^3+"
        "5*x^2*y^4-14*x^2*y^3*z+21*x^2*y^2*z^2+12*x^2*y*z^3+x^2*z^4+10*x*y^4*z+"
        "4*x*y^3*z^2-12*x*y^2*z^3-2*x*y*z^4+y^4*z^2-2*y^3*z^3+y^2*z^4",
    ),
    Recipe("F_5", 20, "E1; E2; E3; E4; L12; L13; L14; L23; L24; L34"),
    Recipe("F_5", 19, "E1; E2; E4; L12; L14; L23; L24; L34; y+2*z"),
    Recipe("F_5", 18, "E1; E4; L14; L23; L24; L34; y+z; y+3*z"),
    Recipe("F_7", 17, "E3; E4; L13; L14; L24; 5*x+4*y; 4*x^2+6*x*y+5*x*z+6*y*z"),
    Recipe(
        "F_7",
        16,
        "E2; E3; L23; L34; 2*x+z; 3*x*y^2+4*x*y*z+5*x*z^2+6*y^2*z+3*y*z^2",
    ),
    Recipe("F_11", 15, "a: y+z; b: x-2*z; c: x+y; d: x+2*y-3*z; x*y+x*z-2*y*z"),
    Recipe(
        "F_11",
        14,
        "10*x+4*y; x+2*z; 10*x*y+2*x*z+4*y^2+2*y*z+4*z^2; 10*x*y+2*x*z+10*y*z",
    ),
    Recipe(
        "F_13",
        13,
        "2*x^2-3*x*y+3*x*z-2*y*z; 3*x*y+2*x*z-2*y^2-3*y*z; 2*x*y+3*x*z+3*y*z+2*z^2",
    ),
    Recipe(
        "F_11",
        12,
        "E2; 21*x^4*y^2+28*x^4*z^2+4*x^3*y^3-116*x^3*y*z^2+42*x^2*y^2*z^2+36*x^2*z^4-"
        "4*x*y^3*z^2-12*x*y*z^4+y^2*z^4",
    ),
    Recipe(
        "F_13",
        11,
        "x^4*y^2+11*x^4*y*z+x^4*z^2+2*x^3*y^3+2*x^3*y^2*z+8*x^3*y*z^2+6*x^3*z^3+"
        "7*x^2*y^4+7*x^2*y^2*z^2+7*x^2*y*z^3+9*x^2*z^4+2*x*y^4*z+7*x*y^3*z^2+"
        "8*x*y^2*z^3+12*x*y*z^4+11*y^4*z^2+8*y^3*z^3+8*y^2*z^4",
    ),
)

_FRAME_STARTS = 12


def atlas_example(recipe: Recipe) -> AtlasExample:
    """Make an entry of the atlas: the planes of the curve, over ℚ in a frame of short entries.

    Examples
    --------
    >>> example = atlas_example(next(r for r in RECIPES if r.file_name == "length-20-over-f5.json"))
    >>> len(example.planes), example.title
    (20, 'Complete configuration of length 20 over F_5')
    """
    field = field_from_spec(recipe.field_name)
    found = del_pezzo_configuration(field, recipe.curve)
    count = len(found.curve.components)
    curve = "the curve" if count == 1 else f"the curve with {count} components"
    source = (
        f"constructed here: {curve} {recipe.curve} in |-2K| of P^2 blown up in p1=(1:0:0), "
        f'p2=(0:1:0), p3=(0:0:1), p4=(1:1:1); del_pezzo_configuration({field.name}, "...")'
    )
    title = f"Complete configuration of length {recipe.length} over {field.name}"
    if found.closed:
        return _lagrangian_entry(found, title, source)
    planes = found.planes
    if field.order is None:
        frame = find_small_frame(planes, Random(0), starts=_FRAME_STARTS)
        planes = in_frame(frame, planes)
        source += "; coordinates of V: find_small_frame with seed 0"
    span = Subspace.span(field, 6, [plane.plucker for plane in planes])
    return AtlasExample(field, title, source, found.labels, planes, span)


def _lagrangian_entry(found: DelPezzoConfiguration, title: str, source: str) -> AtlasExample:
    degrees = sorted([1] * len(found.planes) + [plane.degree for plane in found.closed])
    rows = found.field.integral_basis(found.span.rows)
    span = Subspace(found.field, 6, tuple(tuple(row) for row in rows))
    words = ", ".join(map(str, degrees))
    return AtlasExample(
        found.field,
        f"Lagrangian of a c{title[1:]}",
        f"{source}; closed points of degrees {words}",
        (),
        (),
        span,
    )

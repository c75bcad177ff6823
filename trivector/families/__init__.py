"""Where do interesting planes and Lagrangians come from? Formulas and random choices."""

from trivector.families.classical import CLASSICAL_FAMILIES, ClassicalFamily
from trivector.families.coordinate_changes import image, random_change
from trivector.families.exceptional import (
    TWENTY_LABELS,
    cyclic_lagrangian,
    seven_planes,
    twenty_planes,
    twenty_two_planes,
)
from trivector.families.random_lagrangians import (
    random_lagrangian,
    random_lagrangian_through,
    random_lagrangian_with_planes,
    random_maximal_isotropic,
)
from trivector.families.random_planes import (
    random_incident_few,
    random_plane,
    random_plane_meeting,
)
from trivector.families.random_trivectors import ORBITS, random_subspace, random_trivector

__all__ = [
    "CLASSICAL_FAMILIES",
    "ORBITS",
    "TWENTY_LABELS",
    "ClassicalFamily",
    "cyclic_lagrangian",
    "image",
    "random_change",
    "random_incident_few",
    "random_lagrangian",
    "random_lagrangian_through",
    "random_lagrangian_with_planes",
    "random_maximal_isotropic",
    "random_plane",
    "random_plane_meeting",
    "random_subspace",
    "random_trivector",
    "seven_planes",
    "twenty_planes",
    "twenty_two_planes",
]

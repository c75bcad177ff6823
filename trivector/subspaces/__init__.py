"""When are two subspaces equal, how do they meet?"""

from trivector.subspaces.flats import Flat, Plane
from trivector.subspaces.trivector_spaces import Lagrangian, OffendingPair, Subspace

__all__ = ["Flat", "Lagrangian", "OffendingPair", "Plane", "Subspace"]

"""What is a trivector, with which signs?"""

from trivector.exterior.plucker import PluckerRelation, Violation, plucker_relations
from trivector.exterior.trivector import Trivector

__all__ = ["PluckerRelation", "Trivector", "Violation", "plucker_relations"]

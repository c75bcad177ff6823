"""How do the planes meet, is it complete, what can be added?"""

from trivector.configurations.configuration import Configuration
from trivector.configurations.examination import Examination
from trivector.configurations.growing import has_expected_dimension, random_incident_planes
from trivector.configurations.incidence import Incidence, SharedFlat
from trivector.configurations.meeting import (
    enumerate_complete_families,
    enumerate_maximal_families,
    exchange_graph,
    meeting_graph,
)

__all__ = [
    "Configuration",
    "Examination",
    "Incidence",
    "SharedFlat",
    "enumerate_complete_families",
    "enumerate_maximal_families",
    "exchange_graph",
    "has_expected_dimension",
    "meeting_graph",
    "random_incident_planes",
]

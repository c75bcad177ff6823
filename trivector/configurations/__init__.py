"""How do the planes meet, is it complete, what can be added?"""

from trivector.configurations.configuration import Configuration
from trivector.configurations.examination import Examination
from trivector.configurations.growing import has_expected_dimension, random_incident_planes

__all__ = ["Configuration", "Examination", "has_expected_dimension", "random_incident_planes"]

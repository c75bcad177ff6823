"""How do the planes meet, is it complete, what can be added?"""

from trivector.configurations.configuration import Configuration
from trivector.configurations.examination import Examination

__all__ = ["Configuration", "Examination"]

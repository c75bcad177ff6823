"""Which decomposables lie in this linear space, over which field, and is that all of them?"""

from trivector.sections.counting import (
    PrimeCount,
    count_modulo_primes,
    count_over_extensions,
)
from trivector.sections.linear_section import LinearSection
from trivector.sections.section_report import ClosedPoint, SectionReport
from trivector.sections.study import Limits
from trivector.sections.sweep import (
    count_rational_planes,
    iter_rational_planes,
    sweep_points,
)

__all__ = [
    "ClosedPoint",
    "Limits",
    "LinearSection",
    "PrimeCount",
    "SectionReport",
    "count_modulo_primes",
    "count_over_extensions",
    "count_rational_planes",
    "iter_rational_planes",
    "sweep_points",
]

"""Why should anyone believe it?"""

from trivector.certificates.carrying import certify_collineations
from trivector.certificates.certifying import (
    certify_examination,
    certify_section,
    certify_trivectors,
)

__all__ = [
    "certify_collineations",
    "certify_examination",
    "certify_section",
    "certify_trivectors",
]

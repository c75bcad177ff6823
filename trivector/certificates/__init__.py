"""Why should anyone believe it?"""

from trivector.certificates.certifying import (
    certify_examination,
    certify_section,
    certify_trivectors,
)

__all__ = ["certify_examination", "certify_section", "certify_trivectors"]

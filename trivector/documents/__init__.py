"""What does a file say, and is it well formed?"""

from trivector.documents.reading import read
from trivector.documents.sources import read_text

__all__ = ["read", "read_text"]

"""What does a file say, and is it well formed?"""

from trivector.documents.reading import read

__all__ = ["read"]

"""What does a file say, and is it well formed?"""

from trivector.documents.reading import read, wanted_field
from trivector.documents.sources import read_text
from trivector.documents.writing import document_text, to_document

__all__ = ["document_text", "read", "read_text", "to_document", "wanted_field"]

"""From a path, ``-`` or a ``.gz`` file to text."""

import gzip
import sys
import zlib
from pathlib import Path

from trivector.errors import DocumentError

__all__ = ["LARGEST", "read_text"]

LARGEST = 256 * 2**20
"""Bytes; a larger document is refused before it fills the memory."""


def read_text(path: str | Path) -> str:
    """The text of a document.

    Parameters
    ----------
    path : str or Path
        ``-`` is standard input; a name that ends in ``.gz`` is decompressed.

    Raises
    ------
    DocumentError
        If it cannot be read, is too large, or is not UTF-8; with the reason.
    """
    name = "standard input" if str(path) == "-" else str(path)
    try:
        data = _read_bytes(str(path))
    except FileNotFoundError:
        raise DocumentError([f"{name}: no such file; check the path"]) from None
    except IsADirectoryError:
        raise DocumentError([f"{name}: a directory, not a file; name a file in it"]) from None
    except (gzip.BadGzipFile, zlib.error, EOFError):
        raise DocumentError([f"{name}: not a complete gzip file; compress it again"]) from None
    except DocumentError:
        raise
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise DocumentError([f"{name}: cannot be read ({reason})"]) from None
    if len(data) > LARGEST:
        raise DocumentError([f"{name}: larger than {LARGEST // 2**20} MiB; split the document"])
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise DocumentError(
            [f"{name}: byte {error.start} is not UTF-8; give JSON or plain text in UTF-8"]
        ) from None


def _read_bytes(name: str) -> bytes:
    if name == "-":
        if sys.stdin is None:
            raise DocumentError(["standard input: closed; give a file"])
        return sys.stdin.buffer.read(LARGEST + 1)
    if name.endswith(".gz"):
        with gzip.open(name, "rb") as file:
            return file.read(LARGEST + 1)
    with open(name, "rb") as file:
        return file.read(LARGEST + 1)

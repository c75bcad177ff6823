"""How is it asked? One file for each verb."""

from trivector.cli.main import main

__all__ = ["main"]

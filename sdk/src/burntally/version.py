"""The version of the SDK: written here, so that telling it imports nothing."""

from typing import Final

__all__ = ["__version__"]

__version__: Final[str] = "0.1.0"

"""The version of the SDK: written here, so that telling it imports nothing."""

from typing import Final

__all__ = ["__version__"]

# The build reads this very line.
__version__: Final = "0.1.0"

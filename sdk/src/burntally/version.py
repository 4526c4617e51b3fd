"""The version of the SDK: written here, so that telling it imports nothing."""

__all__ = ["__version__"]

# Without an annotation: the build reads this line, and looks for nothing between the name and the sign.
__version__ = "0.1.0"

"""Planner for glue logic in small programmable AND/OR arrays."""

from importlib.metadata import PackageNotFoundError, version

__all__ = ["__version__"]

try:
    __version__ = version("fuseplan")
except PackageNotFoundError:  # run from a source tree that was not installed
    __version__ = "0+unknown"

"""Planner for glue logic in small programmable AND/OR arrays."""

__all__ = ["__version__"]

__version__ = "0.1.0"

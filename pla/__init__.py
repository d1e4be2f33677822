"""Planner for glue logic in small programmable AND/OR arrays."""

__all__ = ["__version__"]


def __getattr__(name: str) -> str:
    """The version, looked up only when asked for: importlib.metadata is slow to import."""
    if name != "__version__":
        raise AttributeError(name)
    from importlib.metadata import PackageNotFoundError, version  # noqa: PLC0415

    try:
        return version("fuseplan")
    except PackageNotFoundError:  # run from a source tree that was not installed
        return "0+unknown"

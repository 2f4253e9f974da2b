"""Which version of the program this is."""

from __future__ import annotations

from importlib import metadata


def program_version() -> str:
    """The installed version; where the program runs from its sources, that is said instead."""
    try:
        return metadata.version("full-complement")
    except metadata.PackageNotFoundError:
        return "from source"

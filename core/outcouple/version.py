"""The version of the installed package."""

from __future__ import annotations

from importlib.metadata import version

__all__ = ["VERSION"]

VERSION = version("outcouple")

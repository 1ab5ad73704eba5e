"""Forebay: screening of water intakes and outfalls by depth-mean potential flow."""

from importlib.metadata import version

__version__ = version("forebay")

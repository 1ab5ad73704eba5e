"""Forebay: screening of water intakes and outfalls by depth-mean potential flow."""

import os
from importlib.metadata import version

# One request has one core: threads of the linear algebra would only wait for each other.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

__version__ = version("forebay")

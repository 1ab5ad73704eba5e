"""Colours: one ramp for speed that darkens evenly, and inks that stay apart without colour.

The ramp runs from sand over sage to slate blue; its lightness falls strictly, so that it reads the same
in grey, and it holds no red-green contrast.
"""

from typing import Final

RAMP: Final = ("#fbf6e6", "#e9ecd0", "#cfe0c4", "#aed1c2", "#8abdc0", "#69a4ba", "#5088ae", "#3f6c9c")
"""Speed bands from slow to fast."""

FASTER: Final = "#304f80"
"""Beyond the last band, near intakes and outfalls."""

INK: Final = "#14212e"
"""Text, streamlines, symbols."""

FAINT_INK: Final = "#5b6670"
"""Ticks, scale, second-order text."""

PAPER: Final = "#ffffff"
"""Ground of the picture and of labels."""

LAND: Final = "#ddd2bf"
"""Land and structures."""

LAND_HATCH: Final = "#b3a58d"
"""Hatching on land."""

WALL: Final = "#54462f"
"""Banks and outlines of structures."""

EQUIPOTENTIAL: Final = "#8c4a12"
"""Equipotentials, always dashed."""

DIVIDING: Final = "#d0380a"
"""Dividing streamlines, always thick and cased in white."""


def ramp_colours(count: int) -> list[str]:
    """Colours for `count` bands, 1 to 8, spread over the whole ramp."""
    last = len(RAMP) - 1
    return [RAMP[round(index * last / max(count - 1, 1))] for index in range(count)]


def lightness(colour: str) -> float:
    """Relative luminance of "#rrggbb", 0 (black) to 1 (white).

    Y = 0.2126 R + 0.7152 G + 0.0722 B of linear light.

    References
    ----------
    IEC 61966-2-1:1999 (sRGB); W3C, Web Content Accessibility Guidelines 2.1, "relative luminance".
    """
    channels = [int(colour[start : start + 2], 16) / 255 for start in (1, 3, 5)]
    linear = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in channels]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]

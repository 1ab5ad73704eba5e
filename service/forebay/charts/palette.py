"""Colours: one ramp for speed that darkens evenly, and inks that stay apart without colour.

The ramp runs from sand over sage to slate blue. Each band is darker than the one before by the same
factor of 1.19 in contrast, so that it reads the same in grey; it holds no red-green contrast; and its
darkest band is still light enough for dark lines (contrast above 3).
"""

from typing import Final

RAMP: Final = ("#fcf6e3", "#dee7bc", "#b7dab6", "#92cbbd", "#7bbac5", "#73a8c7", "#7096c3", "#6e85ba")
"""Speed bands from slow to fast."""

FASTER: Final = "#6c76ae"
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

EQUIPOTENTIAL: Final = "#561a0a"
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

"""Units in which a picture writes its numbers."""

from dataclasses import dataclass

from forebay.flow.arrays import ComplexArray

FOOT = 0.3048
"""International foot [m], exact."""


@dataclass(frozen=True, slots=True)
class DisplayUnits:
    """Unit of length of the picture (`metre` is its size in m) and the names built on it."""

    metre: float
    length: str

    @property
    def speed(self) -> str:
        """Name of the unit of speed."""
        return f"{self.length}/s"

    @property
    def strength(self) -> str:
        """Name of the unit of discharge per depth."""
        return f"{self.length}²/s"

    @property
    def discharge(self) -> str:
        """Name of the unit of discharge."""
        return f"{self.length}³/s"

    def place(self, z: ComplexArray) -> ComplexArray:
        """Positions in the picture's unit of positions in [m]."""
        return z / self.metre

    def lengthwise(self, value: float, power: int) -> float:
        """Number in the picture's units of an SI quantity with the dimension length^power (per second)."""
        return value / self.metre**power


SI = DisplayUnits(1.0, "m")
US = DisplayUnits(FOOT, "ft")

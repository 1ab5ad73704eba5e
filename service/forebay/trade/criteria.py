"""Published limits for fish-protection screens: a catalogue of records, each saying how well it is known.

A limit is listed as `document-read` only if the text of that very document, or of an excerpt from it, was
read when the catalogue was made. Everything else, also what another text quotes from it, is `from-memory`:
off unless asked for. Documents of which not even a number could be confirmed are in NOT_LISTED.
"""

from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction


class Quantity(StrEnum):
    """What a limit is put on; the definitions are in DEFINITIONS."""

    MAX_APPROACH = "max-approach"
    MAX_THROUGH_SLOT = "max-through-slot"
    MIN_SWEEPING = "min-sweeping"
    MIN_SWEEPING_RATIO = "min-sweeping-ratio"
    MAX_EXPOSURE_TIME = "max-exposure-time"
    MAX_NONUNIFORMITY = "max-nonuniformity"
    MAX_OPENING = "max-opening"
    MIN_OPEN_FRACTION = "min-open-fraction"
    MIN_CLEARANCE = "min-clearance"
    MAX_DISCHARGE = "max-discharge"
    MAX_FLOW_SHARE = "max-flow-share"


DEFINITIONS = {
    Quantity.MAX_APPROACH: (
        "velocity component normal to the screen face; as a design value, largest flow over effective area "
        "(total area less what frames block). Not to be compared with a velocity through the slots"
    ),
    Quantity.MAX_THROUGH_SLOT: (
        "flow over wetted area times open fraction: the velocity between the wires, 1 / open fraction times "
        "the approach velocity"
    ),
    Quantity.MIN_SWEEPING: "velocity component along the screen face, with the pump off",
    Quantity.MIN_SWEEPING_RATIO: "sweeping velocity over approach velocity at the same place of the face",
    Quantity.MAX_EXPOSURE_TIME: "time along the face to its end or a bypass: integral of ds / sweeping speed",
    Quantity.MAX_NONUNIFORMITY: (
        "largest excess of approach velocity over the approach limit of the same document, as a share of it; "
        "over the mean approach velocity where no such limit goes with it"
    ),
    Quantity.MAX_OPENING: "width of slots, or diameter of holes, of the screen",
    Quantity.MIN_OPEN_FRACTION: "open over total area of the screen: slot / (slot + wire) for wedge wire",
    Quantity.MIN_CLEARANCE: "distance of the screen from the bottom",
    Quantity.MAX_DISCHARGE: "flow up to which the document, or its exemption, applies",
    Quantity.MAX_FLOW_SHARE: "flow drawn as a share of the water that passes",
}
"""What each quantity means; families of limits differ by exactly these definitions."""


SI_UNITS = {
    Quantity.MAX_APPROACH: "m/s",
    Quantity.MAX_THROUGH_SLOT: "m/s",
    Quantity.MIN_SWEEPING: "m/s",
    Quantity.MIN_SWEEPING_RATIO: "1",
    Quantity.MAX_EXPOSURE_TIME: "s",
    Quantity.MAX_NONUNIFORMITY: "1",
    Quantity.MAX_OPENING: "m",
    Quantity.MIN_OPEN_FRACTION: "1",
    Quantity.MIN_CLEARANCE: "m",
    Quantity.MAX_DISCHARGE: "m3/s",
    Quantity.MAX_FLOW_SHARE: "1",
}
"""SI unit of each quantity."""


class Cleaned(StrEnum):
    """Which screens a limit is for, by how debris is taken off."""

    ANY = "any"
    ACTIVE = "active"
    PASSIVE = "passive"


class Confidence(StrEnum):
    """How a limit is known."""

    DOCUMENT_READ = "document-read"
    FROM_MEMORY = "from-memory"


SI_FACTORS = {
    "ft/s": ("m/s", Fraction("0.3048")),
    "m/s": ("m/s", Fraction(1)),
    "in": ("m", Fraction("0.0254")),
    "mm": ("m", Fraction("0.001")),
    "s": ("s", Fraction(1)),
    "%": ("1", Fraction("0.01")),
    "1": ("1", Fraction(1)),
    "L/s": ("m3/s", Fraction("0.001")),
    "m3/d": ("m3/s", Fraction(1, 86400)),
}
"""SI unit and exact factor of each unit that a document uses."""


@dataclass(frozen=True, slots=True)
class Criterion:
    """One limit of one document.

    limit, unit : as the document writes them, the number as decimal text so that nothing is rounded
    note : conditions, and how a limit from memory is known; empty if there is nothing to add
    cleaned : which screens it is for
    """

    id: str
    body: str
    document: str
    year: int | None
    jurisdiction: str
    applies_to: str
    quantity: Quantity
    limit: str
    unit: str
    confidence: Confidence
    note: str = ""
    cleaned: Cleaned = Cleaned.ANY

    @property
    def definition(self) -> str:
        """What exactly is limited."""
        return DEFINITIONS[self.quantity]

    @property
    def limit_own(self) -> float:
        """Limit in the document's unit."""
        return float(Fraction(self.limit))

    @property
    def limit_si(self) -> float:
        """Limit in SI, rounded once from the exact product."""
        return float(Fraction(self.limit) * SI_FACTORS[self.unit][1])

    @property
    def unit_si(self) -> str:
        """SI unit of `limit_si`."""
        return SI_FACTORS[self.unit][0]

    @property
    def source(self) -> str:
        """Body, document and year in one line."""
        return f"{self.body}, {self.document}" + ("" if self.year is None else f" ({self.year})")


NOT_LISTED = {
    "UK Environment Agency, best practice guide to screening, SC030231 (2005)": (
        "escape velocities by species could not be confirmed"
    ),
    "UK Environment Agency, eel manual": "apertures and velocities by life stage could not be confirmed",
    "Fisheries and Oceans Canada, interim end-of-pipe standard": "its numbers stand in an unseen table",
    "40 CFR 125.84(b)(3)(ii), lakes": "no disruption of the stratification: a rule without a number",
}
"""Documents that say something of the kind but from which no limit is listed, and why."""

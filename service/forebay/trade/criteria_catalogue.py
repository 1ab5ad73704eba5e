"""The records of the screen limits, by issuing body; the vocabulary is in `criteria`."""

from collections.abc import Iterator
from dataclasses import dataclass, replace

from forebay.trade.criteria import Cleaned, Confidence, Criterion, Quantity

READ = Confidence.DOCUMENT_READ
MEMORY = Confidence.FROM_MEMORY

QUOTED = "known from a text that quotes the document; the document itself was not read"
REPLACED = "text of 2004, since replaced"


@dataclass(frozen=True, slots=True)
class _Document:
    """What all limits of one document share."""

    body: str
    document: str
    year: int | None
    jurisdiction: str

    def limit(
        self,
        id_: str,
        what: tuple[Quantity, str, str],
        applies_to: str,
        confidence: Confidence,
        *,
        note: str = "",
    ) -> Criterion:
        """One limit: `what` is its quantity, number and unit."""
        quantity, number, unit = what
        return Criterion(
            id_,
            self.body,
            self.document,
            self.year,
            self.jurisdiction,
            applies_to,
            quantity,
            number,
            unit,
            confidence,
            note,
        )


SLOT_HALF_FOOT = (Quantity.MAX_THROUGH_SLOT, "0.5", "ft/s")


def _epa_new() -> Iterator[Criterion]:
    new = _Document("US EPA", "40 CFR 125.84", 2001, "United States")
    large = "new cooling-water intakes of 10 MGD and more"
    yield new.limit("epa-new-10mgd-through-slot", SLOT_HALF_FOOT, large, READ, note="(b)(2), design velocity")
    yield new.limit(
        "epa-new-2mgd-through-slot",
        SLOT_HALF_FOOT,
        "new cooling-water intakes of 2 to 10 MGD",
        READ,
        note="(c)(1), design velocity",
    )
    share = Quantity.MAX_FLOW_SHARE
    yield new.limit(
        "epa-new-river-share",
        (share, "5", "%"),
        f"{large}, rivers",
        READ,
        note="(b)(3), design flow over mean annual flow",
    )
    yield new.limit(
        "epa-new-tidal-share",
        (share, "1", "%"),
        f"{large}, tidal waters",
        READ,
        note="(b)(3), volume over one tide cycle as a share of the water in one tidal excursion",
    )


def _epa_existing() -> Iterator[Criterion]:
    existing = _Document("US EPA", "40 CFR 125.94(c)", 2014, "United States")
    facilities = "existing facilities of 2 MGD and more"
    quoted = "seen as mirrored by a state rule; clause numbers from memory"
    yield existing.limit(
        "epa-existing-design-through-slot",
        SLOT_HALF_FOOT,
        facilities,
        MEMORY,
        note=f"option (2), design; {quoted}",
    )
    yield existing.limit(
        "epa-existing-actual-through-slot",
        SLOT_HALF_FOOT,
        facilities,
        MEMORY,
        note=f"option (3), actual, at the minimum source level; {quoted}",
    )
    state = _Document("Wisconsin", "administrative code NR 111.12(1)(a)", None, "Wisconsin")
    for what, note in (("design", "2, under all conditions"), ("actual", "3, from monitored flow")):
        yield state.limit(
            f"wisconsin-{what}-through-slot", SLOT_HALF_FOOT, "existing facilities", READ, note=note
        )
    old = _Document("US EPA", "40 CFR 125.94(a)(1)(ii)", 2004, "United States")
    yield old.limit("epa-2004-through-slot", SLOT_HALF_FOOT, "existing facilities", READ, note=REPLACED)
    wire = _Document("US EPA", "40 CFR 125.99(a)(1)", 2004, "United States")
    yield wire.limit(
        "epa-2004-wedge-wire-through-slot",
        SLOT_HALF_FOOT,
        "submerged cylindrical wedge-wire screens at river sites with counter-currents",
        READ,
        note=REPLACED,
    )


def _nmfs_southwest() -> Iterator[Criterion]:
    approach = Quantity.MAX_APPROACH
    pumps = _Document(
        "NMFS Southwest Region", "juvenile fish screen criteria for pump intakes", None, "US West Coast"
    )
    fry = "pump intakes where fry below 60 mm fork length may be present"
    area = "given as area = flow / limit; a higher limit if only larger juveniles are present"
    yield pumps.limit(
        "nmfs-sw-pump-active-approach", (approach, "0.4", "ft/s"), f"{fry}, active cleaning", READ, note=area
    )
    yield pumps.limit(
        "nmfs-sw-pump-passive-approach", (approach, "0.2", "ft/s"), f"{fry}, passive", READ, note=area
    )
    gravity = _Document(
        "NMFS Southwest Region", "fish screening criteria for anadromous salmonids", 1997, "US West Coast"
    )
    for what, limit, fish in (
        ("fry-river", "0.33", "fry, rivers"),
        ("fry-canal", "0.40", "fry, canals"),
        ("fingerling", "0.80", "fingerlings of 60 mm and more"),
    ):
        yield gravity.limit(
            f"nmfs-1997-{what}-approach", (approach, limit, "ft/s"), f"gravity screens, {fish}", MEMORY
        )


def _nmfs_west_coast() -> Iterator[Criterion]:
    manual = _Document(
        "NMFS Northwest Region",
        "anadromous salmonid passage facility design",
        2011,
        "US West Coast",
    )
    salmonids = "juvenile salmonids"
    excerpt = "an excerpt was read that names the limit; that it supposes active cleaning is from memory"
    yield manual.limit(
        "nmfs-west-active-approach",
        (Quantity.MAX_APPROACH, "0.40", "ft/s"),
        f"{salmonids}, active cleaning",
        READ,
        note=excerpt,
    )
    yield manual.limit(
        "nmfs-west-passive-approach", (Quantity.MAX_APPROACH, "0.20", "ft/s"), f"{salmonids}, passive", MEMORY
    )
    rest = (
        ("sweeping-ratio", Quantity.MIN_SWEEPING_RATIO, "1", "1", "sweeping must exceed approach"),
        ("sweeping", Quantity.MIN_SWEEPING, "0.8", "ft/s", "aim; it should not fall along the screen"),
        ("exposure", Quantity.MAX_EXPOSURE_TIME, "60", "s", "to a bypass"),
        ("uniformity", Quantity.MAX_NONUNIFORMITY, "10", "%", "nearly uniform; usual reading"),
    )
    for what, quantity, limit, unit, note in rest:
        yield manual.limit(f"nmfs-west-{what}", (quantity, limit, unit), salmonids, MEMORY, note=note)
    openings = (
        ("fry-woven-opening", Quantity.MAX_OPENING, "3/32", "in", "fry, woven or perforated", QUOTED),
        ("fry-wire-opening", Quantity.MAX_OPENING, "0.0689", "in", "fry, profile wire", QUOTED),
        (
            "fry-open-area",
            Quantity.MIN_OPEN_FRACTION,
            "27",
            "%",
            "fry",
            "a range of 27 to 50 % was read elsewhere",
        ),
        ("fingerling-opening", Quantity.MAX_OPENING, "1/4", "in", "fingerlings", ""),
        ("fingerling-open-area", Quantity.MIN_OPEN_FRACTION, "40", "%", "fingerlings", ""),
    )
    for what, quantity, limit, unit, fish, note in openings:
        yield manual.limit(f"nmfs-{what}", (quantity, limit, unit), fish, MEMORY, note=note)


def _california() -> Iterator[Criterion]:
    code = _Document(
        "California Department of Fish and Game",
        "fish screening criteria, 14 CCR exhibit D",
        2000,
        "California",
    )
    approach = Quantity.MAX_APPROACH
    rivers = "rivers, screens cleaned continuously"
    yield code.limit(
        "cdfg-river-approach", (approach, "0.33", "ft/s"), rivers, READ, note="area at minimum stage"
    )
    yield code.limit("cdfg-smelt-approach", (approach, "0.2", "ft/s"), "where delta smelt are present", READ)
    yield code.limit(
        "cdfg-open-area",
        (Quantity.MIN_OPEN_FRACTION, "40", "%"),
        "all screens",
        READ,
        note="a smaller open area calls for a larger screen",
    )
    yield code.limit(
        "cdfg-canal-approach", (approach, "0.40", "ft/s"), "canals, cleaned continuously", MEMORY
    )
    yield code.limit(
        "cdfg-uncleaned-approach",
        (approach, "0.0825", "ft/s"),
        "rivers, not cleaned continuously",
        MEMORY,
        note="a quarter of the limit for cleaned screens",
    )
    yield code.limit("cdfg-river-sweeping-ratio", (Quantity.MIN_SWEEPING_RATIO, "2", "1"), "rivers", MEMORY)


def _alaska() -> Iterator[Criterion]:
    guide = _Document(
        "Alaska Department of Fish and Game", "screening of water withdrawals in fish habitat", None, "Alaska"
    )
    withdrawals = "water withdrawals"
    yield guide.limit(
        "adfg-approach",
        (Quantity.MAX_APPROACH, "0.5", "ft/s"),
        withdrawals,
        READ,
        note="at the interface of screen and water",
    )
    yield guide.limit("adfg-opening", (Quantity.MAX_OPENING, "0.25", "in"), withdrawals, READ)
    yield guide.limit(
        "adfg-sensitive-opening",
        (Quantity.MAX_OPENING, "0.10", "in"),
        f"{withdrawals}, sensitive stages",
        READ,
    )


def _canada() -> Iterator[Criterion]:
    guide = _Document(
        "Fisheries and Oceans Canada", "freshwater intake end-of-pipe fish screen guideline", 1995, "Canada"
    )
    scope = "freshwater intakes up to 125 L/s, fish of 25 mm fork length and more"
    rows = (
        ("scope", (Quantity.MAX_DISCHARGE, "125", "L/s"), READ, "the guideline applies up to this flow"),
        ("subcarangiform-approach", (Quantity.MAX_APPROACH, "0.11", "m/s"), MEMORY, QUOTED),
        ("anguilliform-approach", (Quantity.MAX_APPROACH, "0.038", "m/s"), MEMORY, QUOTED),
        ("opening", (Quantity.MAX_OPENING, "2.54", "mm"), MEMORY, ""),
        ("clearance", (Quantity.MIN_CLEARANCE, "300", "mm"), MEMORY, QUOTED),
    )
    for what, limited, confidence, note in rows:
        yield guide.limit(f"dfo-1995-{what}", limited, scope, confidence, note=note)


def _elsewhere() -> Iterator[Criterion]:
    plenty = _Document("Bay of Plenty Regional Council", "regional plan", None, "New Zealand, Bay of Plenty")
    taking = "permitted taking of water"
    yield plenty.limit("bay-of-plenty-through-slot", (Quantity.MAX_THROUGH_SLOT, "0.3", "m/s"), taking, READ)
    yield plenty.limit(
        "bay-of-plenty-tidal-opening",
        (Quantity.MAX_OPENING, "3", "mm"),
        f"{taking}, tidal",
        READ,
        note="mesh 3 by 30 mm",
    )
    yield plenty.limit(
        "bay-of-plenty-opening",
        (Quantity.MAX_OPENING, "5", "mm"),
        f"{taking}, elsewhere",
        READ,
        note="mesh 5 by 30 mm, or holes of 5 mm",
    )
    canterbury = _Document(
        "NIWA", "fish screening guidelines for Canterbury", 2007, "New Zealand, Canterbury"
    )
    for what, limited in (
        ("approach", (Quantity.MAX_APPROACH, "0.12", "m/s")),
        ("sweeping-ratio", (Quantity.MIN_SWEEPING_RATIO, "1", "1")),
        ("opening", (Quantity.MAX_OPENING, "3", "mm")),
    ):
        yield canterbury.limit(f"canterbury-{what}", limited, "water intakes", MEMORY)
    eels = _Document(
        "Parliament of the United Kingdom",
        "Eels (England and Wales) Regulations, SI 3344",
        2009,
        "England and Wales",
    )
    yield eels.limit(
        "eels-2009-unscreened-flow",
        (Quantity.MAX_DISCHARGE, "20", "m3/d"),
        "diversions that need no eel screen",
        READ,
        note="a screen is required above this flow in any 24 hours",
    )


CLEANED = {
    "nmfs-sw-pump-active-approach": Cleaned.ACTIVE,
    "nmfs-sw-pump-passive-approach": Cleaned.PASSIVE,
    "nmfs-west-active-approach": Cleaned.ACTIVE,
    "nmfs-west-passive-approach": Cleaned.PASSIVE,
    "cdfg-river-approach": Cleaned.ACTIVE,
    "cdfg-canal-approach": Cleaned.ACTIVE,
    "cdfg-uncleaned-approach": Cleaned.PASSIVE,
}
"""Limits that are for one way of cleaning only; every other is for both."""


CRITERIA: tuple[Criterion, ...] = tuple(
    replace(criterion, cleaned=CLEANED.get(criterion.id, Cleaned.ANY))
    for criterion in (
        *_epa_new(),
        *_epa_existing(),
        *_nmfs_southwest(),
        *_nmfs_west_coast(),
        *_california(),
        *_alaska(),
        *_canada(),
        *_elsewhere(),
    )
)
"""Every limit, in a fixed order."""


BY_ID = {criterion.id: criterion for criterion in CRITERIA}
"""Every limit by its id."""


def list_criteria(*, from_memory: bool = True) -> tuple[Criterion, ...]:
    """The catalogue, with or without the limits that are only remembered."""
    return tuple(criterion for criterion in CRITERIA if from_memory or criterion.confidence is READ)

"""Published rules for the least submergence of an inlet, each with its datum and how well it is known.

Rules whose very equation could not be confirmed are in NOT_LISTED.
"""

from collections.abc import Callable
from dataclasses import dataclass
from enum import StrEnum
from math import sqrt

from forebay.flow.errors import FlowError
from forebay.trade.submergence.inlet import UPRIGHT, Datum, Inlet, InletKind

FOOT = 0.3048
"""International foot [m], exact."""


class Standing(StrEnum):
    """How a rule or a threshold is known."""

    QUOTED = "quoted"
    FROM_MEMORY = "from-memory"


class Quantities(StrEnum):
    """What a rule needs beyond the inlet itself."""

    NOTHING = "nothing"
    CIRCULATION = "circulation"


@dataclass(frozen=True, slots=True)
class Demand:
    """What a rule is evaluated with: g [m/s2] and the circulation of the approach flow [m2/s], if known."""

    gravity: float
    circulation: float | None = None


Formula = Callable[[Inlet, Demand], float]


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule.

    id : permanent name;  formula : as published;  applies_to : kinds of inlet;  needs : beyond the inlet
    datum : what the submergence of an inlet that is not upright is measured down to; else the lip
    standing : `quoted` if read in texts that quote the publication, `from-memory` if nobody has read it
    """

    id: str
    formula: str
    datum: Datum
    applies_to: frozenset[InletKind]
    required: Formula
    source: str
    standing: Standing
    note: str = ""
    needs: Quantities = Quantities.NOTHING

    def datum_of(self, inlet: Inlet) -> Datum:
        """What the submergence of an inlet is measured down to."""
        return Datum.LIP if inlet.kind in UPRIGHT else self.datum


class UnknownRuleError(FlowError):
    """No submergence rule has this id; GET /v1/criteria lists them under `submergence_rules`."""

    code = "unknown-rule"
    title = "No such submergence rule"


def froude_of(inlet: Inlet, gravity: float) -> float:
    """V / sqrt(g D) with the inlet's diameter [-]."""
    return inlet.velocity / sqrt(gravity * inlet.diameter)


def _hydraulic_institute(inlet: Inlet, demand: Demand) -> float:
    """S = D (1 + 2.3 F) [m]."""
    return inlet.diameter * (1.0 + 2.3 * froude_of(inlet, demand.gravity))


def _gordon(coefficient: float) -> Formula:
    """S = C V sqrt(D) with C for feet: in SI the constant is C / sqrt(0.3048); D is the conduit's height."""

    def required(inlet: Inlet, _demand: Demand) -> float:
        return coefficient / sqrt(FOOT) * inlet.velocity * sqrt(inlet.height)

    return required


def _prosser(inlet: Inlet, _demand: Demand) -> float:
    """S = 1.5 D [m]."""
    return 1.5 * inlet.diameter


def _jain(inlet: Inlet, demand: Demand) -> float:
    """S from S/D = 5.6 (Gamma S / Q)^0.42 F^0.5, solved for S [m]."""
    number = abs(demand.circulation or 0.0) / inlet.discharge
    froude = froude_of(inlet, demand.gravity)
    return float((5.6 * inlet.diameter * number**0.42 * froude**0.5) ** (1.0 / 0.58))


ALL = frozenset(InletKind)
CONDUITS = ALL - {InletKind.BELL}

RULES: tuple[Rule, ...] = (
    Rule(
        "hydraulic-institute",
        "S = D (1 + 2.3 F), F = V / sqrt(g D)",
        Datum.CROWN,
        ALL,
        _hydraulic_institute,
        "ANSI/HI 9.8, rotodynamic pumps for pump intake design (1998, 2012, 2018)",
        Standing.QUOTED,
        "D is the outside diameter of the bell; over the crown of an inlet that is not upright, which asks "
        "for most water: the standard's figures decide. A slot counts by the circle of equal area.",
    ),
    Rule(
        "gordon-lateral",
        "S = C V sqrt(D), C = 0.4 in feet and seconds",
        Datum.CROWN,
        CONDUITS,
        _gordon(0.4),
        "Gordon 1970, Water Power 22, lateral approach",
        Standing.QUOTED,
        "D is the height of the conduit; from hydropower intakes that have shown no vortices",
    ),
    Rule(
        "gordon-symmetrical",
        "S = C V sqrt(D), C = 0.3 in feet and seconds",
        Datum.CROWN,
        CONDUITS,
        _gordon(0.3),
        "Gordon 1970, Water Power 22, symmetrical approach",
        Standing.FROM_MEMORY,
        "D is the height of the conduit",
    ),
    Rule(
        "prosser-floor",
        "S = 1.5 D",
        Datum.CENTRELINE,
        ALL,
        _prosser,
        "Prosser 1977, hydraulic design of pump sumps and intakes",
        Standing.QUOTED,
        "a floor under the other rules, not a rule of its own",
    ),
    Rule(
        "jain-raju-garde",
        "S / D = 5.6 (Gamma S / Q)^0.42 F^0.5",
        Datum.LIP,
        frozenset({InletKind.VERTICAL_PIPE}),
        _jain,
        "Jain, Ranga Raju and Garde 1978, Journal of the Hydraulics Division 104",
        Standing.FROM_MEMORY,
        "critical submergence, at which air is drawn; needs the circulation of the approach flow",
        Quantities.CIRCULATION,
    ),
)
"""Every rule, in a fixed order."""

RULE_BY_ID = {rule.id: rule for rule in RULES}

NOT_LISTED = {
    "Odgaard 1986, Journal of Hydraulic Engineering 112, 610": "its equation could not be confirmed",
    "Rindels and Gulliver 1983, St. Anthony Falls project report 224": (
        "a plot, not a formula; its abstract says that the approach flow dominates"
    ),
}
"""Publications from which no rule is listed, and why."""

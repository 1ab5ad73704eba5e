"""What is known of an inlet once it is checked."""

from dataclasses import dataclass

from forebay.flow.contour import ContourStatus
from forebay.trade.submergence.findings import Band, Finding
from forebay.trade.submergence.inlet import Datum, Inlet, Similarity
from forebay.trade.submergence.rules import Rule
from forebay.trade.submergence.scale import ScaleEffect
from forebay.trade.submergence.vortex import Vortex


@dataclass(frozen=True, slots=True)
class RuleCheck:
    """A rule beside an inlet: required and available submergence over the rule's datum [m].

    required, passed : None where the rule needs what is not known, which `reason` says
    """

    rule: Rule
    datum: Datum
    required: float | None
    available: float
    passed: bool | None
    reason: str = ""

    @property
    def margin(self) -> float | None:
        """Available less required submergence [m]."""
        return None if self.required is None else self.available - self.required


@dataclass(frozen=True, slots=True)
class Ring:
    """Circulation on a circle round an inlet [m2/s]; None where it leaves the water, which `status` says."""

    radius: float
    circulation: float | None
    status: ContourStatus


@dataclass(frozen=True, slots=True)
class InletCheck:
    """Everything about one inlet; circulation is None where none is known, vortex where there is none."""

    inlet: Inlet
    numbers: Similarity
    rules: tuple[RuleCheck, ...]
    effects: tuple[ScaleEffect, ...]
    rings: tuple[Ring, ...]
    circulation: float | None
    vortex: Vortex | None
    band: Band | None
    findings: tuple[Finding, ...]

    @property
    def governing(self) -> RuleCheck | None:
        """The rule with the least margin; None if none could be evaluated."""
        known = [check for check in self.rules if check.margin is not None]
        return min(known, key=lambda check: check.margin or 0.0, default=None)

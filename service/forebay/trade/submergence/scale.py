"""Scale effects: what a model of an inlet by Froude's law must not fall below."""

from dataclasses import dataclass

from forebay.trade.submergence.inlet import Similarity
from forebay.trade.submergence.rules import Standing


@dataclass(frozen=True, slots=True)
class Threshold:
    """Number above which an effect is negligible.

    quantity : field of Similarity;  exponent : the number in a model of scale L is that of the prototype
    over L to this power, by Froude's law: velocity as L^0.5, length as L
    """

    quantity: str
    limit: float
    exponent: float
    effect: str
    source: str
    standing: Standing


CHAPTER = "a chapter of a pump handbook"

THRESHOLDS: tuple[Threshold, ...] = (
    Threshold("reynolds", 3e4, 1.5, "viscosity at the inlet", CHAPTER, Standing.QUOTED),
    Threshold("reynolds", 7e4, 1.5, "viscosity, horizontal outlet of a sump", CHAPTER, Standing.QUOTED),
    Threshold("weber", 120.0, 2.0, "surface tension", CHAPTER, Standing.QUOTED),
    Threshold("reynolds", 3.2e4, 1.5, "viscosity", "Daggett and Keulegan 1974", Standing.FROM_MEMORY),
    Threshold("radial_reynolds", 3e4, 1.5, "viscosity", "Anwar 1966", Standing.FROM_MEMORY),
    Threshold("reynolds", 6e4, 1.5, "viscosity at the bell", "ANSI/HI 9.8, 1998", Standing.FROM_MEMORY),
    Threshold("weber", 240.0, 2.0, "surface tension", "ANSI/HI 9.8, 1998", Standing.FROM_MEMORY),
    Threshold("weber", 600.0, 2.0, "surface tension", "Padmanabhan and Hecker 1984", Standing.FROM_MEMORY),
    Threshold("weber", 720.0, 2.0, "surface tension", "Odgaard 1986", Standing.FROM_MEMORY),
)
"""Every threshold, in a fixed order."""


@dataclass(frozen=True, slots=True)
class ScaleEffect:
    """A threshold beside the prototype and beside a model of a scale; `largest_scale` still meets it [-]."""

    threshold: Threshold
    prototype: float
    model: float
    largest_scale: float

    @property
    def is_negligible(self) -> bool:
        """Whether the effect is negligible in the model."""
        return self.model > self.threshold.limit


def scale_effects(numbers: Similarity, scale: float, *, from_memory: bool) -> tuple[ScaleEffect, ...]:
    """Thresholds beside a model of `scale` (length in the prototype over length in the model, 1 for none)."""
    return tuple(
        _effect(threshold, float(getattr(numbers, threshold.quantity)), scale)
        for threshold in THRESHOLDS
        if from_memory or threshold.standing is not Standing.FROM_MEMORY
    )


def _effect(threshold: Threshold, prototype: float, scale: float) -> ScaleEffect:
    model = prototype / scale**threshold.exponent
    largest = (prototype / threshold.limit) ** (1.0 / threshold.exponent)
    return ScaleEffect(threshold, prototype, model, float(largest))

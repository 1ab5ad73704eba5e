"""Thresholds of warnings: where each is raised, and which kinds have one."""

import ast
import inspect
import math
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from enum import Enum
from textwrap import dedent

from forebay.trade.applicability.warning import ApplicabilityWarning, WarningKind

STEP = 1e-9
"""Distance of "just below" and "just above" from a threshold, over the threshold [-]."""

LEAST = math.ulp(0.0)
"""The same from a threshold of zero."""


class Raised(Enum):
    """Places about a threshold at which a warning is raised: below it, at it, above it."""

    ABOVE = (False, False, True)
    FROM = (False, True, True)
    BELOW = (True, False, False)
    UP_TO = (True, True, False)
    BESIDE = (True, False, True)
    ONLY_AT = (False, True, False)


@dataclass(frozen=True)
class Case:
    """A threshold of one kind of warning.

    at : what is varied, where value and limit are equal;  said : warnings of the kind for a value of it
    raised : on which side, the threshold itself included or not;  wording : of the source, which decides that
    limit, value : what the warning states there, relative to `slack`; None if it states none, and the value
        is the limit unless it is given
    rounded : no float gives equality, or none that could be known: the threshold lies between two neighbours
    """

    code: str
    at: float
    said: Callable[[float], Sequence[ApplicabilityWarning]]
    raised: Raised
    wording: str
    limit: float | None = None
    value: float | None = None
    rounded: bool = False
    slack: float = 1e-8

    def about(self) -> tuple[float, float, float]:
        """Just below, at and just above."""
        if self.at == 0.0:
            return -LEAST, 0.0, LEAST
        return self.at * (1.0 - STEP), self.at, self.at * (1.0 + STEP)

    def neighbours(self) -> tuple[float, float]:
        """The two floats next to each other between which it begins or ceases to be raised."""
        low, _, high = self.about()
        below = bool(self.said(low))
        while (middle := 0.5 * (low + high)) not in {low, high}:
            low, high = (middle, high) if bool(self.said(middle)) is below else (low, middle)
        return low, high


COMPARISON = re.compile(r"[<>]|\bzero\b|\bat (least|most)\b|\bup to\b|\bdown to\b")
"""What a threshold in words has where something is compared."""

ORDER = (ast.Lt, ast.LtE, ast.Gt, ast.GtE)


def has_threshold(kind: WarningKind, rule: Callable[..., object] | None = None) -> bool:
    """Whether a kind of warning compares something, by what it says or by what its rule does."""
    return bool(COMPARISON.search(kind.threshold)) or (rule is not None and compares(rule))


def compares(rule: Callable[..., object]) -> bool:
    """Whether a rule, or a function of its own module that it calls, orders two numbers."""
    tree = ast.parse(dedent(inspect.getsource(rule)))
    names = {node.id for node in ast.walk(tree) if isinstance(node, ast.Name)}
    module = inspect.getmodule(rule)
    called = [getattr(module, name, None) for name in names]
    own = [one for one in called if inspect.isfunction(one) and inspect.getmodule(one) is module]
    trees = [tree, *(ast.parse(dedent(inspect.getsource(one))) for one in own)]
    return any(
        isinstance(operator, ORDER)
        for part in trees
        for node in ast.walk(part)
        if isinstance(node, ast.Compare)
        for operator in node.ops
    )

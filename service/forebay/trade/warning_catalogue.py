"""Every kind of warning: of layouts, of spills, of screens, of inlets."""

from forebay.trade.applicability.mixing import SPILL_KINDS
from forebay.trade.applicability.review import CATALOGUE
from forebay.trade.applicability.warning import WarningKind
from forebay.trade.screens.notices import SCREEN_KINDS
from forebay.trade.submergence.notices import INLET_KINDS

WARNINGS: tuple[WarningKind, ...] = (*CATALOGUE, *SPILL_KINDS, *SCREEN_KINDS, *INLET_KINDS)
"""For GET /v1/warnings; codes are permanent."""

"""Trace where the water of intakes comes from."""

from dataclasses import dataclass

from forebay.flow.errors import UnknownNameError
from forebay.flow.layout import Layout, LineSink, Sink
from forebay.flow.model import compile_layout
from forebay.flow.withdrawal.analysis import withdraw
from forebay.flow.withdrawal.result import IntakeWithdrawal
from forebay.workflows.stagnation import search_stagnation


@dataclass(frozen=True, slots=True)
class Withdrawal:
    """Where the water of each intake comes from, in the order asked for."""

    intakes: tuple[IntakeWithdrawal, ...]


def trace_withdrawal(layout: Layout, intakes: tuple[str, ...] | None = None) -> Withdrawal:
    """Shares, widths, dividing streamlines and zones of intakes.

    Parameters
    ----------
    layout : the site
    intakes : names of sinks and line sinks; default: all of them

    Returns
    -------
    Withdrawal; an intake whose answer rests on an incomplete search says so in its status.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    UnknownNameError : a name is not that of a sink or line sink; `path` is ("intakes", index)
    """
    present = tuple(e.name for e in layout.elements if isinstance(e, Sink | LineSink))
    wanted = present if intakes is None else intakes
    for index, name in enumerate(wanted):
        if name not in present:
            raise UnknownNameError("No sink or line sink has this name.", ("intakes", index))
    model = compile_layout(layout)
    if not wanted:
        return Withdrawal(())
    return Withdrawal(withdraw(model, search_stagnation(layout), wanted))

"""Limits of the catalogue by their ids; those that nobody has read only where the client insists."""

from forebay.flow.errors import FlowError
from forebay.trade.criteria import Confidence
from forebay.trade.criteria_catalogue import BY_ID
from forebay.trade.screens.rules import Limit, limit_of


class UnknownCriterionError(FlowError):
    """No criterion of the catalogue has this id; GET /v1/criteria lists them."""

    code = "unknown-criterion"
    title = "No such criterion in the catalogue"


class CriterionFromMemoryError(FlowError):
    """The limit or rule is listed from memory, and the request does not set allow_from_memory.

    Nobody has read it in its document: look it up, state it as a limit of your own, or insist.
    """

    code = "criterion-from-memory"
    title = "The criterion is listed from memory only"


def listed_limit(name: str, index: int, *, allow_from_memory: bool) -> Limit:
    """Limit of a record by its id, asked for at `index` among the criteria.

    Raises UnknownCriterionError or CriterionFromMemoryError, path ("criteria", index).
    """
    criterion = BY_ID.get(name)
    if criterion is None:
        raise UnknownCriterionError("GET /v1/criteria lists every id", ("criteria", index))
    if criterion.confidence is Confidence.FROM_MEMORY and not allow_from_memory:
        raise CriterionFromMemoryError(
            "this limit has not been read in its document; set allow_from_memory to use it all the same",
            ("criteria", index),
        )
    return limit_of(criterion, index)

"""Two general linters find nothing in the contract, not even a hint, under their published rules."""

import json

import pytest

from support.node import CLIENTS, needs_node, run_node
from support.tree import ROOT

pytestmark = needs_node

CONTRACT = ROOT / "openapi" / "openapi.json"

LINTERS = {
    "redocly": ("lint", "--config", "redocly.yaml", "--format=stylish"),
    "spectral": ("lint", "--ruleset", "spectral.yaml", "--fail-severity=hint"),
}
"""Arguments of each linter, before the document."""


def lint(linter, document):
    """Report of a linter that finds nothing; an AssertionError holds that of one that does."""
    return run_node(linter, *LINTERS[linter], str(document), folder=CLIENTS)


@pytest.mark.parametrize("linter", LINTERS)
def test_contract_is_clean(linter):
    assert "problem" not in lint(linter, CONTRACT)


FAULTS = {
    "without-licence": lambda document: document["info"].pop("license"),
    "example-that-does-not-fit": lambda document: document["components"]["schemas"]["Pier"]["properties"][
        "radius"
    ].update(examples=["wide"]),
    "two-operations-of-one-id": lambda document: document["paths"]["/livez"]["get"].update(
        operationId="isReady"
    ),
}
"""What a linter has to see, and how it is put into the contract."""


@pytest.mark.parametrize(
    ("linter", "fault"),
    [
        ("redocly", "without-licence"),
        ("redocly", "two-operations-of-one-id"),
        ("spectral", "example-that-does-not-fit"),
        ("spectral", "two-operations-of-one-id"),
    ],
)
def test_linter_can_complain(linter, fault, tmp_path):
    contract = json.loads(CONTRACT.read_text(encoding="utf-8"))
    FAULTS[fault](contract)
    document = tmp_path / "openapi.json"
    document.write_text(json.dumps(contract), encoding="utf-8")
    with pytest.raises(AssertionError):
        lint(linter, document)
